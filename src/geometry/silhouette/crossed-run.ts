/** Area, compensated (Neumaier, 1974), and length of border. */
export class AreaSums {
  border = 0;
  private sum = 0;
  private rest = 0;

  add(area: number, border: number): void {
    const sum = this.sum + area;
    this.rest += Math.abs(this.sum) >= Math.abs(area) ? this.sum - sum + area : area - sum + this.sum;
    this.sum = sum;
    this.border += border;
  }

  get area(): number {
    return this.sum + this.rest;
  }
}

/** More pieces than these are parted by halving the height before pairs are looked at. */
const LONG = 24;
const DEEPEST = 48;

/**
 * Sweeps a run of pieces that change places with each other between the bottom and the top of a slab: between the heights of their
 * crossings their order is that of the middle. Heights are shares of the slab from 0 to 1.
 */
export class CrossedRun {
  crossings = 0;
  /** Positions of the run's pieces at bottom and top. */
  private low = new Float64Array(16);
  private high = new Float64Array(16);
  private piece = new Int32Array(16);
  /** Their order, from left to right; parts of it are sorted anew for each height. */
  private order = new Int32Array(16);
  private shares = new Float64Array(64);
  private height = 0;

  constructor(
    private readonly weight: Int32Array,
    private readonly slant: Float64Array,
    private readonly sums: AreaSums,
  ) {}

  /**
   * Pieces `active[from, to)`, in the order of the bottom, with positions `low` and `high`. Adds their part of area and border, sorts
   * them (and `high`) for the top, and returns the winding to their right, given that to their left.
   */
  sweep(
    active: Int32Array,
    low: Float64Array,
    high: Float64Array,
    from: number,
    to: number,
    height: number,
    winding: number,
  ): number {
    const count = to - from;
    this.makeRoom(count);
    let after = winding;
    let most = 0;
    for (let i = 0; i < count; i++) {
      const piece = active[from + i];
      this.piece[i] = piece;
      this.low[i] = low[from + i];
      this.high[i] = high[from + i];
      this.order[i] = i;
      after += this.weight[piece];
      most += Math.abs(this.weight[piece]);
    }
    // Where the area is covered more often than these pieces could take away, their order does not matter.
    if (Math.abs(winding) <= most) {
      this.height = height;
      this.part(0, count, 0, 1, winding, 0);
    }
    for (let i = 0; i < count; i++) this.order[i] = i;
    this.sort(0, count, 1);
    for (let i = 0; i < count; i++) {
      active[from + i] = this.piece[this.order[i]];
      high[from + i] = this.high[this.order[i]];
    }
    return after;
  }

  private makeRoom(count: number): void {
    if (count <= this.low.length) return;
    const size = 2 * count;
    this.low = new Float64Array(size);
    this.high = new Float64Array(size);
    this.piece = new Int32Array(size);
    this.order = new Int32Array(size);
  }

  private at(i: number, share: number): number {
    return this.low[i] + (this.high[i] - this.low[i]) * share;
  }

  /** Sorts `order[from, to)` by position at a height; by insertion, since the order is nearly right or the run short. */
  private sort(from: number, to: number, share: number): void {
    const { order } = this;
    for (let k = from + 1; k < to; k++) {
      const i = order[k];
      const x = this.at(i, share);
      let place = k;
      while (place > from && this.at(order[place - 1], share) > x) {
        order[place] = order[place - 1];
        place--;
      }
      order[place] = i;
    }
  }

  /** The stretch between two heights of the pieces `order[from, to)`, which are in the order of the lower one and stay together. */
  private part(from: number, to: number, begin: number, end: number, winding: number, depth: number): void {
    if (to - from > LONG && depth < DEEPEST) {
      const half = (begin + end) / 2;
      const kept = this.order.slice(from, to);
      this.parts(from, to, begin, half, winding, depth + 1);
      this.order.set(kept, from);
      this.sort(from, to, half);
      this.parts(from, to, half, end, winding, depth + 1);
      return;
    }
    const stops = this.stops(from, to, begin, end);
    const { order, shares, weight, slant, sums } = this;
    for (let stop = 0; stop + 1 < stops; stop++) {
      const step = (shares[stop + 1] - shares[stop]) * this.height;
      if (step === 0) continue;
      const middle = (shares[stop] + shares[stop + 1]) / 2;
      this.sort(from, to, middle);
      let now = winding;
      for (let k = from; k < to; k++) {
        const before = now;
        const piece = this.piece[order[k]];
        now += weight[piece];
        if ((before === 0) !== (now === 0))
          sums.add((before === 0 ? -step : step) * this.at(order[k], middle), slant[piece] * step);
      }
    }
  }

  /** Fills `shares` with the ends of the stretch and the heights of all crossings between them, ascending; returns how many. */
  private stops(from: number, to: number, begin: number, end: number): number {
    let count = 0;
    const note = (share: number): void => {
      if (count === this.shares.length) {
        const larger = new Float64Array(2 * count);
        larger.set(this.shares);
        this.shares = larger;
      }
      this.shares[count++] = share;
    };
    note(begin);
    for (let k = from; k < to; k++) {
      const i = this.order[k];
      for (let m = k + 1; m < to; m++) {
        const j = this.order[m];
        const after = this.at(j, end) - this.at(i, end);
        if (after >= 0) continue;
        const before = Math.max(0, this.at(j, begin) - this.at(i, begin));
        this.crossings++;
        const share = begin + (end - begin) * (before / (before - after));
        if (share > begin && share < end) note(share);
      }
    }
    note(end);
    this.shares.subarray(0, count).sort();
    return count;
  }

  /** Takes pieces in the order of `begin` apart into the shortest runs that change places among themselves only, and sweeps each. */
  private parts(from: number, to: number, begin: number, end: number, winding: number, depth: number): void {
    const least = new Float64Array(to - from + 1);
    least[to - from] = Infinity;
    for (let k = to - 1; k >= from; k--) least[k - from] = Math.min(least[k - from + 1], this.at(this.order[k], end));
    let now = winding;
    let greatest = -Infinity;
    let first = from;
    for (let k = from; k < to; k++) {
      greatest = Math.max(greatest, this.at(this.order[k], end));
      if (greatest > least[k - from + 1]) continue;
      let after = now;
      for (let m = first; m <= k; m++) after += this.weight[this.piece[this.order[m]]];
      this.part(first, k + 1, begin, end, now, depth);
      now = after;
      first = k + 1;
    }
  }
}
