import { describe, expect, test } from "vitest";
import { autocorrelation, mean, variance } from "../../src/history/correlation.js";
import { lastRows } from "../../src/history/last-rows.js";

/**
 * NIST Statistical Reference Datasets, univariate summary statistics: NumAcc1 to NumAcc4, whose data follow from a rule.
 * Certified mean, sample standard deviation and lag-1 autocorrelation. They are made to break one-pass variance and careless
 * autocorrelation; a coefficient with a large offset is of the same kind.
 */
const sawtooth = (first: number, low: number, high: number): Float64Array =>
  Float64Array.from({ length: 1001 }, (_, row) => (row === 0 ? first : row % 2 === 1 ? low : high));

const sets: [name: string, values: Float64Array, centre: number, deviation: number, correlation: number, digits: number][] = [
  ["NumAcc1", Float64Array.of(10000001, 10000003, 10000002), 10000002, 1, -0.5, 15],
  ["NumAcc2", sawtooth(1.2, 1.1, 1.3), 1.2, 0.1, -0.999, 14],
  // The data themselves carry 17 digits of numbers near 1e6 and 1e7: the spread of 0.1 can be known to 9 and 8 digits.
  ["NumAcc3", sawtooth(1000000.2, 1000000.1, 1000000.3), 1000000.2, 0.1, -0.999, 9],
  ["NumAcc4", sawtooth(10000000.2, 10000000.1, 10000000.3), 10000000.2, 0.1, -0.999, 8],
];

describe("NIST StRD, accuracy of summary statistics", () => {
  test.each(sets)("%s", (_, values, centre, deviation, correlation, digits) => {
    const within = (found: number, certified: number, figures: number): void =>
      expect(Math.abs(found / certified - 1)).toBeLessThanOrEqual(10 ** -figures);
    within(mean(values), centre, 15);
    within(Math.sqrt((variance(values) * values.length) / (values.length - 1)), deviation, digits);
    within(autocorrelation(values, 1), correlation, digits);
  });

  test.each(sets)("%s through the summary of the last rows", (_, values, centre, deviation, __, digits) => {
    const [column] = lastRows(
      "x",
      {
        object: "x",
        table: "x",
        layout: "coefficients",
        dialect: "",
        header: {},
        columns: [
          { name: "Time", values: Float64Array.from(values.keys()) },
          { name: "Cd", values },
        ],
        words: [],
        rows: values.length,
        segments: [],
        findings: [],
      },
      values.length,
    ).columns;
    expect(Math.abs(column!.mean / centre - 1)).toBeLessThanOrEqual(1e-15);
    const sample = column!.standardDeviation * Math.sqrt(values.length / (values.length - 1));
    expect(Math.abs(sample / deviation - 1)).toBeLessThanOrEqual(10 ** -digits);
  });
});
