/** A corner of a polygon line that is to be rounded. */
export interface Corner {
  /** Coordinates; any number of them, the same for all corners of a line. The first three are x, y, z in metres. */
  at: number[];
  /** Metres from the corner to where its rounding begins, shortened where the neighbours are near. */
  reach: number;
}

/** How many pieces the line is cut into: one entry of `straight` per side, one of `turn` per inner corner. */
export interface Pieces {
  straight: number[];
  /** 0 keeps a corner sharp. */
  turn: number[];
}

/** The largest share of a side that one of its two corners may take. */
const LARGEST_SHARE = 0.4;

/**
 * Points along a polygon line whose inner corners are rounded by conics: where both sides reach equally far, a conic with the
 * weight cos(turn / 2) is the circular arc (Lee, "The rational Bezier representation for conics", 1987). The number of points depends
 * on `pieces` alone, so lines of the same make can be joined to a grid.
 */
export function roundedLine(corners: Corner[], pieces: Pieces): number[][] {
  if (pieces.straight.length !== corners.length - 1 || pieces.turn.length !== corners.length - 2) {
    throw new Error(`A line of ${corners.length} corners needs ${corners.length - 1} sides and ${corners.length - 2} turns.`);
  }
  const points: number[][] = [corners[0].at];
  let from = corners[0].at;
  for (let k = 1; k < corners.length; k++) {
    const last = k === corners.length - 1;
    const corner = corners[k];
    const turn = last ? 0 : pieces.turn[k - 1];
    const begin = turn === 0 ? corner.at : towards(corner, corners[k - 1]);
    addStraight(points, from, begin, pieces.straight[k - 1]);
    from = begin;
    if (last || turn === 0) continue;
    const end = towards(corner, corners[k + 1]);
    addTurn(points, begin, corner.at, end, turn);
    from = end;
  }
  return points;
}

export function mix(a: number[], b: number[], share: number): number[] {
  return a.map((value, k) => value + share * (b[k] - value));
}

export function distance(a: number[], b: number[]): number {
  return Math.hypot(a[0] - b[0], a[1] - b[1], a[2] - b[2]);
}

function towards(corner: Corner, neighbour: Corner): number[] {
  const length = distance(corner.at, neighbour.at);
  return mix(corner.at, neighbour.at, Math.min(corner.reach / length, LARGEST_SHARE));
}

function addStraight(points: number[][], from: number[], to: number[], pieces: number): void {
  for (let k = 1; k <= pieces; k++) points.push(mix(from, to, k / pieces));
}

function addTurn(points: number[][], begin: number[], corner: number[], end: number[], pieces: number): void {
  const weight = cosineOfHalfTurn(begin, corner, end);
  for (let k = 1; k <= pieces; k++) {
    const t = k / pieces;
    const a = (1 - t) * (1 - t);
    const b = 2 * t * (1 - t) * weight;
    const c = t * t;
    points.push(begin.map((value, axis) => (a * value + b * corner[axis] + c * end[axis]) / (a + b + c)));
  }
}

function cosineOfHalfTurn(begin: number[], corner: number[], end: number[]): number {
  let dot = 0;
  for (let axis = 0; axis < 3; axis++) dot += (corner[axis] - begin[axis]) * (end[axis] - corner[axis]);
  const cosine = dot / (distance(begin, corner) * distance(corner, end));
  return Math.sqrt(Math.max(0, (1 + Math.min(1, cosine)) / 2));
}
