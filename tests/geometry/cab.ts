import type { Vector3 } from "../../src/geometry/vector.js";
import { box, joined, type Triangles } from "./shapes.js";

/**
 * A closed box of a sheet without thickness, whose face x = max has a round hole of `sides` corners on a circle of this diameter. The
 * face is cut into triangles between hole and rim, all edges shared, so the hole is the only open border.
 */
export function cabWithHole(min: Vector3, max: Vector3, diameter: number, [y, z]: [number, number], sides = 48): Triangles {
  const whole = box(min, max);
  const walls: Triangles = [];
  for (let at = 0; at < whole.length; at += 9)
    if (![0, 3, 6].every((k) => whole[at + k] === max[0])) walls.push(...whole.slice(at, at + 9));
  return joined(walls, plateWithHole(max[0], [min[1], min[2]], [max[1], max[2]], diameter, [y, z], sides));
}

/** The rectangle from `low` to `high` in the plane x, facing +x, with a round hole in it. */
export function plateWithHole(
  x: number,
  low: [number, number],
  high: [number, number],
  diameter: number,
  [y, z]: [number, number],
  sides: number,
): Triangles {
  const corners: [number, number][] = [
    [high[0], low[1]],
    [high[0], high[1]],
    [low[0], high[1]],
    [low[0], low[1]],
  ];
  const rim = Array.from({ length: sides }, (_, k): [number, number] => {
    // The first corner of the rim looks at the first corner of the plate.
    const angle = -Math.PI / 4 + (2 * Math.PI * k) / sides;
    return [y + (diameter / 2) * Math.cos(angle), z + (diameter / 2) * Math.sin(angle)];
  });
  const result: Triangles = [];
  const add = (...points: [number, number][]): void => {
    for (const [py, pz] of points) result.push(x, py, pz);
  };
  const quarter = sides / 4;
  for (let corner = 0; corner < 4; corner++) {
    const here = corners[corner];
    const next = corners[(corner + 1) % 4];
    const first = corner * quarter;
    // Half of the quarter's edges look at one corner, half at the other.
    for (let k = 0; k < quarter; k++) add(rim[first + k], k < quarter / 2 ? here : next, rim[(first + k + 1) % sides]);
    add(rim[first + Math.ceil(quarter / 2)], here, next);
  }
  return result;
}
