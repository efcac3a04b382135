/** Park and Miller's minimal standard generator (CACM 1988): the same sequence everywhere. */
export class MinimalStandard {
  private state: number;

  constructor(seed: number) {
    this.state = seed;
  }

  /** The next state, 1 .. 2147483646. */
  next(): number {
    this.state = (this.state * 16807) % 2147483647;
    return this.state;
  }

  /** 0 < u < 1 */
  uniform(): number {
    return this.next() / 2147483647;
  }

  /** Mean 0, variance 1, by the rule of twelve. */
  roughNormal(): number {
    let sum = -6;
    for (let draw = 0; draw < 12; draw += 1) sum += this.uniform();
    return sum;
  }

  /** Mean 0, variance 1, by Box and Muller. */
  normal(): number {
    return Math.sqrt(-2 * Math.log(this.uniform())) * Math.cos(2 * Math.PI * this.uniform());
  }
}

/** A stationary series y_i = phi y_{i-1} + z_i with unit innovations: marginal variance 1 / (1 - phi^2). */
export function autoregressive(random: MinimalStandard, rows: number, phi: number): Float64Array {
  const values = new Float64Array(rows);
  let value = random.normal() / Math.sqrt(1 - phi * phi);
  for (let row = 0; row < rows; row += 1) {
    values[row] = value;
    value = phi * value + random.normal();
  }
  return values;
}
