import { AreaSums, CrossedRun } from "./crossed-run.js";
import { stripsOf } from "./strips.js";

/** Directed straight pieces in a plane, each with the number of times it counts. All arrays have one entry per piece. */
export interface Pieces {
  ax: Float64Array;
  ay: Float64Array;
  bx: Float64Array;
  by: Float64Array;
  weight: Int32Array;
}

export interface Swept {
  /** Area of the points about which the pieces wind. */
  area: number;
  /** Length of the border of that area. */
  border: number;
  /** Crossings that had to be looked at: those in the middle of the area cannot matter. */
  crossings: number;
}

/**
 * Area of the plane about which a chain of directed pieces winds a number of times other than zero. The pieces, each taken
 * `weight` times, must form closed loops; they may cross, touch and lie upon each other.
 *
 * Plane sweep (Shamos and Hoey, 1976; Bentley and Ottmann, 1979) in slabs between successive heights of end points. The pieces of
 * a slab are kept in their order from left to right; where that order differs between the slab's bottom and top, the run of pieces
 * that change places is swept alone between their crossings. Within a slab, areas are trapezoids, exact but for rounding. Nothing
 * is decided by comparing computed crossings with each other, so that rounding can only move area by what it moves a border, never
 * upset the sweep. Chains in which a level line meets many pieces are swept strip by strip (see `stripsOf`).
 */
export function sweep(pieces: Pieces): Swept {
  const strips = stripsOf(pieces);
  if (strips === null) return new Sweep(pieces).result();
  const sums = new AreaSums();
  let crossings = 0;
  for (let strip = 0; strip < strips.count; strip++) {
    const part = new Sweep(strips.pieces(strip)).result();
    sums.add(part.area, part.border);
    crossings += part.crossings;
  }
  return { area: sums.area, border: sums.border - 2 * strips.seams, crossings };
}

class Sweep {
  private readonly ax: Float64Array;
  private readonly ay: Float64Array;
  private readonly bx: Float64Array;
  private readonly by: Float64Array;
  private readonly slope: Float64Array;
  /** Length of a piece per height. */
  private readonly slant: Float64Array;
  private readonly weight: Int32Array;
  /** Distinct heights of end points, ascending. */
  private readonly heights: Float64Array;
  /** Pieces by the height they begin at, and where each height's begin. */
  private readonly beginning: Uint32Array;
  private readonly first: Uint32Array;

  /** Pieces of the slab from left to right, with their positions at its bottom and top. */
  private active: Int32Array;
  private low: Float64Array;
  private high: Float64Array;
  private count = 0;
  /** Scratch of a slab: the least position at the top from a piece on. */
  private least = new Float64Array(0);

  private readonly sums = new AreaSums();
  private readonly run: CrossedRun;

  constructor(pieces: Pieces) {
    const total = pieces.ax.length;
    let rising = 0;
    for (let k = 0; k < total; k++) if (pieces.ay[k] !== pieces.by[k] && pieces.weight[k] !== 0) rising++;
    this.ax = new Float64Array(rising);
    this.ay = new Float64Array(rising);
    this.bx = new Float64Array(rising);
    this.by = new Float64Array(rising);
    this.slope = new Float64Array(rising);
    this.slant = new Float64Array(rising);
    this.weight = new Int32Array(rising);
    let n = 0;
    for (let k = 0; k < total; k++) {
      const up = pieces.by[k] - pieces.ay[k];
      if (up === 0 || pieces.weight[k] === 0) continue;
      this.ax[n] = up > 0 ? pieces.ax[k] : pieces.bx[k];
      this.ay[n] = up > 0 ? pieces.ay[k] : pieces.by[k];
      this.bx[n] = up > 0 ? pieces.bx[k] : pieces.ax[k];
      this.by[n] = up > 0 ? pieces.by[k] : pieces.ay[k];
      this.weight[n] = up > 0 ? -pieces.weight[k] : pieces.weight[k];
      const slope = (this.bx[n] - this.ax[n]) / (this.by[n] - this.ay[n]);
      this.slope[n] = slope;
      this.slant[n] = Math.sqrt(1 + slope * slope);
      n++;
    }
    const ends = new Float64Array(2 * rising);
    ends.set(this.ay);
    ends.set(this.by, rising);
    ends.sort();
    let distinct = 0;
    for (let k = 0; k < ends.length; k++) if (k === 0 || ends[k] !== ends[k - 1]) ends[distinct++] = ends[k];
    this.heights = ends.subarray(0, distinct);
    this.first = new Uint32Array(distinct + 1);
    const heightOf = new Uint32Array(rising);
    for (let k = 0; k < rising; k++) this.first[1 + (heightOf[k] = indexOf(this.heights, this.ay[k]))]++;
    for (let k = 0; k < distinct; k++) this.first[k + 1] += this.first[k];
    this.beginning = new Uint32Array(rising);
    const next = this.first.slice();
    for (let k = 0; k < rising; k++) this.beginning[next[heightOf[k]]++] = k;
    this.active = new Int32Array(64);
    this.low = new Float64Array(64);
    this.high = new Float64Array(64);
    this.run = new CrossedRun(this.weight, this.slant, this.sums);
  }

  result(): Swept {
    for (let k = 0; k + 1 < this.heights.length; k++) {
      this.leave(this.heights[k]);
      this.enter(this.first[k], this.first[k + 1]);
      this.slab(this.heights[k], this.heights[k + 1]);
    }
    return { area: this.sums.area, border: this.sums.border, crossings: this.run.crossings };
  }

  /** Drops the pieces that end at `height`; the others begin the next slab where they ended the last. */
  private leave(height: number): void {
    const { active, low, high, by } = this;
    let kept = 0;
    for (let i = 0; i < this.count; i++) {
      const piece = active[i];
      if (by[piece] === height) continue;
      active[kept] = piece;
      low[kept++] = high[i];
    }
    this.count = kept;
  }

  /** Puts the pieces `beginning[from, to)` in their places. */
  private enter(from: number, to: number): void {
    const more = to - from;
    if (more === 0) return;
    const { ax, slope } = this;
    const fresh = this.beginning.subarray(from, to);
    if (more > 1) fresh.sort((p, q) => ax[p] - ax[q] || slope[p] - slope[q]);
    this.makeRoom(this.count + more);
    const { active, low } = this;
    // Merges from the right, in place.
    let i = this.count - 1;
    let place = this.count + more - 1;
    for (let j = more - 1; j >= 0; place--) {
      const piece = fresh[j];
      if (i >= 0 && (low[i] > ax[piece] || (low[i] === ax[piece] && slope[active[i]] > slope[piece]))) {
        active[place] = active[i];
        low[place] = low[i--];
      } else {
        active[place] = piece;
        low[place] = ax[piece];
        j--;
      }
    }
    this.count += more;
  }

  private makeRoom(room: number): void {
    if (room <= this.active.length) return;
    const size = Math.max(room, 2 * this.active.length);
    const active = new Int32Array(size);
    active.set(this.active);
    const low = new Float64Array(size);
    low.set(this.low);
    this.active = active;
    this.low = low;
    this.high = new Float64Array(size);
  }

  private slab(bottom: number, top: number): void {
    const { active, low, high, weight } = this;
    const height = top - bottom;
    let ordered = true;
    let winding = 0;
    let area = 0;
    let border = 0;
    let previous = -Infinity;
    for (let i = 0; i < this.count; i++) {
      const piece = active[i];
      const x = this.by[piece] === top ? this.bx[piece] : this.ax[piece] + (top - this.ay[piece]) * this.slope[piece];
      high[i] = x;
      if (x < previous) ordered = false;
      previous = x;
      const before = winding;
      winding += weight[piece];
      if (before === 0) {
        if (winding !== 0) {
          area -= low[i] + x;
          border += this.slant[piece];
        }
      } else if (winding === 0) {
        area += low[i] + x;
        border += this.slant[piece];
      }
    }
    if (ordered) this.sums.add((area * height) / 2, border * height);
    else this.crossedSlab(height);
  }

  /** A slab in which pieces change places. Leaves `active` and `high` in the order of the top. */
  private crossedSlab(height: number): void {
    const { active, low, high, weight, slant } = this;
    const { count } = this;
    if (this.least.length < count + 1) this.least = new Float64Array(2 * count + 1);
    const { least } = this;
    least[count] = Infinity;
    for (let i = count - 1; i >= 0; i--) least[i] = Math.min(least[i + 1], high[i]);
    let winding = 0;
    let greatest = -Infinity;
    let from = 0;
    for (let i = 0; i < count; i++) {
      greatest = Math.max(greatest, high[i]);
      if (greatest > least[i + 1]) continue;
      // Nothing in from..i changes places with anything outside.
      if (i > from) {
        winding = this.run.sweep(active, low, high, from, i + 1, height, winding);
      } else {
        const piece = active[i];
        const before = winding;
        winding += weight[piece];
        if ((before === 0) !== (winding === 0))
          this.sums.add(((before === 0 ? -1 : 1) * (low[i] + high[i]) * height) / 2, slant[piece] * height);
      }
      from = i + 1;
    }
  }
}

/** Index of `value` in ascending `values`, which hold it. */
function indexOf(values: Float64Array, value: number): number {
  let low = 0;
  let high = values.length - 1;
  while (low < high) {
    const middle = (low + high) >>> 1;
    if (values[middle] < value) low = middle + 1;
    else high = middle;
  }
  return low;
}
