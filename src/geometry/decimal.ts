/** 10^0 to 10^22: all powers of ten that a double holds exactly. */
const EXACT_POWERS = Float64Array.from({ length: 23 }, (_, k) => Number(`1e${k}`));
/** Largest decimal exponent handled without the general parser; beyond it a float32 is 0 or infinite anyway. */
const WIDEST = 60;
const POWERS = Float64Array.from({ length: WIDEST + 1 }, (_, k) => Number(`1e${k}`));

/**
 * Reads decimal numbers out of bytes without making text of them. `scan` returns the float32 nearest to what `Number()` makes of
 * the same token, for every token; NaN where the token is no decimal number (`nan` and `inf` are none).
 *
 * Up to 15 digits and powers of ten up to 22, mantissa and power are exact doubles, so one multiplication or division rounds
 * correctly (Clinger, 1990, the easy case). Longer mantissas are within a few units of 2^-53 and are accepted when the whole
 * interval rounds to one float32; the rare rest goes through `Number()`.
 */
export class DecimalScanner {
  /** Where the last token ended: index of the first byte after it. */
  end = 0;

  /** @param limit the token is known to be complete before this index */
  scan(bytes: Uint8Array, from: number, limit: number): number {
    let at = from;
    let c = at < limit ? bytes[at] : 32;
    const negative = c === 45;
    if (negative || c === 43) c = ++at < limit ? bytes[at] : 32;
    let mantissa = 0;
    let significant = 0;
    let exponent = 0;
    let digits = 0;
    while (c >= 48 && c <= 57) {
      digits++;
      if (significant > 0 || c !== 48) {
        if (significant < 18) {
          mantissa = mantissa * 10 + (c - 48);
          significant++;
        } else exponent++;
      }
      c = ++at < limit ? bytes[at] : 32;
    }
    if (c === 46) {
      c = ++at < limit ? bytes[at] : 32;
      while (c >= 48 && c <= 57) {
        digits++;
        if (significant < 18) {
          exponent--;
          if (significant > 0 || c !== 48) {
            mantissa = mantissa * 10 + (c - 48);
            significant++;
          }
        }
        c = ++at < limit ? bytes[at] : 32;
      }
    }
    let valid = digits > 0;
    if (valid && (c === 101 || c === 69)) {
      c = ++at < limit ? bytes[at] : 32;
      const down = c === 45;
      if (down || c === 43) c = ++at < limit ? bytes[at] : 32;
      let power = 0;
      let powerDigits = 0;
      while (c >= 48 && c <= 57) {
        if (power < 100_000) power = power * 10 + (c - 48);
        powerDigits++;
        c = ++at < limit ? bytes[at] : 32;
      }
      exponent += down ? -power : power;
      valid = powerDigits > 0;
    }
    if (!valid || c > 32) {
      while (at < limit && bytes[at] > 32) at++;
      this.end = at;
      return Number.NaN;
    }
    this.end = at;
    if (mantissa === 0) return negative ? -0 : 0;
    if (significant <= 15 && exponent >= -22 && exponent <= 22) {
      const value = exponent < 0 ? mantissa / EXACT_POWERS[-exponent] : mantissa * EXACT_POWERS[exponent];
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
