import type { SurfaceMesh } from "../surface-mesh.js";
import { type Box, dot, type Vector3 } from "../vector.js";
import { axlesOf } from "./axles.js";
import { type ContactPatch, contactPatches } from "./contact-patch.js";
import { type WheelOwner, wheelOwner } from "./wheel-owner.js";
import type { VehicleAxes, WheelFit } from "./wheels.js";

/** How one wheel stands. Mesh unit and axes. */
export interface StandingWheel {
  /** "front-left", "rear-right", "axle-2-left"; without a side for a wheel in the middle or alone on its axle. */
  position: string;
  centre: Vector3;
  radius: number;
  /** Numbers of the parts that turn with it (tyre, rim, disc). */
  parts: number[];
  /** Height of the axle above the ground. */
  axleHeight: number;
  /** From the ground to the wheel's lowest point: 0 where it stands on it. */
  gap: number;
  /** Null where nothing of it is as low as `contactDepth` above the ground. */
  contact: ContactPatch | null;
}

/** How a body stands on the ground, which is at its lowest point. Mesh unit and axes. */
export interface Stance {
  /** Coordinate along up. */
  ground: number;
  wheels: StandingWheel[];
  /** Between the middles of the outermost wheels of the first and the last axle; null where an axle has but one. */
  track: { front: number | null; rear: number | null };
  /** From the first axle to the foremost point, from the last one to the rearmost; null without axles. */
  overhangs: { front: number; rear: number } | null;
  /** The lowest point that is no wheel's; null where there is nothing but wheels. */
  clearance: { height: number; place: Vector3; part: number } | null;
}

/** Metres: what lies no higher above the ground counts as touching it. */
export const contactDepth = 0.001;

/** Wheels whose middle is nearer to the mid-plane than this share of their radius have no side. */
const MIDDLE = 0.25;

/**
 * Which wheel is where, how it stands, and the vehicle's dimensions that follow from its wheels.
 *
 * @param wheels one entry per wheel and part, as `joinWheels` gives them: entries of one wheel share their centre
 * @param middle coordinate of the mid-plane along right
 * @param half the body is one half, so a track is twice the distance to the mid-plane
 * @param depth `contactDepth` in the mesh's unit
 * @param wheelParts parts that are wheels, also those in which nothing round was found: they do not count for the clearance
 */
export function stanceOf(
  mesh: SurfaceMesh,
  bounds: Box,
  wheels: WheelFit[],
  axes: VehicleAxes,
  { middle, half, depth, wheelParts }: { middle: number; half: boolean; depth: number; wheelParts: number[] },
): Stance {
  const { rearward, right, up } = axes;
  const ground = lowEnd(bounds, up);
  const one = wheels.filter((wheel, k) => wheels.findIndex(({ centre }) => centre === wheel.centre) === k);
  const partsOf = one.map(({ centre }) => new Set(wheels.filter((wheel) => wheel.centre === centre).map(({ part }) => part)));
  const owner = wheelOwner(one, partsOf, axes);
  const contacts = contactPatches(mesh, one.length, owner, axes, ground, depth);
  const axles = axlesOf(one, rearward);
  const lowest = lowestOf(mesh, up, one.length, owner, new Set(wheelParts));
  const axleOf = (wheel: WheelFit): number => nearestAxle(dot(wheel.centre, rearward), axles);
  const standing = one.map((wheel, k): StandingWheel => {
    const side = dot(wheel.centre, right) - middle;
    return {
      position: positionName(axleOf(wheel), axles.length, Math.abs(side) < MIDDLE * wheel.radius ? 0 : Math.sign(side)),
      centre: wheel.centre,
      radius: wheel.radius,
      parts: [...partsOf[k]].sort((a, b) => a - b),
      axleHeight: dot(wheel.centre, up) - ground,
      gap: lowest.wheels[k] - ground,
      contact: contacts[k],
    };
  });
  const track = (axle: number): number | null => {
    const sides = one.filter((wheel) => axleOf(wheel) === axle).map((wheel) => dot(wheel.centre, right) - middle);
    if (half) return sides.length > 0 ? 2 * Math.max(...sides.map(Math.abs)) : null;
    return sides.length > 1 ? Math.max(...sides) - Math.min(...sides) : null;
  };
  return {
    ground,
    wheels: standing,
    track: { front: axles.length > 0 ? track(0) : null, rear: axles.length > 1 ? track(axles.length - 1) : null },
    overhangs:
      axles.length > 1
        ? {
            front: axles[0].position - lowEnd(bounds, rearward),
            rear: 0 - lowEnd(bounds, rearward.map((value) => 0 - value) as Vector3) - axles[axles.length - 1].position,
          }
        : null,
    clearance: lowest.body === null ? null : { ...lowest.body, height: lowest.body.height - ground },
  };
}

/** Least coordinate of a box along a signed axis. */
function lowEnd({ min, max }: Box, axis: Vector3): number {
  return axis.reduce((sum, value, k) => sum + (value > 0 ? value * min[k] : value < 0 ? value * max[k] : 0), 0);
}

function nearestAxle(position: number, axles: { position: number }[]): number {
  const distances = axles.map((axle) => Math.abs(axle.position - position));
  return distances.indexOf(Math.min(...distances));
}

function positionName(axle: number, axles: number, side: number): string {
  const line = axle === 0 ? "front" : axle === axles - 1 ? "rear" : `axle-${axle + 1}`;
  return side === 0 ? line : `${line}-${side > 0 ? "right" : "left"}`;
}

/** Lowest coordinates along up: of each wheel, and of all that is no wheel's, with its place and part. */
function lowestOf(
  { vertices, corners, partOf }: SurfaceMesh,
  up: Vector3,
  wheels: number,
  owner: WheelOwner,
  wheelParts: ReadonlySet<number>,
): { wheels: number[]; body: { height: number; place: Vector3; part: number } | null } {
  const lowest: number[] = new Array(wheels).fill(Infinity);
  const named = new Uint8Array(1 << 16);
  for (const part of wheelParts) named[part] = 1;
  let body = Infinity;
  let bodyVertex = -1;
  let bodyPart = -1;
  for (let t = 0, h = 0; t < partOf.length; t++)
    for (const end = h + 3; h < end; h++) {
      const v = 3 * corners[h];
      const height = vertices[v] * up[0] + vertices[v + 1] * up[1] + vertices[v + 2] * up[2];
      const wheel = owner(partOf[t], vertices, v);
      if (wheel >= 0) {
        if (height < lowest[wheel]) lowest[wheel] = height;
        continue;
      }
      if (named[partOf[t]] === 1 || height > body || (height === body && bodyVertex >= 0 && !before(vertices, v, bodyVertex)))
        continue;
      body = height;
      bodyVertex = v;
      bodyPart = partOf[t];
    }
  return {
    wheels: lowest,
    body:
      bodyVertex < 0
        ? null
        : { height: body, place: [vertices[bodyVertex], vertices[bodyVertex + 1], vertices[bodyVertex + 2]], part: bodyPart },
  };
}

/** So that of many points equally low the same one is named, whatever the order of the triangles. */
function before(vertices: Float32Array, a: number, b: number): boolean {
  for (let k = 0; k < 3; k++) if (vertices[a + k] !== vertices[b + k]) return vertices[a + k] < vertices[b + k];
  return false;
}
