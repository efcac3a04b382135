import { autocovariances, initialSequence, mean, overlappingBatches, variance } from "./correlation.js";
import { dominantPeriod, type Period, periodMeans, trendOf, withoutTrend } from "./period.js";
import { studentQuantile } from "./student.js";

/** Independent samples (or whole periods) that an interval must rest on. */
export const fewestSamples = 10;
/** With fewer, a t quantile has less than one degree of freedom and says nothing: the half-width is not known. */
const fewestForWidth = 2;
/** Change over the window that matters when no half-width is asked for, as a share of the mean. */
const smallShare = 1e-3;
/** Significance that a trend must have: one history in a hundred without drift is called drifting. */
const trendConfidence = 0.99;

/** Mean and interval over one window. */
export interface WindowMean {
  firstRow: number;
  rows: number;
  mean: number;
  standardDeviation: number;
  halfWidth: number;
  effectiveSamples: number;
  period: Period | null;
  /** change of the trend line over the window */
  change: number;
  /** the change exceeds both what noise makes and what matters */
  drifts: boolean;
  /** What the interval rests on: the rows, or the means over whole periods. */
  samples: Float64Array;
}

/** Size of a change of the mean that matters. */
export const mattering = (target: number | null, centre: number): number => target ?? smallShare * Math.abs(centre);

/**
 * Mean of the rows from `firstRow` on with its interval.
 *
 * Where the rows repeat, the window is cut at its start to whole periods, and from ten periods on their means are the samples:
 * the swing inside a period says nothing about the mean. The long-run variance is the larger of Geyer's initial monotone sequence
 * and overlapping batch means; effective samples n_eff = n s2 / (long-run variance), at most n (so negative correlation never
 * narrows the interval); half-width t(n_eff - 1) sqrt(long-run variance / n). A trend is tested by least squares, its error from
 * the long-run variance of the residuals (12 S / n^3). A significant trend too small to matter adds half its change to the
 * half-width.
 *
 * @param target half-width wanted; null: none
 */
export function windowMean(values: Float64Array, firstRow: number, target: number | null, confidence: number): WindowMean {
  const tail = values.subarray(firstRow);
  const period = dominantPeriod(tail);
  let window = tail;
  let samples = tail;
  if (period !== null) {
    const count = Math.floor(tail.length / period.rows);
    const whole = Math.min(tail.length, Math.round(count * period.rows));
    window = tail.subarray(tail.length - whole);
    samples = count >= fewestSamples ? periodMeans(tail, period.rows) : window;
  }
  const spread = variance(samples);
  const longRun = longRunVariance(samples);
  const count = samples.length;
  let effectiveSamples = longRun > 0 ? Math.min(count, (count * spread) / longRun) : count;
  // A few repetitions of a slow swing are no more evidence than their number.
  if (period !== null && samples === window) effectiveSamples = Math.min(effectiveSamples, count / period.rows);
  effectiveSamples = Math.max(1, effectiveSamples);
  const trend = trendOf(samples);
  const change = trend.slope * (count - 1);
  const residuals = withoutTrend(samples);
  const noise = longRunVariance(residuals);
  const freedom = Math.max(1, (noise > 0 ? Math.min(count, (count * variance(residuals)) / noise) : count) - 2);
  const limit = studentQuantile(0.5 + trendConfidence / 2, freedom) * Math.sqrt((12 * noise) / count ** 3);
  const significant = Math.abs(trend.slope) > limit && Math.abs(change) > 1e-12 * Math.abs(trend.centre);
  const drifts = significant && Math.abs(change) > mattering(target, trend.centre) / 2;
  let halfWidth = 0;
  if (longRun > 0) {
    const quantile =
      effectiveSamples >= fewestForWidth ? studentQuantile(0.5 + confidence / 2, effectiveSamples - 1) : Number.POSITIVE_INFINITY;
    halfWidth = quantile * Math.sqrt(longRun / Math.max(1, count - 1));
  }
  if (significant && !drifts) halfWidth += Math.abs(change) / 2;
  return {
    firstRow: firstRow + tail.length - window.length,
    rows: window.length,
    mean: mean(samples),
    standardDeviation: Math.sqrt(variance(window)),
    halfWidth,
    effectiveSamples,
    period,
    change,
    drifts,
    samples,
  };
}

/** Share of the rows that the summed lags may span; beyond it the correction for the estimated mean blows up. */
const mostSpan = 0.9;

/**
 * The larger of Geyer's and the overlapping-batch estimate, at least the variance. Deviations are taken from the estimated mean,
 * which makes every autocovariance too small by about (long-run variance) / n (Priestley 1981, 5.3.2); a sum over lags -K .. K is
 * made whole by n / (n - 2K - 1).
 */
function longRunVariance(values: Float64Array): number {
  const count = values.length;
  const covariances = autocovariances(values);
  const geyer = initialSequence(covariances);
  const span = Math.min(mostSpan * count, 4 * geyer.pairs - 1);
  const size = Math.floor(Math.sqrt(count));
  return Math.max((geyer.value * count) / (count - span), overlappingBatches(values, size), covariances[0]!);
}

/**
 * Bound for a history that approaches its end value (steady iterations near convergence): the largest distance of a sample from
 * the mean plus the way still to go, taken from the means of three thirds: a change that shrinks from third to third by a factor
 * q goes on as the geometric series q / (1 - q), but at most at its rate for one more window. Infinity for fewer than three
 * samples.
 */
export function bandOf({ samples, mean: centre }: WindowMean): number {
  let farthest = 0;
  for (const sample of samples) farthest = Math.max(farthest, Math.abs(sample - centre));
  const third = Math.floor(samples.length / 3);
  if (third === 0) return Number.POSITIVE_INFINITY;
  const [first, second, last] = [3, 2, 1].map((from) =>
    mean(samples.subarray(samples.length - from * third, samples.length - (from - 1) * third)),
  ) as [number, number, number];
  const [before, now] = [second - first, last - second];
  if (now === 0 || before * now < 0) return farthest + Math.abs(now);
  const factor = now / before;
  const toGo = factor < 1 ? factor / (1 - factor) : Number.POSITIVE_INFINITY;
  return farthest + Math.abs(now) * Math.min(3, toGo);
}

/** The spread of the second half is at most half that of the first: a history on its way to a constant, not one that wanders. */
export function calmsDown(samples: Float64Array): boolean {
  const half = Math.floor(samples.length / 2);
  return half >= 2 && variance(samples.subarray(half)) <= variance(samples.subarray(0, half)) / 4;
}
