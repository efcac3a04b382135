import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { DecimalScanner } from "../../../src/geometry/files/decimal.js";

function scan(text: string): number {
  const scanner = new DecimalScanner();
  const value = scanner.scan(Buffer.from(`${text} 7`), 0);
  expect(scanner.end).toBe(text.length);
  return value;
}

const same = (text: string): void => expect(scan(text), text).toBe(Math.fround(Number(text)));

describe("DecimalScanner", () => {
  it.each([
    "0",
    "-0",
    "+1",
    "1.",
    ".5",
    "-.25",
    "1e3",
    "1E-3",
    "1.5e+2",
    "00012.500",
    "0.1",
    "16777217",
    "1e-45",
    "3.4028235e38",
    "-1e-60",
    "1e60",
  ])("reads %s", same);

  it.each([
    "4294967296",
    "4294967296.0",
    "0.4294967296",
    "999999999",
    "9999999999",
    "123456789012345678901234567890",
    "0.000000000000000000000000000000001",
  ])("reads %s, which does not fit a small integer", same);

  it.each([
    // Half-way between two float32 numbers, and a hair above and below.
    "1.000000059604644775390625",
    "1.00000005960464477539062500000001",
    "1.00000005960464477539062499999999",
    "7.006492321624085e-46",
    "7.006492321624086e-46",
  ])("rounds %s like Number, then to float32", same);

  it.each(["", ".", "-", "+", "e5", "1e", "1e+", "1,5", "0x10", "1.2.3", "nan", "inf", "1_000", "1-", "--1", "1e5.5", "∞"])(
    "refuses %s",
    (text) => {
      const scanner = new DecimalScanner();
      expect(scanner.scan(Buffer.from(`${text} 7`), 0)).toBeNaN();
    },
  );

  it("is Number rounded to float32 for every double, written in full", () => {
    fc.assert(
      fc.property(fc.double({ noNaN: true, noDefaultInfinity: true }), (value) => {
        for (const text of [String(value), value.toExponential(6), value.toPrecision(9), value.toPrecision(17)]) same(text);
      }),
      { seed: 1, numRuns: 1500 },
    );
  });

  it("is Number rounded to float32 for digits at random", () => {
    const digits = fc.stringMatching(/^[0-9]{0,24}$/);
    fc.assert(
      fc.property(
        digits,
        digits,
        fc.option(fc.integer({ min: -70, max: 70 })),
        fc.constantFrom("", "-", "+"),
        (whole, part, power, sign) => {
          fc.pre(whole + part !== "");
          same(`${sign}${whole}.${part}${power === null ? "" : `e${power}`}`);
        },
      ),
      { seed: 2, numRuns: 3000 },
    );
  });

  it("is Number rounded to float32 next to half-way points between float32 numbers", () => {
    fc.assert(
      fc.property(
        fc.float({ noNaN: true, noDefaultInfinity: true, min: Math.fround(1e-30), max: Math.fround(1e30) }),
        fc.integer({ min: -3, max: 3 }),
        (value, step) => {
          const bits = new Int32Array(new Float32Array([value]).buffer)[0] + 1;
          const next = new Float32Array(new Int32Array([bits]).buffer)[0];
          const half = (value + next) / 2;
          same((half * (1 + step * 2 ** -52)).toPrecision(17));
        },
      ),
      { seed: 3, numRuns: 1500 },
    );
  });
});
