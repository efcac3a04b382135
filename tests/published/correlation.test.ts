import { describe, expect, test } from "vitest";
import {
  autocorrelation,
  autocovariances,
  initialSequence,
  mean,
  overlappingBatches,
  variance,
} from "../../src/history/correlation.js";
import { MinimalStandard } from "../helpers/random.js";

/** The series of the check values: 24 000 draws, twelve to a normal number, phi = 0.9, 2000 rows. */
function minimalStandardSeries(): Float64Array {
  const random = new MinimalStandard(1);
  const innovations = Float64Array.from({ length: 2000 }, () => random.roughNormal());
  const values = new Float64Array(2000);
  values[0] = innovations[0]! / Math.sqrt(1 - 0.81);
  for (let row = 1; row < 2000; row += 1) values[row] = 0.9 * values[row - 1]! + innovations[row]!;
  return values;
}

/** Exact autocovariances phi^k and a long tail, as if estimated without error. */
const exact = (rows: number, covariance: (lag: number) => number): Float64Array =>
  Float64Array.from({ length: rows }, (_, lag) => covariance(lag));

describe("a series that everybody can make", () => {
  const values = minimalStandardSeries();

  test("the generator is Park and Miller's: after 10 000 steps 1043618065 (CACM 1988, from memory)", () => {
    const random = new MinimalStandard(1);
    let state = 0;
    for (let step = 0; step < 10_000; step += 1) state = random.next();
    expect(state).toBe(1043618065);
  });

  // Computed with statsmodels 0.13.5 and with numpy from the same series.
  test("mean, variance and autocorrelations", () => {
    expect(mean(values)).toBeCloseTo(-0.102975682914, 11);
    expect(variance(values)).toBeCloseTo(5.348715661439, 10);
    expect([1, 2, 3].map((lag) => autocorrelation(values, lag))).toEqual([
      expect.closeTo(0.90405947, 8),
      expect.closeTo(0.81916166, 8),
      expect.closeTo(0.73996722, 8),
    ]);
  });

  test("Geyer's initial positive sequence and overlapping batch means", () => {
    const geyer = initialSequence(autocovariances(values), false);
    expect(geyer.pairs).toBe(15);
    expect(geyer.value).toBeCloseTo(104.566454461, 8);
    expect((2000 * variance(values)) / geyer.value).toBeCloseTo(102.3027, 4);
    expect(overlappingBatches(values, 100)).toBeCloseTo(85.3604010042, 9);
  });

  test("the Fourier transform and the direct sums agree", () => {
    const covariances = autocovariances(values);
    for (const lag of [0, 1, 2, 17, 500, 1999]) {
      expect(covariances[lag]! / variance(values)).toBeCloseTo(autocorrelation(values, lag), 12);
    }
    const short = values.slice(0, 200);
    const direct = autocovariances(short);
    for (const lag of [0, 1, 5, 199]) expect(direct[lag]! / variance(short)).toBeCloseTo(autocorrelation(short, lag), 12);
  });
});

describe("exact results for autoregressive series", () => {
  test.each([0, 0.5, 0.9, 0.95, 0.99])(
    "AR(1), phi = %d: the long-run variance is (1 + phi) / (1 - phi) times the variance",
    (phi) => {
      const { value } = initialSequence(exact(20_000, (lag) => phi ** lag));
      expect(value).toBeCloseTo((1 + phi) / (1 - phi), 9);
    },
  );

  test("AR(1), phi = -0.5: negative correlation makes the mean better known", () => {
    expect(initialSequence(exact(1000, (lag) => (-0.5) ** lag)).value).toBeCloseTo(1 / 3, 9);
  });

  test("AR(2) 1.6, -0.8: variance 13.235294, long-run variance 25; the first lag alone would give nine times too much", () => {
    const covariances = new Float64Array(4000);
    covariances[0] = 13.235294117647058;
    covariances[1] = covariances[0] * (1.6 / 1.8);
    for (let lag = 2; lag < 4000; lag += 1) covariances[lag] = 1.6 * covariances[lag - 1]! - 0.8 * covariances[lag - 2]!;
    expect(covariances[2]! / covariances[0]).toBeCloseTo(0.622222, 6);
    const whole = 2 * covariances.reduce((sum, value) => sum + value, 0) - covariances[0];
    expect(whole).toBeCloseTo(25, 9);
    // Geyer's sequence stops where an oscillating covariance first turns negative, so it errs to the safe side.
    const { value } = initialSequence(covariances);
    expect(value).toBeGreaterThan(25);
    expect(value).toBeLessThan(13.235294 * 17);
  });

  test("batch means on AR(1) 0.9, n 1000, batches of 100, are 8.6 % low on average, as the exact formula says", () => {
    const exactVariance = (rows: number, phi: number): number =>
      ((1 + phi) / (1 - phi) - (2 * phi * (1 - phi ** rows)) / (rows * (1 - phi) ** 2)) / rows;
    expect(exactVariance(1000, 0.9)).toBeCloseTo(0.01882, 10);
    expect(exactVariance(100, 0.9)).toBeCloseTo(0.1720004781, 10);
    expect(exactVariance(100, -0.5)).toBeCloseTo(0.0033777778, 10);
    const random = new MinimalStandard(7);
    let sum = 0;
    const series = 300;
    for (let count = 0; count < series; count += 1) {
      let value = random.normal() / Math.sqrt(1 - 0.81);
      const values = Float64Array.from({ length: 1000 }, () => (value = 0.9 * value + random.normal()));
      sum += overlappingBatches(values, 100) / 1000;
    }
    // marginal variance 1 / 0.19; the expectation of overlapping and of separate batches is nearly the same
    expect(sum / series / (0.0172000478 / 0.19)).toBeGreaterThan(0.93);
    expect(sum / series / (0.0172000478 / 0.19)).toBeLessThan(1.07);
  });
});
