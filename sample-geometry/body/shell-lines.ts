import type { Vector3 } from "../../src/geometry/vector.js";
import { archedLine } from "./arched-line.js";
import { archRadius, bedEnd, bedFloor, bedRail } from "./dimensions.js";
import type { Point } from "./flat-region.js";
import { roundedLine } from "./rounded-line.js";
import { throughPoints } from "./shapes.js";

/**
 * The lines that run along the body from the nose to the tail and carry its cross-sections. A line has the same number of points as
 * all others; point i of each belongs to section i. From the bottom up on the right-hand side: floor, sill, flank, shoulder (which
 * becomes the outer edge of the bed rail), waist (foot of the side glass, inner edge of the rail), edge (of the bonnet, of the roof,
 * of the bed floor), and the middle line of bonnet, windscreen, roof, rear wall and bed floor.
 */
export interface LinePoint {
  at: Vector3;
  /** Metres: how far the rounding of the cross-section reaches from here. */
  round: number;
}

export interface ShellLines {
  lines: LinePoint[][];
  /** Index of the section where the hood ends and the cab begins, and where the cab ends and the bed begins. */
  cabStart: number;
  bedStart: number;
}

/** x, y, z; reach of the rounding along the line; reach of the rounding across. */
type Knot = [x: number, y: number, z: number, along: number, across: number];

// Knots: behind the nose, middle of the bonnet, foot of the windscreen, its top, middle of the roof, rear edge of the roof, foot of the
// rear wall, end of the bed. Between the last but one pair the outer lines go on rearward while the inner ones go down the wall.
const straight = [9, 9, 9, 5, 5, 9, 29];
const turn = [5, 5, 5, 3, 6, 5];
const cabKnot = 2;
const bedKnot = 6;

const middle: Knot[] = [
  [-2.32, 0, 1.05, 0, 0.3],
  [-1.85, 0, 1.135, 0.15, 0.3],
  [-1.06, 0, 1.195, 0.1, 0.3],
  [-0.34, 0, 1.755, 0.17, 0.3],
  [0.22, 0, 1.815, 0.15, 0.3],
  [0.75, 0, 1.785, 0.06, 0.3],
  [0.86, 0, bedFloor, 0.05, 0.3],
  [bedEnd, 0, bedFloor, 0, 0.3],
];

const edge: Knot[] = [
  [-2.28, 0.5, 1.025, 0, 0.06],
  [-1.85, 0.56, 1.105, 0.15, 0.06],
  [-0.98, 0.68, 1.165, 0.1, 0.09],
  [-0.27, 0.615, 1.695, 0.15, 0.12],
  [0.22, 0.635, 1.75, 0.15, 0.12],
  [0.71, 0.62, 1.72, 0.06, 0.1],
  [0.87, 0.755, bedFloor, 0.05, 0.05],
  [bedEnd, 0.755, bedFloor, 0, 0.05],
];

const waist: Knot[] = [
  [-2.2, 0.75, 0.99, 0, 0.05],
  [-1.83, 0.8, 1.065, 0.15, 0.05],
  [-0.93, 0.865, 1.12, 0.12, 0.05],
  [-0.26, 0.875, 1.16, 0.15, 0.03],
  [0.22, 0.88, 1.19, 0.12, 0.03],
  [0.58, 0.88, 1.22, 0.1, 0.03],
  [0.97, 0.825, bedRail, 0.12, 0.03],
  [bedEnd, 0.825, bedRail, 0, 0.03],
];

const shoulder: Knot[] = [
  [-2.13, 0.885, 0.92, 0, 0.07],
  [-1.8, 0.92, 1.01, 0.12, 0.06],
  [-0.94, 0.945, 1.07, 0.12, 0.05],
  [-0.25, 0.95, 1.11, 0.15, 0.03],
  [0.22, 0.95, 1.15, 0.12, 0.03],
  [0.56, 0.95, 1.19, 0.1, 0.03],
  [1.0, 0.945, bedRail - 0.012, 0.12, 0.03],
  [bedEnd, 0.925, bedRail - 0.012, 0, 0.03],
];

const sillHeights: Point[] = [
  [-2.4, 0.4],
  [-1.9, 0.35],
  [0, 0.345],
  [1.9, 0.37],
  [bedEnd, 0.46],
];

/** z of the body's lower edge beside the wheel arches. */
export function sillHeight(x: number): number {
  return throughPoints(x, sillHeights);
}

const sillSide: Point[] = [
  [-2.15, 0.89],
  [-2.05, 0.915],
  [-1.1, 0.915],
  [0, 0.905],
  [1.1, 0.915],
  [2.1, 0.92],
  [bedEnd, 0.885],
];

/** How far the lip of a wheel arch stands out at its top. */
const archFlare = 0.035;

const flankSide: Point[] = [
  [-2.15, 0.92],
  [-1.95, 0.95],
  [-1.4, 0.96],
  [0, 0.955],
  [1.6, 0.96],
  [2.2, 0.95],
  [bedEnd, 0.925],
];

const flankHeight: Point[] = [
  [-2.15, 0.74],
  [-2, 0.82],
  [-1.6, 0.93],
  [-1.1, 0.9],
  [-0.4, 0.88],
  [0.5, 0.93],
  [1.6, 0.97],
  [bedEnd, 0.92],
];

export function shellLines(): ShellLines {
  const upper = [shoulder, waist, edge, middle].map(lineThrough);
  const sill = sillBelow(upper[0]);
  const floor = sill.map(({ at, round }): LinePoint => ({ at: [at[0], 0, at[2]], round }));
  const flank = sill.map(({ at }, i): LinePoint => {
    const above = upper[0][i].at[0];
    return { at: [(at[0] + above) / 2, throughPoints(above, flankSide), throughPoints(above, flankHeight)], round: 0.4 };
  });
  return { lines: [floor, sill, flank, ...upper], cabStart: endOfTurn(cabKnot), bedStart: endOfTurn(bedKnot) };
}

function lineThrough(knots: Knot[]): LinePoint[] {
  const corners = knots.map(([x, y, z, along, across]) => ({ at: [x, y, z, across], reach: along }));
  return roundedLine(corners, { straight, turn }).map(([x, y, z, round]) => ({ at: [x, y, z], round }));
}

/** Index of the point where the rounding of a knot ends. */
function endOfTurn(knot: number): number {
  let index = 0;
  for (let k = 0; k < knot; k++) index += straight[k] + turn[k];
  return index;
}

/** The sill runs below the shoulder, except that it climbs over the wheels along the arches. */
function sillBelow(shoulderLine: LinePoint[]): LinePoint[] {
  const xs = shoulderLine.map((point) => point.at[0]);
  return archedLine(xs, archRadius, sillHeight).map(({ x, z, rise }) => ({
    at: [x, throughPoints(x, sillSide) + archFlare * rise, z],
    round: rise > 0 ? 0.03 : 0.05,
  }));
}
