import type { Vector3 } from "../../src/geometry/vector.js";
import { bedEnd, bedFloor, bedRail } from "./dimensions.js";
import { roundedBox } from "./rounded-box.js";
import type { Surface } from "./surface.js";

const thickness = 0.07;
/** How far the bottom edge is sunk into the end of the bed floor, and the upper edge stays below the rails. */
const sunk = 0.025;
const below = 0.006;
const length = bedRail - below - (bedFloor - sunk);
/** |y| at the bottom edge and at the upper edge: 20 mm into the side walls, which lean outward. */
const sideAtBottom = 0.775;
const sideAtTop = 0.846;
const radius = 0.018;
const spacing = 0.1;

/** The lowered tailgate begins so far ahead of the end of the bed, and lies so far below the floor. */
const held = 0.04;
const drop = 0.008;

/** Upright: closes the bed. */
export function tailgateUp(): Surface {
  const bottom = bedFloor - sunk;
  const x: [number, number] = [bedEnd - 0.012 - thickness, bedEnd - 0.012];
  return roundedBox({ x, side: 1, z: [bottom, bottom + length], radius, spacing }, ([px, y, z]) => [px, y * sideAt(z - bottom), z]);
}

/** Let down: the same slab lying behind the bed, level with its floor. */
export function tailgateDown(): Surface {
  const from = bedEnd - held;
  const top = bedFloor - drop;
  const box = {
    x: [from, from + length] as [number, number],
    side: 1,
    z: [top - thickness, top] as [number, number],
    radius,
    spacing,
  };
  return roundedBox(box, ([x, y, z]): Vector3 => [x, y * sideAt(x - from), z]);
}

function sideAt(along: number): number {
  return sideAtBottom + (along / length) * (sideAtTop - sideAtBottom);
}
