import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { cellsOf, numberOf, readNumberRows } from "../../src/openfoam/number-rows.js";

const bytes = (text: string): Uint8Array => new TextEncoder().encode(text);
const refuse = (): null => null;

/** Number texts of any length, with and without point, sign and exponent: many beyond the exact fast path. */
const digits = (least: number, most: number): fc.Arbitrary<string> => fc.stringMatching(new RegExp(`^[0-9]{${least},${most}}$`));
const numberText = fc
  .tuple(
    fc.constantFrom("", "-", "+"),
    fc.oneof(
      digits(1, 25),
      fc.tuple(digits(1, 20), digits(0, 25)).map(([whole, part]) => `${whole}.${part}`),
      digits(1, 20).map((part) => `.${part}`),
    ),
    fc.oneof(
      fc.constant(""),
      fc.tuple(fc.constantFrom("e", "E"), fc.constantFrom("", "-", "+"), digits(1, 4)).map((parts) => parts.join("")),
    ),
  )
  .map((parts) => parts.join(""));

describe("numbers from bytes", () => {
  test("every number text gives what Number gives, to the last bit (seed 20)", () => {
    fc.assert(
      fc.property(fc.array(numberText, { minLength: 1, maxLength: 8 }), (texts) => {
        const read = readNumberRows(bytes(`${texts.join("\t")}\n`), 0, texts.length, refuse);
        expect(read.rows).toBe(1);
        texts.forEach((text, index) => {
          if (!Object.is(read.columns[index]![0], Number(text))) throw new Error(`${text} was read as ${read.columns[index]![0]}`);
        });
      }),
      { seed: 20, numRuns: 4000 },
    );
  });

  test("every double survives printing and reading, in the solver's formats and in the shortest one (seed 21)", () => {
    fc.assert(
      fc.property(fc.double({ noNaN: true, noDefaultInfinity: true }), fc.integer({ min: 3, max: 16 }), (value, precision) => {
        const texts = [String(value), value.toExponential(precision)];
        const read = readNumberRows(bytes(`${texts.join(" ")}\n`), 0, 2, refuse);
        expect(Object.is(read.columns[0]![0], Number(texts[0]))).toBe(true);
        expect(read.columns[1]![0]).toBe(Number(texts[1]));
      }),
      { seed: 21, numRuns: 3000 },
    );
  });

  test.each([
    ["1.7976931348623157e308", 1.7976931348623157e308],
    ["2.2250738585072011e-308", 2.225073858507201e-308],
    ["4.9e-324", 4.9e-324],
    ["9007199254740993", 9007199254740992],
    ["9.9e+154", 9.9e154],
    ["64.9968000000194763", 64.99680000001948],
    ["1e400", Number.POSITIVE_INFINITY],
  ])("the hard case %s is rounded correctly", (text, value) => {
    expect(readNumberRows(bytes(`${text}\n`), 0, 1, refuse).columns[0]![0]).toBe(value);
  });

  test("a sign survives on zero", () => {
    expect(Object.is(readNumberRows(bytes("-0.000000e+00\n"), 0, 1, refuse).columns[0]![0], -0)).toBe(true);
  });

  test("texts that are no plain number go to the caller as a whole row", () => {
    const given: string[] = [];
    const rows = ["1 nan", "2 -inf", "3 0x10", "4 1e", "5 1.2.3", "6 -", "7 .", "8 1_0", "9 Infinity", "10 5e+", "11 2"];
    const read = readNumberRows(bytes(`${rows.join("\n")}\n`), 0, 2, (text) => {
      given.push(text);
      return null;
    });
    expect(given).toEqual(rows.slice(0, -1));
    expect(read.rows).toBe(1);
    expect(numberOf("nan")).toBeNaN();
    expect(numberOf("-nan")).toBeNaN();
    expect(numberOf("-inf")).toBe(Number.NEGATIVE_INFINITY);
    expect(numberOf("inf")).toBe(Number.POSITIVE_INFINITY);
    for (const text of ["", "-", "0x10", "1e", "N/A", "1.2.3", " 1", "Infinity2"]) expect(numberOf(text)).toBeUndefined();
  });
});

describe("rows", () => {
  test("brackets, commas, tabs, blanks and carriage returns part cells; empty lines are passed over", () => {
    const read = readNumberRows(bytes("1\t((2 3),(4 5))  \r\n\r\n \t\n2 6,7 8 9\n"), 0, 5, refuse);
    expect(read.columns.map((column) => [...column.subarray(0, read.rows)])).toEqual([
      [1, 2],
      [2, 6],
      [3, 7],
      [4, 8],
      [5, 9],
    ]);
    expect(read.cut).toBe(false);
  });

  test("reading stops at a comment line and says where", () => {
    const read = readNumberRows(bytes("1 2\n3 4\n# Time x\n5 6\n"), 0, 2, refuse);
    expect([read.rows, read.at, read.lines]).toEqual([2, 8, 2]);
  });

  test("a last line without a line end is cut, even when it holds every cell", () => {
    const read = readNumberRows(bytes("1 1.234567e-02\n2 1.2345"), 0, 2, refuse);
    expect([read.rows, read.cut]).toEqual([1, true]);
    expect(readNumberRows(bytes("1 2\n  "), 0, 2, refuse).cut).toBe(false);
    expect(readNumberRows(bytes("1 2"), 0, 2, refuse)).toMatchObject({ rows: 0, cut: true });
  });

  test("far more rows than the first one promised are read", () => {
    const long = `${"1".padEnd(4000)} 1\n`;
    const many = Array.from({ length: 5000 }, (_, row) => `${row} ${row * 2}\n`).join("");
    const read = readNumberRows(bytes(long + many), 0, 2, refuse);
    expect(read.rows).toBe(5001);
    expect(read.columns[1]![5000]).toBe(9998);
  });

  test("cells of a line", () => {
    expect(cellsOf(" 1 \t(2 3),(4)\r")).toEqual(["1", "2", "3", "4"]);
  });
});
