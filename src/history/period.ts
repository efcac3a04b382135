import { autocovariances, mean } from "./correlation.js";

/** Autocorrelation that the first peak must exceed to count as a period. */
const peak = 0.5;

export interface Period {
  /** rows, not whole in general; at least 2 */
  rows: number;
  /** autocorrelation at that lag, 0..1: 1 is a pure cycle */
  coherence: number;
}

/**
 * Dominant period of a series: the first autocorrelation peak above 0.5 after the first zero crossing, sharpened by a parabola
 * and by the peaks at its multiples. Null when the series does not repeat. A zig-zag of two rows is a period of 2.
 */
export function dominantPeriod(values: Float64Array): Period | null {
  const rows = values.length;
  const covariances = autocovariances(withoutTrend(values));
  const variance = covariances[0]!;
  if (!(variance > 0)) return null;
  // Fewer than three repetitions are no evidence.
  const longest = Math.floor(rows / 3);
  // Without the factor n / (n - lag) far peaks of a pure cycle would look damped.
  const at = (lag: number): number => ((covariances[lag]! / variance) * rows) / (rows - lag);
  let lag = 1;
  while (lag < longest && at(lag) > 0) lag += 1;
  let most = 0;
  for (let each = lag; each < longest; each += 1) if (at(each) > most) most = at(each);
  if (most < peak) return null;
  const wanted = Math.max(peak, 0.8 * most);
  while (lag < longest - 1 && !(at(lag) >= wanted && at(lag) >= at(lag - 1) && at(lag) >= at(lag + 1))) lag += 1;
  if (lag >= longest - 1) return null;
  let period = lag + vertex(at(lag - 1), at(lag), at(lag + 1));
  const coherence = at(lag);
  for (let multiple = 2; multiple * period < longest - period / 2 - 1; multiple += 1) {
    const expected = multiple * period;
    const reach = Math.max(1, Math.floor(period / 4));
    let best = Math.round(expected);
    for (let each = Math.round(expected) - reach; each <= Math.round(expected) + reach; each += 1)
      if (at(each) > at(best)) best = each;
    if (at(best) < peak) break;
    period = (best + vertex(at(best - 1), at(best), at(best + 1))) / multiple;
  }
  return { rows: Math.max(2, period), coherence: Math.min(1, coherence) };
}

/** Place of the top of the parabola through three neighbouring values, -0.5 .. 0.5 of the middle one. */
function vertex(left: number, middle: number, right: number): number {
  const curvature = left - 2 * middle + right;
  return curvature < 0 ? Math.max(-0.5, Math.min(0.5, (0.5 * (left - right)) / curvature)) : 0;
}

export interface Trend {
  /** per row */
  slope: number;
  /** value of the line in the middle of the series */
  centre: number;
}

/** Straight line through a series by least squares. */
export function trendOf(values: Float64Array): Trend {
  const rows = values.length;
  const centre = mean(values);
  const middle = (rows - 1) / 2;
  let products = 0;
  for (let row = 0; row < rows; row += 1) products += (row - middle) * (values[row]! - centre);
  const squares = (rows * (rows * rows - 1)) / 12;
  return { slope: rows > 1 ? products / squares : 0, centre };
}

export function withoutTrend(values: Float64Array): Float64Array {
  const { slope, centre } = trendOf(values);
  const middle = (values.length - 1) / 2;
  return values.map((value, row) => value - centre - slope * (row - middle));
}

/**
 * Means over whole periods, back from the end; a period that is not whole takes its share of the rows at its edges. The rows left
 * over at the start are not used.
 */
export function periodMeans(values: Float64Array, period: number): Float64Array {
  const count = Math.floor(values.length / period);
  const sums = new Float64Array(values.length + 1);
  const origin = values[values.length - 1]!;
  for (let row = 0; row < values.length; row += 1) sums[row + 1] = sums[row]! + (values[row]! - origin);
  const sumTo = (edge: number): number => {
    const whole = Math.min(values.length, Math.max(0, Math.floor(edge)));
    const rest = edge - whole;
    return rest > 0 && whole < values.length ? sums[whole]! + rest * (values[whole]! - origin) : sums[whole]!;
  };
  const start = values.length - count * period;
  return Float64Array.from({ length: count }, (_, index) => {
    const from = start + index * period;
    return origin + (sumTo(from + period) - sumTo(from)) / period;
  });
}
