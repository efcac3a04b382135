import type { Pieces } from "./sweep.js";

/** Pieces that a level line meets on average, above which the plane is cut into strips. */
const FEW = 48;
/** Pieces that a level line should meet within one strip. */
const WANTED = 16;
const MOST_STRIPS = 1 << 14;

/** What is swept one after the other: strips of the plane between vertical lines, each with a closed chain of its own. */
export interface Strips {
  count: number;
  pieces: (strip: number) => Pieces;
  /** Length of those stretches of the lines between strips that lie in the area and are not its border, for one side of them. */
  seams: number;
}

/**
 * Cuts a closed chain of pieces at vertical lines into strips in which a level line meets few pieces, because the time of a sweep
 * grows with their number. Winding numbers inside a strip stay what they are when everything outside is pushed onto the strip's
 * sides; what is pushed there adds up to vertical pieces between the heights at which the chain crosses the side, each with the sum of
 * the crossings below it. Both strips at a line take these heights from one computation, so that nothing is lost between them.
 *
 * The lines lie so that each strip has about as many ends of pieces. Null where the chain is simple enough to be swept at once.
 */
export function stripsOf(chain: Pieces): Strips | null {
  const lines = linesOf(chain);
  if (lines.length === 0) return null;
  const count = lines.length + 1;
  const { start, members } = assigned(chain, lines);
  const sides = Array.from(lines, (x, line) => sideOf(chain, members.subarray(start[line], start[line + 1]), x));
  return {
    count,
    pieces: (strip) =>
      clipped(
        chain,
        members.subarray(start[strip], start[strip + 1]),
        strip === 0 ? null : { x: lines[strip - 1], side: sides[strip - 1] },
        strip === count - 1 ? null : { x: lines[strip], side: sides[strip] },
      ),
    seams: sides.reduce((sum, { heights, weights }) => {
      let length = 0;
      for (let k = 0; k < weights.length; k++) if (weights[k] !== 0) length += heights[k + 1] - heights[k];
      return sum + length;
    }, 0),
  };
}

/** Ascending; none where a level line meets few pieces as it is. */
function linesOf({ ax, ay, bx, by }: Pieces): Float64Array {
  const none = new Float64Array(0);
  let low = Infinity;
  let high = -Infinity;
  let climb = 0;
  for (let k = 0; k < ay.length; k++) {
    low = Math.min(low, ay[k], by[k]);
    high = Math.max(high, ay[k], by[k]);
    climb += Math.abs(by[k] - ay[k]);
  }
  const met = climb / (high - low);
  if (!(met > FEW)) return none;
  const strips = Math.min(MOST_STRIPS, Math.ceil(met / WANTED), Math.ceil(ax.length / WANTED));
  const ends = new Float64Array(2 * ax.length);
  ends.set(ax);
  ends.set(bx, ax.length);
  ends.sort();
  const lines: number[] = [];
  for (let k = 1; k < strips; k++) {
    const line = ends[Math.floor((k / strips) * ends.length)];
    if (line > ends[0] && line !== lines.at(-1)) lines.push(line);
  }
  return Float64Array.from(lines);
}

/** Strip of a point: the first whose right line is beyond it, so that a line belongs to the strip on its right. */
function stripOf(lines: Float64Array, x: number): number {
  let low = 0;
  let high = lines.length;
  while (low < high) {
    const middle = (low + high) >>> 1;
    if (lines[middle] <= x) low = middle + 1;
    else high = middle;
  }
  return low;
}

/** Which pieces reach into which strip: `members[start[s], start[s + 1])`. */
function assigned({ ax, bx }: Pieces, lines: Float64Array): { start: Uint32Array; members: Uint32Array } {
  const first = new Uint16Array(ax.length);
  const last = new Uint16Array(ax.length);
  const start = new Uint32Array(lines.length + 2);
  for (let k = 0; k < ax.length; k++) {
    const a = stripOf(lines, ax[k]);
    const b = stripOf(lines, bx[k]);
    first[k] = Math.min(a, b);
    last[k] = Math.max(a, b);
    for (let strip = first[k]; strip <= last[k]; strip++) start[strip + 1]++;
  }
  for (let strip = 0; strip <= lines.length; strip++) start[strip + 1] += start[strip];
  const members = new Uint32Array(start[lines.length + 1]);
  const next = start.slice();
  for (let k = 0; k < ax.length; k++) for (let strip = first[k]; strip <= last[k]; strip++) members[next[strip]++] = k;
  return { start, members };
}

/** Height at which a piece crosses a line; the piece's own end where that lies on the line. */
function heightAt({ ax, ay, bx, by }: Pieces, piece: number, x: number): number {
  if (ax[piece] === x) return ay[piece];
  if (bx[piece] === x) return by[piece];
  const share = (x - ax[piece]) / (bx[piece] - ax[piece]);
  return ay[piece] + share * (by[piece] - ay[piece]);
}

/** The vertical pieces that stand for all that lies to the left of a line: from `heights[k]` to `heights[k + 1]`, `weights[k]` times. */
interface Side {
  heights: Float64Array;
  weights: Int32Array;
}

/** `members`: the pieces of the strip to the left of the line, among which are all that cross it. */
function sideOf(chain: Pieces, members: Uint32Array, x: number): Side {
  const crossing = members.filter((piece) => chain.ax[piece] < x !== chain.bx[piece] < x);
  const found = Array.from(crossing, (piece) => ({
    height: heightAt(chain, piece, x),
    // Where so much of the chain leaves to the right, the side must take over so much.
    weight: chain.ax[piece] < x ? chain.weight[piece] : -chain.weight[piece],
  })).sort((p, q) => p.height - q.height);
  const heights = Float64Array.from(found, ({ height }) => height);
  const weights = new Int32Array(Math.max(0, found.length - 1));
  let sum = 0;
  for (let k = 0; k < weights.length; k++) {
    sum += found[k].weight;
    weights[k] = sum;
  }
  return { heights, weights };
}

interface Line {
  x: number;
  side: Side;
}

function clipped(chain: Pieces, members: Uint32Array, left: Line | null, right: Line | null): Pieces {
  const size = members.length + (left?.side.weights.length ?? 0) + (right?.side.weights.length ?? 0);
  const strip: Pieces = {
    ax: new Float64Array(size),
    ay: new Float64Array(size),
    bx: new Float64Array(size),
    by: new Float64Array(size),
    weight: new Int32Array(size),
  };
  let n = 0;
  const add = (ax: number, ay: number, bx: number, by: number, weight: number): void => {
    strip.ax[n] = ax;
    strip.ay[n] = ay;
    strip.bx[n] = bx;
    strip.by[n] = by;
    strip.weight[n++] = weight;
  };
  for (const piece of members) {
    const end = (x: number, y: number): [number, number] => {
      if (left !== null && x < left.x) return [left.x, heightAt(chain, piece, left.x)];
      if (right !== null && x >= right.x) return [right.x, heightAt(chain, piece, right.x)];
      return [x, y];
    };
    const [ax, ay] = end(chain.ax[piece], chain.ay[piece]);
    const [bx, by] = end(chain.bx[piece], chain.by[piece]);
    add(ax, ay, bx, by, chain.weight[piece]);
  }
  // A side closes the chain to its left as it is, and the chain to its right when it runs the other way.
  for (const [line, sense] of [
    [left, -1],
    [right, 1],
  ] as const) {
    if (line === null) continue;
    const { heights, weights } = line.side;
    for (let k = 0; k < weights.length; k++) add(line.x, heights[k], line.x, heights[k + 1], sense * weights[k]);
  }
  return strip;
}
