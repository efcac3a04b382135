/**
 * Rows of numbers read straight from bytes. A number is an integer mantissa and a power of ten; where both are exact doubles one
 * multiplication or division gives the correctly rounded value (Clinger, "How to read floating point numbers accurately", 1990),
 * everything else goes through `Number()`, so the result always equals `Number(text)`.
 */

const tab = 9;
const newline = 10;
const carriageReturn = 13;
const blank = 32;
const hash = 35;
const openBracket = 40;
const closeBracket = 41;
const plus = 43;
const comma = 44;
const minus = 45;
const point = 46;
const zero = 48;

/** 1e0 .. 1e22: the powers of ten that are exact doubles. */
const powersOfTen = Float64Array.from({ length: 23 }, (_, exponent) => Number(`1e${exponent}`));
/** A mantissa below this can take one more digit and stay an exact integer. */
const roomForOneDigit = 9e14;

/** What stands between two cells: blanks, tabs, brackets, commas, carriage returns. */
const separates = new Uint8Array(256);
for (const byte of [tab, carriageReturn, blank, openBracket, closeBracket, comma]) separates[byte] = 1;
/** What ends a cell. */
const endsCell = Uint8Array.from(separates);
endsCell[newline] = 1;

const decimal = /^[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?$/;
const special = /^([+-]?)(nan|inf|infinity)$/i;

/** The value of a cell's text as the solver prints numbers (`-1.2e-03`, `nan`, `-inf`); undefined when it is not a number. */
export function numberOf(text: string): number | undefined {
  if (decimal.test(text)) return Number(text);
  const found = special.exec(text);
  if (found === null) return undefined;
  if (found[2]!.toLowerCase() === "nan") return Number.NaN;
  return found[1] === "-" ? Number.NEGATIVE_INFINITY : Number.POSITIVE_INFINITY;
}

export interface NumberRows {
  /** one array per column, each `rows` long */
  columns: Float64Array[];
  rows: number;
  /** Where reading stopped: at a comment line or at the end. */
  at: number;
  /** Lines passed. */
  lines: number;
  /** The last line has no line end; it was not read. */
  cut: boolean;
}

/**
 * Reads rows of exactly `width` numbers from `bytes[at]` on, until a line starts with `#` or the bytes end. Brackets and commas
 * count as blanks, empty lines are passed over.
 *
 * A row with another count, or with a cell that is not a plain number, is given to `odd` as text; what that returns (`width`
 * numbers) is taken as the row, null leaves the row out. A last line without a line end is cut: it is never read.
 */
export function readNumberRows(
  bytes: Uint8Array,
  start: number,
  width: number,
  odd: (text: string, line: number) => ArrayLike<number> | null,
): NumberRows {
  const end = bytes.length;
  const buffer = Buffer.from(bytes.buffer, bytes.byteOffset, end);
  // A cut last line is found once, here, so that the loop below may rely on a line end.
  const lastNewline = bytes.lastIndexOf(newline);
  let capacity = 1024;
  let columns = Array.from({ length: width }, () => new Float64Array(capacity));
  let rows = 0;
  let at = start;
  let lines = 0;
  const scratch = new Float64Array(width);

  while (at < end) {
    if (bytes[at] === hash) break;
    if (at > lastNewline) return { columns, rows, at: end, lines: lines + 1, cut: hasCell(bytes, at, end) };
    const rowStart = at;
    let count = 0;
    let plain = true;
    for (;;) {
      let byte = bytes[at]!;
      while (separates[byte] === 1) byte = bytes[++at]!;
      if (byte === newline) break;
      const cellStart = at;
      let negative = false;
      if (byte === minus) {
        negative = true;
        byte = bytes[++at]!;
      } else if (byte === plus) byte = bytes[++at]!;
      let mantissa = 0;
      let exponent = 0;
      let exact = true;
      const wholeStart = at;
      let digit = byte - zero;
      while (digit >= 0 && digit <= 9) {
        if (mantissa < roomForOneDigit) mantissa = mantissa * 10 + digit;
        else exact = false;
        digit = bytes[++at]! - zero;
      }
      let digits = at - wholeStart;
      if (bytes[at] === point) {
        const fractionStart = ++at;
        digit = bytes[at]! - zero;
        while (digit >= 0 && digit <= 9) {
          if (mantissa < roomForOneDigit) mantissa = mantissa * 10 + digit;
          else exact = false;
          digit = bytes[++at]! - zero;
        }
        exponent = fractionStart - at;
        digits -= exponent;
      }
      if (digits > 0 && (bytes[at]! | blank) === 101) {
        byte = bytes[++at]!;
        let down = false;
        if (byte === minus) {
          down = true;
          byte = bytes[++at]!;
        } else if (byte === plus) byte = bytes[++at]!;
        const exponentStart = at;
        let power = 0;
        digit = byte - zero;
        while (digit >= 0 && digit <= 9) {
          if (power < 10_000) power = power * 10 + digit;
          digit = bytes[++at]! - zero;
        }
        if (at === exponentStart) digits = 0;
        exponent += down ? -power : power;
      }
      if (digits === 0 || endsCell[bytes[at]!] === 0) {
        plain = false;
        at = bytes.indexOf(newline, at);
        break;
      }
      let value: number;
      if (exact && exponent >= -22 && exponent <= 22) {
        value = exponent < 0 ? mantissa / powersOfTen[-exponent]! : mantissa * powersOfTen[exponent]!;
        if (negative) value = -value;
      } else value = Number(buffer.toString("latin1", cellStart, at));
      if (count < width) scratch[count] = value;
      count += 1;
    }
    at += 1;
    lines += 1;
    let row: ArrayLike<number> | null = scratch;
    if (!plain || count !== width) {
      if (plain && count === 0) continue;
      row = odd(buffer.toString("utf8", rowStart, at - 1), lines);
      if (row === null) continue;
    }
    if (rows === capacity) {
      // The rows left to read, judged by the mean length so far, with a margin.
      const expected = Math.ceil(((end - start) / (at - start)) * rows * 1.05) + 1024;
      capacity = Math.max(expected, Math.ceil(capacity * 1.5));
      columns = columns.map((old) => {
        const grown = new Float64Array(capacity);
        grown.set(old);
        return grown;
      });
    }
    for (let column = 0; column < width; column += 1) columns[column]![rows] = row[column]!;
    rows += 1;
  }
  return { columns, rows, at, lines, cut: false };
}

function hasCell(bytes: Uint8Array, from: number, to: number): boolean {
  for (let at = from; at < to; at += 1) if (endsCell[bytes[at]!] === 0) return true;
  return false;
}

/** The cells of a line as text: brackets and commas count as blanks. */
export const cellsOf = (line: string): string[] => line.split(/[\s(),]+/).filter((cell) => cell !== "");
