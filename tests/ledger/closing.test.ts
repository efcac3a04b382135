import { describe, expect, test } from "vitest";
import { closingOf } from "../../src/ledger/closing.js";
import type { PartSeries } from "../../src/ledger/part-series.js";
import { sumOf } from "../../src/ledger/series-sums.js";
import { constant, noisy, record, series } from "./records.js";

const rows = 100;

/** A number as a table prints it. */
const printed = (values: Float64Array, digits: number): Float64Array => values.map((value) => Number(value.toPrecision(digits)));

function part(seed: number, digits = 17): PartSeries {
  const cdPressure = printed(noisy(seed, 0.1, 0.02, rows), digits);
  const cdFriction = printed(noisy(seed + 30, 0.01, 0.001, rows), digits);
  const cl = printed(noisy(seed + 60, -0.05, 0.2, rows), digits);
  const cd = printed(
    cdPressure.map((value, row) => value + cdFriction[row]),
    digits,
  );
  return series(`part ${seed}`, cd, cl, { cdPressure, cdFriction });
}

const parts = [part(1), part(2), part(3)];
const whole = sumOf(parts, "whole");

/** A copy with the drag of one row changed. */
const changed = (original: PartSeries, row: number, by: number): PartSeries => ({
  ...original,
  cd: original.cd.map((value, index) => (index === row ? value + by : value)),
});

describe("the ledger closes", () => {
  test("parts against whole, pressure and friction of each, over every row", () => {
    const closing = closingOf(record(whole, parts));
    expect(closing.ok).toBe(true);
    expect(closing.worst).toBeLessThan(1e-14);
    expect(closing.message).toMatch(
      /^6 sums over 100 rows agree within print precision \(largest difference \d\.\de-1\d of the sizes summed\)$/,
    );
  });

  test("one row that is off is found, wherever it stands", () => {
    for (const row of [0, 57, 99]) {
      const closing = closingOf(record(changed(whole, row, 1e-4), parts));
      expect(closing.ok).toBe(false);
      expect(closing.message).toMatch(
        new RegExp(
          `^(?:parts against the whole in drag|pressure and friction against the drag of whole): off by [\\d.e-]+ of the sizes summed at ${row + 1},`,
        ),
      );
    }
  });

  test("a part that is missing, and one that is counted twice", () => {
    expect(closingOf(record(whole, parts.slice(1))).ok).toBe(false);
    expect(closingOf(record(whole, [...parts, parts[0]])).message).toContain("a patch is counted twice or is missing");
  });

  test("lift alone can be off", () => {
    const off = { ...whole, cl: whole.cl.map((value, row) => (row === 3 ? value + 0.01 : value)) };
    expect(closingOf(record(off, parts)).message).toMatch(
      /^parts against the whole in lift: .* at 4, where 1\.0e-6 is explained by print precision/,
    );
  });

  test("only the whole: nothing to add up", () => {
    expect(closingOf(record(series("whole", whole.cd, whole.cl)))).toEqual({
      ok: true,
      worst: 0,
      message: "only the whole is recorded; there is nothing to add up",
    });
  });

  test("the coefficient table stands beside the forces", () => {
    const alone = series("whole", whole.cd, whole.cl);
    expect(closingOf(record(alone, [], { tableCd: whole.cd })).ok).toBe(true);
    const other = closingOf(record(alone, [], { tableCd: whole.cd.map((value) => 1.2 * value) }));
    expect(other).toMatchObject({ ok: false });
    expect(other.worst).toBeCloseTo(0.2 / 2.2, 10);
  });

  test.each([5, 6, 7, 9])("tables of %i digits close, and a tenth of a per cent too much does not", (digits) => {
    const rough = [part(1, digits), part(2, digits), part(3, digits)];
    const sum = sumOf(rough, "whole");
    const total = Object.fromEntries(
      Object.entries(sum).map(([key, value]) => [
        key,
        value instanceof Float64Array && key !== "time" ? printed(value, digits) : value,
      ]),
    ) as unknown as PartSeries;
    expect(closingOf(record(total, rough, { printedDigits: digits })).ok).toBe(true);
    expect(closingOf(record(changed(total, 5, 0.001 * total.cd[5]), rough, { printedDigits: digits })).ok).toBe(false);
  });

  test("in oblique axes the components count, not their difference", () => {
    // Drag is what 0.17 rad of a force of 10 leave: printed to seven digits it is good to 1e-6 of ten, not of itself.
    const lift = constant(10, rows);
    const drag = noisy(9, 0.05, 0.01, rows);
    const off = (values: Float64Array) => values.map((value, row) => value + (row % 2 ? 3e-6 : -3e-6));
    const pair = [
      series("a", drag, lift),
      series(
        "b",
        drag,
        lift.map((x) => -0.9 * x),
      ),
    ];
    const sum = { ...sumOf(pair, "whole"), cd: off(sumOf(pair, "whole").cd) };
    expect(closingOf(record(sum, pair, { printedDigits: 7 })).ok).toBe(false);
    expect(closingOf(record(sum, pair, { printedDigits: 7, oblique: true })).ok).toBe(true);
  });

  test("nan in the tables is said as such", () => {
    const broken = { ...whole, cd: whole.cd.map((value, row) => (row > 70 ? Number.NaN : value)) };
    expect(closingOf(record(broken, parts))).toEqual({
      ok: false,
      worst: Number.POSITIVE_INFINITY,
      message: expect.stringMatching(/^the tables hold nan or inf at \d+: the run diverged$/),
    });
  });

  test("parts of nothing but zeros close", () => {
    const zero = series("zero", constant(0, rows), constant(0, rows), {
      cdPressure: constant(0, rows),
      cdFriction: constant(0, rows),
    });
    expect(closingOf(record(whole, [...parts, zero])).ok).toBe(true);
    expect(closingOf(record(zero, [zero])).ok).toBe(true);
  });
});
