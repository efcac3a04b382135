import { dot, type Vector3 } from "../vector.js";
import type { VehicleAxes, WheelFit } from "./wheels.js";

/** The number of the wheel that a vertex (at `v` in `vertices`) of a part belongs to; -1 where the part is no wheel's. */
export type WheelOwner = (part: number, vertices: Float32Array, v: number) => number;

/** A part may hold several wheels: its vertices belong to the one whose centre is nearest, seen from above. */
export function wheelOwner(wheels: WheelFit[], partsOf: ReadonlySet<number>[], { rearward, right }: VehicleAxes): WheelOwner {
  const candidates: number[][] = [];
  partsOf.forEach((parts, wheel) => {
    for (const part of parts) {
      if (candidates[part] === undefined) candidates[part] = [];
      candidates[part].push(wheel);
    }
  });
  const places = wheels.map(({ centre }) => ({ along: dot(centre, rearward), across: dot(centre, right) }));
  const coordinate = (vertices: Float32Array, v: number, axis: Vector3): number =>
    vertices[v] * axis[0] + vertices[v + 1] * axis[1] + vertices[v + 2] * axis[2];
  return (part, vertices, v) => {
    const own = candidates[part];
    if (own === undefined) return -1;
    if (own.length === 1) return own[0];
    const along = coordinate(vertices, v, rearward);
    const across = coordinate(vertices, v, right);
    let best = -1;
    let least = Infinity;
    for (const wheel of own) {
      const distance = (places[wheel].along - along) ** 2 + (places[wheel].across - across) ** 2;
      if (distance < least) {
        least = distance;
        best = wheel;
      }
    }
    return best;
  };
}
