import { describe, expect, test } from "vitest";
import type { History } from "../../src/history/history.js";
import { printedDigits } from "../../src/ledger/print-precision.js";
import { MinimalStandard } from "../helpers/random.js";

function history(columns: Record<string, Float64Array>): History {
  const values = Object.values(columns);
  return {
    object: "x",
    table: "force",
    layout: "forces",
    dialect: "F5",
    header: {},
    columns: [
      { name: "Time", values: Float64Array.from(values[0].keys()) },
      ...Object.entries(columns).map(([name, each]) => ({ name, values: each })),
    ],
    words: [],
    rows: values[0].length,
    segments: [],
    findings: [],
  };
}

/** Random numbers as they come back from a table with so many digits. */
function printed(digits: number, rows = 100): Float64Array {
  const random = new MinimalStandard(digits + 1);
  return Float64Array.from({ length: rows }, () => Number((random.normal() * 37).toPrecision(digits)));
}

describe("digits that a table was printed with", () => {
  test.each([5, 6, 7, 9, 11, 13])("%i digits are found from the numbers", (digits) => {
    expect(printedDigits([history({ Cd: printed(digits), Cl: printed(digits) })])).toBe(digits);
  });

  test("the roughest table counts", () => {
    expect(printedDigits([history({ Cd: printed(11) }), history({ Cd: printed(7) })])).toBe(7);
  });

  test("totals that were summed here do not count", () => {
    const pressure = printed(7);
    const total = pressure.map((value) => value + 1 / 3);
    expect(printedDigits([history({ total_x: total, pressure_x: pressure })])).toBe(7);
  });

  test("too few different values say nothing: seven digits", () => {
    expect(printedDigits([])).toBe(7);
    expect(printedDigits([history({ Cd: new Float64Array(100).fill(0.3) })])).toBe(7);
    expect(printedDigits([history({ Cd: printed(12, 15) })])).toBe(7);
    expect(printedDigits([history({ Cd: new Float64Array(100) })])).toBe(7);
    expect(printedDigits([history({ Cd: new Float64Array(100).fill(Number.NaN) })])).toBe(7);
  });
});
