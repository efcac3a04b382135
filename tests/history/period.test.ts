import { describe, expect, test } from "vitest";
import { dominantPeriod, periodMeans, trendOf, withoutTrend } from "../../src/history/period.js";
import { autoregressive, MinimalStandard } from "../helpers/random.js";

const series = (rows: number, value: (row: number) => number): Float64Array =>
  Float64Array.from({ length: rows }, (_, row) => value(row));
const wave =
  (period: number, phase = 0) =>
  (row: number) =>
    Math.sin((2 * Math.PI * row) / period + phase);

describe("dominant period", () => {
  test.each([4, 6.5, 14.57, 28.64, 60.1])("a pure wave of %d rows, to a hundredth", (period) => {
    for (const phase of [0, 1, 2.5]) {
      const found = dominantPeriod(series(500, wave(period, phase)))!;
      expect(Math.abs(found.rows / period - 1)).toBeLessThan(0.005);
      // between two rows the peak of a short wave is cut: cos(pi / 13) twice for a period of 6.5
      expect(found.coherence).toBeGreaterThan(0.85);
    }
  });

  test("a wave under a trend and noise", () => {
    const random = new MinimalStandard(3);
    const found = dominantPeriod(series(600, (row) => 0.3 + 0.01 * row + 0.1 * wave(14.57)(row) + 0.03 * random.normal()))!;
    expect(found.rows).toBeCloseTo(14.57, 1);
  });

  test("a zig-zag is a period of two", () => {
    expect(dominantPeriod(series(301, (row) => 0.3 + (row % 2) * 0.01))!.rows).toBe(2);
  });

  test("a wave with a strong second harmonic is not taken for half of it", () => {
    expect(dominantPeriod(series(500, (row) => wave(20)(row) + 0.4 * wave(10, 1)(row)))!.rows).toBeCloseTo(20, 1);
  });

  test("noise, slow decay, a constant and a straight line repeat nothing", () => {
    const random = new MinimalStandard(5);
    for (let count = 0; count < 40; count += 1) {
      expect(dominantPeriod(autoregressive(random, 1000, 0))).toBeNull();
      expect(dominantPeriod(autoregressive(random, 2000, 0.9))).toBeNull();
    }
    expect(dominantPeriod(series(300, (row) => Math.exp(-row / 40)))).toBeNull();
    expect(dominantPeriod(series(300, () => 0.3))).toBeNull();
    expect(dominantPeriod(new Float64Array(3))).toBeNull();
  });
});

describe("means over whole periods", () => {
  test("the swing is gone, whatever the phase and however odd the period", () => {
    for (const period of [2, 7, 14.57]) {
      for (const value of periodMeans(
        series(400, (row) => 0.3 + wave(period, 0.7)(row)),
        period,
      ))
        expect(Math.abs(value - 0.3)).toBeLessThan(0.01);
    }
  });

  test("they add up to the sum of the rows they cover, counted from the end", () => {
    const values = series(47, (row) => row * row);
    const means = periodMeans(values, 4.5);
    expect(means).toHaveLength(10);
    const covered = values.slice(2).reduce((sum, value) => sum + value, 0);
    expect(means.reduce((sum, value) => sum + 4.5 * value, 0)).toBeCloseTo(covered, 8);
  });

  test("whole rows are plain means", () => {
    expect([...periodMeans(Float64Array.of(9, 1, 2, 3, 4, 5, 6), 3)]).toEqual([2, 5]);
  });
});

test("a trend is found and taken off", () => {
  const values = series(100, (row) => 5 + 0.25 * row);
  expect(trendOf(values)).toEqual({ slope: expect.closeTo(0.25, 12), centre: expect.closeTo(5 + 0.25 * 49.5, 10) });
  for (const value of withoutTrend(values)) expect(Math.abs(value)).toBeLessThan(1e-12);
});
