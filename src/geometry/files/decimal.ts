/** 10^0 to 10^22: all powers of ten that a double holds exactly. */
const EXACT = 22;
/** Largest decimal exponent handled without the general parser; beyond it a float32 is 0 or infinite anyway. */
const WIDEST = 60;
const POWERS = Float64Array.from({ length: WIDEST + 1 }, (_, k) => Number(`1e${k}`));

/**
 * Reads decimal numbers out of bytes without making text of them. `scan` returns the float32 nearest to what `Number()` makes of
 * the same word, for every word; NaN where the word is no decimal number (`nan` and `inf` are none).
 *
 * Up to 15 digits and powers of ten up to 22, mantissa and power are exact doubles, so one multiplication or division rounds
 * correctly (Clinger, 1990, the easy case). Longer mantissas are within a few units of 2^-53 and are accepted when the whole
 * interval rounds to one float32; the rare rest goes through `Number()`.
 */
export class DecimalScanner {
  /** Where the last word ended: index of the first byte after it. */
  end = 0;

  /** Reads the word that begins at `from`. A byte of white space (32 or below) must follow it in `bytes`. */
  scan(bytes: Uint8Array, from: number): number {
    let at = from;
    let c = bytes[at];
    const negative = c === 45;
    if (negative || c === 43) c = bytes[++at];
    // Up to nine significant digits fit into a small integer: nearly every number in a surface file.
    let mantissa = 0;
    let significant = 0;
    const first = at;
    while (c >= 48 && c <= 57) {
      if (significant === 9) return this.long(bytes, from);
      mantissa = (mantissa * 10 + c - 48) | 0;
      if (mantissa !== 0) significant++;
      c = bytes[++at];
    }
    let digits = at - first;
    let exponent = 0;
    if (c === 46) {
      const point = at;
      c = bytes[++at];
      while (c >= 48 && c <= 57) {
        if (significant === 9) return this.long(bytes, from);
        mantissa = (mantissa * 10 + c - 48) | 0;
        if (mantissa !== 0) significant++;
        c = bytes[++at];
      }
      exponent = point + 1 - at;
      digits -= exponent;
    }
    if (digits === 0) return this.invalid(bytes, at);
    if (c > 32) {
      if (c !== 101 && c !== 69) return this.invalid(bytes, at);
      c = bytes[++at];
      const down = c === 45;
      if (down || c === 43) c = bytes[++at];
      const start = at;
      let power = 0;
      while (c >= 48 && c <= 57) {
        if (power < 100_000) power = power * 10 + (c - 48);
        c = bytes[++at];
      }
      if (at === start || c > 32) return this.invalid(bytes, at);
      exponent += down ? -power : power;
    }
    this.end = at;
    if (exponent < -EXACT || exponent > EXACT) return mantissa === 0 ? (negative ? -0 : 0) : this.long(bytes, from);
    const value = exponent < 0 ? mantissa / POWERS[-exponent] : mantissa * POWERS[exponent];
    return Math.fround(negative ? -value : value);
  }

  private invalid(bytes: Uint8Array, from: number): number {
    let at = from;
    while (bytes[at] > 32) at++;
    this.end = at;
    return Number.NaN;
  }

  /** The same for more digits and wider exponents. */
  private long(bytes: Uint8Array, from: number): number {
    let at = from;
    let c = bytes[at];
    const negative = c === 45;
    if (negative || c === 43) c = bytes[++at];
    let mantissa = 0;
    let significant = 0;
    let exponent = 0;
    for (let point = false; (c >= 48 && c <= 57) || (c === 46 && !point); c = bytes[++at]) {
      if (c === 46) {
        point = true;
        continue;
      }
      // Digits beyond the 18th only move the point.
      if (significant === 18) exponent += point ? 0 : 1;
      else {
        mantissa = mantissa * 10 + (c - 48);
        if (mantissa !== 0) significant++;
        if (point) exponent--;
      }
    }
    if (c === 101 || c === 69) {
      c = bytes[++at];
      const down = c === 45;
      if (down || c === 43) c = bytes[++at];
      const start = at;
      let power = 0;
      for (; c >= 48 && c <= 57; c = bytes[++at]) if (power < 100_000) power = power * 10 + (c - 48);
      if (at === start) return this.invalid(bytes, at);
      exponent += down ? -power : power;
    }
    if (c > 32) return this.invalid(bytes, at);
    this.end = at;
    if (significant <= 15 && exponent >= -EXACT && exponent <= EXACT) {
      const value = exponent < 0 ? mantissa / POWERS[-exponent] : mantissa * POWERS[exponent];
      return Math.fround(negative ? -value : value);
    }
    if (exponent >= -WIDEST && exponent <= WIDEST) {
      const value = exponent < 0 ? mantissa / POWERS[-exponent] : mantissa * POWERS[exponent];
      // Digits beyond the 18th, the rounding of the mantissa, of the power and of the operation: below 1e-15 together.
      const low = Math.fround(value * (1 - 1e-15));
      if (low === Math.fround(value * (1 + 1e-15))) return negative ? -low : low;
    }
    return Math.fround(Number(Buffer.from(bytes.buffer, bytes.byteOffset + from, at - from).toString("latin1")));
  }
}
