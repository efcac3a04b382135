import { powerCorrelation } from "./fourier.js";

/** Arithmetic mean. Sums deviations from the first value, so that a small spread about a large mean keeps its digits. */
export function mean(values: Float64Array): number {
  if (values.length === 0) return Number.NaN;
  const origin = values[0]!;
  let sum = 0;
  for (const value of values) sum += value - origin;
  return origin + sum / values.length;
}

/** Population variance (divisor n), by the two-pass rule. */
export function variance(values: Float64Array): number {
  const centre = mean(values);
  let sum = 0;
  for (const value of values) sum += (value - centre) ** 2;
  return sum / values.length;
}

/** Autocorrelation at one lag: sum (x_i - m)(x_{i+lag} - m) / sum (x_i - m)^2; NaN for a constant series. */
export function autocorrelation(values: Float64Array, lag: number): number {
  const centre = mean(values);
  let products = 0;
  let squares = 0;
  for (let row = 0; row < values.length; row += 1) {
    const deviation = values[row]! - centre;
    squares += deviation * deviation;
    if (row + lag < values.length) products += deviation * (values[row + lag]! - centre);
  }
  return products / squares;
}

/** Series length from which the transform is faster than direct sums. */
const manyRows = 256;

/** Biased autocovariances (divisor n) at lags 0 .. n - 1. Direct sums for short series, a Fourier transform for long ones. */
export function autocovariances(values: Float64Array): Float64Array {
  const rows = values.length;
  const centre = mean(values);
  const deviations = values.map((value) => value - centre);
  if (rows >= manyRows) return powerCorrelation(deviations).map((sum) => sum / rows);
  return Float64Array.from({ length: rows }, (_, lag) => {
    let sum = 0;
    for (let row = 0; row + lag < rows; row += 1) sum += deviations[row]! * deviations[row + lag]!;
    return sum / rows;
  });
}

export interface LongRunVariance {
  /** n Var(mean) for large n: the variance that one row of the mean stands for, correlation included */
  value: number;
  /** pairs of lags that were summed */
  pairs: number;
}

/**
 * Long-run variance by the initial sequence of Geyer ("Practical Markov chain Monte Carlo", Statist. Sci. 7, 1992): sums of
 * neighbouring autocovariances are added until one is not positive; in the monotone variant none counts more than the one before.
 *
 * @param covariances biased autocovariances from lag 0 on
 */
export function initialSequence(covariances: Float64Array, monotone = true): LongRunVariance {
  let sum = 0;
  let pairs = 0;
  let most = Number.POSITIVE_INFINITY;
  for (let lag = 0; lag + 1 < covariances.length; lag += 2) {
    let pair = covariances[lag]! + covariances[lag + 1]!;
    if (!(pair > 0)) break;
    if (monotone && pair > most) pair = most;
    most = pair;
    sum += pair;
    pairs += 1;
  }
  return { value: Math.max(0, 2 * sum - covariances[0]!), pairs };
}

/**
 * Long-run variance by overlapping batch means (Meketon and Schmeiser 1984): n m / ((n - m)(n - m + 1)) times the sum of the
 * squared deviations of all n - m + 1 batch means from the mean.
 *
 * @param size rows per batch, 1 <= size < n
 */
export function overlappingBatches(values: Float64Array, size: number): number {
  const rows = values.length;
  const centre = mean(values);
  let window = 0;
  let squares = 0;
  for (let row = 0; row < rows; row += 1) {
    window += values[row]! - centre;
    if (row >= size) window -= values[row - size]! - centre;
    if (row >= size - 1) squares += (window / size) ** 2;
  }
  return ((rows * size) / ((rows - size) * (rows - size + 1))) * squares;
}
