import type { Vector3 } from "../../src/geometry/vector.js";
import { archedLine } from "./arched-line.js";
import { archRadius, frontAxle, rearAxle } from "./dimensions.js";
import { fillHalfEnd } from "./end-cap.js";
import type { Point } from "./flat-region.js";
import { type Corner, type Pieces, roundedLine } from "./rounded-line.js";
import { plateau, throughPoints } from "./shapes.js";
import { sillHeight } from "./shell-lines.js";
import { Surface } from "./surface.js";

const front = -2.34;
const rear = 2.56;
const sections = 62;

/** How far the top reaches into the shell above: the two overlap and leave no gap. */
const overlap = 0.03;

/** Bottom, side and top of a section, and the roundings between. */
const pieces: Pieces = { straight: [5, 2, 3], turn: [2, 2] };
const rounding = 0.035;
const endRounding = 0.03;
const endSpacing = 0.08;

const bottomHeight: Point[] = [
  [front, 0.315],
  [-2, 0.27],
  [-1.4, 0.26],
  [1.2, 0.26],
  [rear, 0.37],
];

/** |y| of the sides away from the wheels, and how much narrower the floor is between them. */
const widthAlong: Point[] = [
  [front, 0.7],
  [-2, 0.78],
  [0, 0.82],
  [2, 0.79],
  [rear, 0.75],
];
const betweenWheels = 0.575;
/** Narrow until beyond the ends of the arch, so that side and arch meet squarely: a wedge between them would pinch the mesh. */
const halfWheelBay = archRadius + 0.035;

/**
 * The floor pan: a closed body with a smooth bottom that lies below the shell, fills the wheel arches between the wheels, and rises
 * a little towards both ends.
 */
export function underbody(): Surface {
  const stations = Array.from({ length: sections + 1 }, (_, k) => front + (k / sections) * (rear - front));
  const top = archedLine(stations, archRadius + overlap, (x) => sillHeight(x) + overlap);
  const rings = stations.map((x, k) => section(x, top[k]));
  const part = new Surface();
  const first = roundedOff(rings[0], -endRounding);
  const last = roundedOff(rings[rings.length - 1], endRounding);
  part.grid([first, ...rings, last]);
  fillHalfEnd(part, first, endSpacing, "forward", () => first[0][0]);
  fillHalfEnd(part, last, endSpacing, "rearward", () => last[0][0]);
  part.addMirrorImage();
  return part;
}

function section(x: number, top: { x: number; z: number }): Vector3[] {
  const bottom = throughPoints(x, bottomHeight);
  const corners: Corner[] = [
    { at: [x, 0, bottom], reach: 0 },
    { at: [x, halfWidth(x), bottom], reach: rounding },
    { at: [top.x, halfWidth(top.x), top.z], reach: rounding },
    { at: [top.x, 0, top.z], reach: 0 },
  ];
  return roundedLine(corners, pieces) as Vector3[];
}

function halfWidth(x: number): number {
  const wide = throughPoints(x, widthAlong);
  const bay = Math.max(...[frontAxle, rearAxle].map((axle) => plateau(x, axle - halfWheelBay, axle + halfWheelBay, 0.15)));
  return wide + bay * (betweenWheels - wide);
}

/** The last ring, drawn in by as much as it stands out, gives a chamfered end. */
function roundedOff(ring: Vector3[], by: number): Vector3[] {
  const zs = ring.map((point) => point[2]);
  const middle = (Math.min(...zs) + Math.max(...zs)) / 2;
  const half = Math.max(...zs) - middle;
  const side = Math.max(...ring.map((point) => point[1]));
  const inset = Math.abs(by);
  return ring.map(([x, y, z]) => [x + by, y * (1 - inset / side), middle + (z - middle) * (1 - inset / half)]);
}
