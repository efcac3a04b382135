/**
 * Sums kept side by side whose values do not depend on the order of their terms, bit for bit, and are as good as exact.
 *
 * Each term is cut at fixed binary places that follow from the greatest term and the number of terms. The pieces of one level are
 * multiples of one power of two and so few bits wide that adding them never rounds (Demmel and Nguyen, "Fast reproducible
 * floating-point summation", ARITH 21, 2013: the pre-rounded sum, here with three levels). What lies below the third place is
 * dropped; for 2^23 terms that is, all together, less than 2^-58 of the greatest term.
 */
export class SteadySums {
  private readonly shifter1: number;
  private readonly shifter2: number;
  private readonly shifter3: number;
  private readonly pieces: Float64Array;

  /**
   * @param sums how many sums there are
   * @param greatest no term's magnitude is above this
   * @param terms all sums together have no more terms than this
   */
  constructor(sums: number, greatest: number, terms: number) {
    const room = Math.ceil(Math.log2(Math.max(terms, 1))) + 2;
    const first = (greatest > 0 ? Math.ceil(Math.log2(greatest)) + 1 : -500) + room;
    // Adding 1.5 · 2^e to a smaller number and taking it away again rounds that number to a multiple of 2^(e - 52).
    this.shifter1 = 1.5 * 2 ** first;
    this.shifter2 = 1.5 * 2 ** (first - 52 + room);
    this.shifter3 = 1.5 * 2 ** (first - 104 + 2 * room);
    this.pieces = new Float64Array(3 * sums);
  }

  add(sum: number, term: number): void {
    const { pieces } = this;
    const at = 3 * sum;
    const first = term + this.shifter1 - this.shifter1;
    const rest = term - first;
    const second = rest + this.shifter2 - this.shifter2;
    pieces[at] += first;
    pieces[at + 1] += second;
    pieces[at + 2] += rest - second + this.shifter3 - this.shifter3;
  }

  value(sum: number): number {
    const at = 3 * sum;
    return this.pieces[at] + (this.pieces[at + 1] + this.pieces[at + 2]);
  }

  /** What `value` would give had all terms of these sums been added to one. */
  total(sums: number[]): number {
    let first = 0;
    let second = 0;
    let third = 0;
    for (const sum of sums) {
      first += this.pieces[3 * sum];
      second += this.pieces[3 * sum + 1];
      third += this.pieces[3 * sum + 2];
    }
    return first + (second + third);
  }
}
