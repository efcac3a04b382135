/**
 * Decimal text of a float32 with the fewest significant digits (at most nine) such that the nearest such decimal, read back and
 * rounded to float32, is the same number, sign of zero included.
 */
export function shortestFloat32(value: number): string {
  if (value === 0) return Object.is(value, -0) ? "-0" : "0";
  const size = Math.abs(value);
  // A power of ten up to 1e22 is exact in float64, so within this range a quotient of integers is the decimal itself, and quick.
  const round = size >= 1e-3 && size < 1e6 ? roundedToDecimals : roundedToDigits;
  // Most coordinates of a body need six or seven decimals; round ones (0.5, 1.25) are found by going down from there.
  let places = 7;
  let best = round(value, places);
  if (Math.fround(best) === value) {
    while (places > 1) {
      const shorter = round(value, --places);
      if (Math.fround(shorter) !== value) break;
      best = shorter;
    }
  } else {
    while (Math.fround(best) !== value) best = round(value, ++places);
  }
  return String(best);
}

const powersOfTen = Float64Array.from({ length: 23 }, (_, power) => Number(`1e${power}`));

function roundedToDecimals(value: number, places: number): number {
  const scale = powersOfTen[places];
  return Math.round(value * scale) / scale;
}

function roundedToDigits(value: number, places: number): number {
  return Number(value.toPrecision(places));
}

const SLOTS = 1 << 16;
/** One byte of length and the text; the longest is like -0.00000123456789, 17 bytes. */
const SLOT_BYTES = 24;

const POINT = 46;
const ZERO = 48;
const MINUS = 45;

/**
 * Text as bytes, growing by doubling. Floats are remembered in a table indexed by a hash of their bits, because a corner is shared
 * by about six triangles: formatting anew costs ten times as much as copying.
 */
export class FloatText {
  #bytes = new Uint8Array(1 << 16);
  #length = 0;
  readonly #keys = new Int32Array(SLOTS);
  readonly #remembered = new Uint8Array(SLOTS * SLOT_BYTES);
  readonly #encoder = new TextEncoder();

  /** Any text, as UTF-8. */
  text(text: string): void {
    const encoded = this.#encoder.encode(text);
    this.bytes(encoded);
  }

  /** Bytes of text that was encoded before. */
  bytes(encoded: Uint8Array): void {
    this.#reserve(encoded.length);
    // A loop: for a dozen bytes, TypedArray.set costs more than the copy.
    for (let k = 0; k < encoded.length; k++) this.#bytes[this.#length++] = encoded[k];
  }

  byte(code: number): void {
    this.#reserve(1);
    this.#bytes[this.#length++] = code;
  }

  /** `shortestFloat32(value)`; `bits` is the same number's pattern, read from an Int32Array over the same memory. */
  float32(value: number, bits: number): void {
    this.#reserve(SLOT_BYTES);
    const slot = Math.imul(bits, 0x9e3779b1) >>> 16;
    let from = slot * SLOT_BYTES;
    if (this.#keys[slot] !== bits || this.#remembered[from] === 0) {
      const text = shortestFloat32(value);
      this.#keys[slot] = bits;
      this.#remembered[from] = text.length;
      for (let k = 0; k < text.length; k++) this.#remembered[from + 1 + k] = text.charCodeAt(k);
    }
    const end = from + this.#remembered[from];
    while (from < end) this.#bytes[this.#length++] = this.#remembered[++from];
  }

  /** A number between -1 and 1, rounded to six decimals, without trailing zeros. */
  sixDecimals(value: number): void {
    this.#reserve(9);
    let millionths = Math.round(Math.abs(value) * 1e6);
    if (millionths === 0) {
      this.#bytes[this.#length++] = ZERO;
      return;
    }
    if (value < 0) this.#bytes[this.#length++] = MINUS;
    this.#bytes[this.#length++] = ZERO + Math.floor(millionths / 1e6);
    millionths %= 1e6;
    if (millionths === 0) return;
    this.#bytes[this.#length++] = POINT;
    for (let place = 1e5; millionths > 0; place /= 10) {
      const digit = Math.floor(millionths / place);
      this.#bytes[this.#length++] = ZERO + digit;
      millionths -= digit * place;
    }
  }

  /** A copy of all that was written. */
  finish(): Uint8Array {
    return this.#bytes.slice(0, this.#length);
  }

  #reserve(more: number): void {
    if (this.#length + more <= this.#bytes.length) return;
    const grown = new Uint8Array(2 * Math.max(this.#bytes.length, more));
    grown.set(this.#bytes.subarray(0, this.#length));
    this.#bytes = grown;
  }
}
