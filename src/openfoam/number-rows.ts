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
const upperE = 69;
const lowerE = 101;

/** 1e0 .. 1e22: the powers of ten that are exact doubles. */
const powersOfTen = Float64Array.from({ length: 23 }, (_, exponent) => Number(`1e${exponent}`));

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
 * One row at a time. The row has a method of its own because the engine compiles a method that is called often sooner than one
 * long loop.
 */
class RowScanner {
  /** one per cell of a row; all of one length */
  columns: Float64Array<ArrayBuffer>[];
  /** numbers found in the row; those beyond the width are counted, not kept */
  count = 0;
  /** every cell is a plain number */
  plain = true;
  private readonly text: Buffer;
  private readonly words: DataView;

  constructor(
    private readonly bytes: Uint8Array,
    private readonly width: number,
    capacity: number,
  ) {
    this.columns = Array.from({ length: width }, () => new Float64Array(capacity));
    this.text = Buffer.from(bytes.buffer, bytes.byteOffset, bytes.length);
    this.words = new DataView(bytes.buffer, bytes.byteOffset, bytes.length);
  }

  /**
   * Reads the row that starts at `start` into place `row` of the columns; there must be a line end behind it. Returns the place
   * of that line end.
   */
  scan(start: number, row: number): number {
    const { bytes, width, columns, words } = this;
    const lastWord = bytes.length - 4;
    let at = start;
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
      // Nine digits fit a small integer, which is quicker to build than a double; two such make any mantissa that can be exact.
      let head = 0;
      let tail = 0;
      let digits = 0;
      let digit = byte - zero;
      while (digit >= 0 && digit <= 9) {
        if (digits < 9) head = (head * 10 + digit) | 0;
        else if (digits < 15) tail = (tail * 10 + digit) | 0;
        digits += 1;
        byte = bytes[++at]!;
        digit = byte - zero;
      }
      let exponent = 0;
      if (byte === point) {
        exponent = digits;
        at += 1;
        // Four digits at a time: every byte is 0x30..0x39 when its high half is 3 before and after adding 6 to the low half.
        while (digits <= 5 && at <= lastWord) {
          const four = words.getUint32(at, false);
          if (((four & 0xf0f0f0f0) | 0) !== 0x30303030 || (((four + 0x06060606) & 0xf0f0f0f0) | 0) !== 0x30303030) break;
          const pairs = Math.imul((four >>> 8) & 0x000f000f, 10) + (four & 0x000f000f);
          head = (Math.imul(head, 10_000) + Math.imul(pairs >>> 16, 100) + (pairs & 0xffff)) | 0;
          digits += 4;
          at += 4;
        }
        byte = bytes[at]!;
        digit = byte - zero;
        while (digit >= 0 && digit <= 9) {
          if (digits < 9) head = (head * 10 + digit) | 0;
          else if (digits < 15) tail = (tail * 10 + digit) | 0;
          digits += 1;
          byte = bytes[++at]!;
          digit = byte - zero;
        }
        exponent -= digits;
      }
      let whole = digits > 0;
      if (byte === lowerE || byte === upperE) {
        byte = bytes[++at]!;
        let down = false;
        if (byte === minus) {
          down = true;
          byte = bytes[++at]!;
        } else if (byte === plus) byte = bytes[++at]!;
        let power = 0;
        digit = byte - zero;
        if (digit < 0 || digit > 9) whole = false;
        while (digit >= 0 && digit <= 9) {
          if (power < 10_000) power = power * 10 + digit;
          byte = bytes[++at]!;
          digit = byte - zero;
        }
        exponent += down ? -power : power;
      }
      if (!whole || endsCell[byte] === 0) {
        plain = false;
        at = bytes.indexOf(newline, at);
        break;
      }
      let value: number;
      if (digits <= 15 && exponent >= -22 && exponent <= 22) {
        value = digits <= 9 ? head : head * powersOfTen[digits - 9]! + tail;
        value = exponent < 0 ? value / powersOfTen[-exponent]! : value * powersOfTen[exponent]!;
        if (negative) value = -value;
      } else value = Number(this.text.toString("latin1", cellStart, at));
      if (count < width) columns[count]![row] = value;
      count += 1;
    }
    this.count = count;
    this.plain = plain;
    return at;
  }

  /** Makes room for more rows. */
  grow(): void {
    this.columns = this.columns.map((column) => {
      const grown = new Float64Array(Math.ceil(column.length * 1.5) + 16);
      grown.set(column);
      return grown;
    });
  }

  lineText(from: number, to: number): string {
    return this.text.toString("utf8", from, to);
  }
}

/**
 * Reads rows of exactly `width` numbers from `bytes[start]` on, until a line starts with `#` or the bytes end. Brackets and commas
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
  // A cut last line is found once, here, so that the scanner may rely on a line end.
  const lastNewline = bytes.lastIndexOf(newline);
  // Rows are padded to much the same length: the first tells how many there are, with a margin.
  const firstLength = Math.max(2, bytes.indexOf(newline, start) + 1 - start);
  let capacity = Math.ceil(((end - start) / firstLength) * 1.05) + 16;
  const scanner = new RowScanner(bytes, width, capacity);
  let rows = 0;
  let at = start;
  let lines = 0;
  let cut = false;
  while (at < end && bytes[at] !== hash) {
    lines += 1;
    if (at > lastNewline) {
      cut = hasCell(bytes, at, end);
      at = end;
      break;
    }
    if (rows === capacity) {
      scanner.grow();
      capacity = scanner.columns[0]!.length;
    }
    const rowStart = at;
    at = scanner.scan(at, rows) + 1;
    if (!scanner.plain || scanner.count !== width) {
      if (scanner.plain && scanner.count === 0) continue;
      const row = odd(scanner.lineText(rowStart, at - 1), lines);
      if (row === null) continue;
      for (let column = 0; column < width; column += 1) scanner.columns[column]![rows] = row[column]!;
    }
    rows += 1;
  }
  return { columns: scanner.columns, rows, at, lines, cut };
}

function hasCell(bytes: Uint8Array, from: number, to: number): boolean {
  for (let at = from; at < to; at += 1) if (endsCell[bytes[at]!] === 0) return true;
  return false;
}

/** The cells of a line as text: brackets and commas count as blanks. */
export const cellsOf = (line: string): string[] => line.split(/[\s(),]+/).filter((cell) => cell !== "");
