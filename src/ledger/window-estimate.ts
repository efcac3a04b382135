import { settle } from "../history/settle.js";
import type { Settling } from "../history/settling.js";
import { fewestSamples, windowMean } from "../history/window-mean.js";

/** Mean of one quantity over the ledger's window and how well it is known. */
export interface WindowEstimate {
  mean: number;
  /** of the 95 % interval; null when the rows are too few for one */
  halfWidth: number | null;
  /** Infinity where the half-width is a bound and not a statistic */
  degreesOfFreedom: number;
  /** the quantity's own history has a usable mean */
  usable: boolean;
}

const confidence = 0.95;
/** Below this, Student's t makes the interval so wide that it says nothing: none is given. */
const fewestForInterval = 3;
const fewestRows = 10;

/**
 * The mean is the plain one over rows [first, end) of all quantities alike, so entries of a ledger add up. The half-width is that of the
 * quantity's own settling, widened by the distance of the two means. A history that has not settled gets the half-width of its window if
 * that is wider, and while it drifts the change over the window as well: as far as the mean of another window like it would move.
 *
 * @param target half-width asked of the quantity; a smaller change does not matter
 * @param known settling of the same values with the same target, when it is there already
 */
export function estimateFrom(values: Float64Array, first: number, target: number | undefined, known?: Settling): WindowEstimate {
  const inside = values.subarray(first);
  const mean = plainMean(inside);
  const unknown: WindowEstimate = { mean, halfWidth: null, degreesOfFreedom: 1, usable: false };
  if (inside.length < fewestRows || !Number.isFinite(mean)) return unknown;
  const settling = known ?? settle(values, { confidence, ...(target === undefined ? {} : { halfWidth: target }) });
  if (settling.verdict === "settled" || settling.verdict === "oscillating")
    return {
      mean,
      halfWidth: settling.halfWidth + Math.abs(settling.mean - mean),
      degreesOfFreedom: settling.effectiveSamples >= fewestSamples ? settling.effectiveSamples - 1 : Number.POSITIVE_INFINITY,
      usable: true,
    };
  const { halfWidth, effectiveSamples, drifts, change } = windowMean(inside, 0, target ?? null, confidence);
  if (effectiveSamples < fewestForInterval || !Number.isFinite(halfWidth)) return unknown;
  const own = settling.halfWidth + Math.abs(settling.mean - mean);
  const moving = halfWidth + (drifts ? Math.abs(change) : 0);
  return {
    mean,
    halfWidth: Number.isFinite(own) ? Math.max(moving, own) : moving,
    degreesOfFreedom: effectiveSamples - 1,
    usable: false,
  };
}

/** Sum of deviations from the first value: a small spread about a large mean keeps its digits. */
function plainMean(values: Float64Array): number {
  const origin = values[0] ?? Number.NaN;
  let sum = 0;
  for (const value of values) sum += value - origin;
  return origin + sum / values.length;
}
