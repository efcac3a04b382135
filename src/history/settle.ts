import { type Finding, finding } from "../finding.js";
import { mean, variance } from "./correlation.js";
import { dominantPeriod, periodMeans } from "./period.js";
import type { Settling, SettlingVerdict } from "./settling.js";
import { type StartUp, startUp, startUpBatches } from "./start-up.js";
import { bandOf, calmsDown, fewestSamples, mattering, type WindowMean, windowMean } from "./window-mean.js";

export interface SettleOptions {
  /** Half-width wanted, in the unit of the values. Without it no size of the interval is asked for. */
  halfWidth?: number;
  /** Probability of the interval, 0.95 unless told otherwise. */
  confidence?: number;
  /** A magnitude no healthy value reaches; the default fits coefficients and forces of vehicles. */
  runaway?: number;
}

/** Fewer rows than this hold no ten batches of five: nothing can be said. */
export const fewestRows = 50;
const defaultRunaway = 1e6;

/**
 * Whether the mean of a history is known, and how well. Rows are equally spaced (iterations or time steps of one size).
 *
 * 1. Start-up: MSER-5 (`startUp`), its batches made a multiple of the period where the history repeats.
 * 2. Window: the rows after it, cut further while a significant trend remains; whole periods of a limit cycle or zig-zag.
 * 3. Interval: long-run variance, the larger of Geyer's initial monotone sequence and overlapping batch means; effective samples
 *    n_eff = n s2 / (long-run variance), at most n; Student's t with n_eff - 1 degrees of freedom. On a limit cycle the samples are
 *    the means over whole periods.
 * 4. Verdict. `settled`: no drift, at least ten effective samples, half-width within the target (without a target only the first two),
 *    or a band so narrow that no mean in it can be off by more than the target. `oscillating`: the same, on a limit cycle whose swing is larger
 *    than the target: the mean is good, the flow is not steady. `not-yet`, `drifting`: more rows are needed; the mean of the last half is given for
 *    orientation. `diverged`, `zero`, `too-short`, `no-data`: no mean.
 *
 * A drift that changes the mean by less than half the target over the window is no drift; half of it is added to the half-width.
 * `stillNeeded` extrapolates the half-width with 1/sqrt(rows).
 *
 * @param values one per row, from the start of the run; missing cells (NaN) are allowed at the start only
 */
export function settle(values: Float64Array, options: SettleOptions = {}): Settling {
  const confidence = options.confidence ?? 0.95;
  const target = options.halfWidth ?? null;
  const missing = values.findIndex((value) => !Number.isNaN(value));
  if (missing < 0)
    return withoutMean("no-data", values.length, "there is no value", "Check that the function object wrote this quantity.");
  const rows = values.length;
  const known = values.subarray(missing);
  const spoilt = known.findIndex((value) => !(Math.abs(value) <= (options.runaway ?? defaultRunaway)));
  if (spoilt >= 0) {
    const what = `row ${missing + spoilt + 1} holds ${known[spoilt]}`;
    return withoutMean("diverged", rows, `${what}: the run has diverged`, "Look at the mesh quality and the start of the run.");
  }
  if (known.every((value) => value === 0)) {
    return withoutMean("zero", rows, "every value is exactly zero", "Check that the patch names match patches of the mesh.");
  }
  if (known.length < fewestRows) {
    return {
      ...withoutMean("too-short", rows, `${known.length} rows are too few: at least ${fewestRows} are needed`, "Run on."),
      stillNeeded: fewestRows - known.length,
    };
  }
  const start = cutOf(known);
  const settling = start.open ? lateStart(known, start.rows, target, confidence) : window(known, start.rows, target, confidence);
  return { ...settling, startUp: settling.startUp + missing, firstRow: settling.firstRow + missing };
}

/** The start-up by batches of five rows; where the second half repeats, by means over whole periods of at least five rows. */
function cutOf(values: Float64Array): StartUp {
  const period = dominantPeriod(values.subarray(Math.floor(values.length / 2)));
  if (period === null) return startUp(values);
  const length = Math.ceil(5 / period.rows) * period.rows;
  const means = periodMeans(values, length);
  if (means.length < 20) return startUp(values);
  const cut = startUpBatches(means);
  return { ...cut, rows: cut.rows === 0 ? 0 : Math.ceil(values.length - (means.length - cut.rows) * length) };
}

/**
 * Takes back what was cut by chance: the start-up rule follows the noise, and a window chosen for its small spread gives an interval that is too narrow. Rows
 * before the cut that look like those after it (mean within the noise, spread no larger) are no start-up.
 */
function withoutIdleCut(values: Float64Array, cut: number, judged: WindowMean): number {
  // On a limit cycle the swing hides whether its mean still moves.
  if (judged.period !== null) return cut;
  const quarters = 4;
  const after = values.subarray(judged.firstRow);
  const spread = variance(after);
  const perRow = judged.effectiveSamples > 0 ? (spread * after.length) / judged.effectiveSamples : spread;
  for (let quarter = 0; quarter < quarters; quarter += 1) {
    const from = Math.floor((cut * quarter) / quarters);
    const before = values.subarray(from, cut);
    if (before.length === 0) break;
    const noise = Math.sqrt(perRow / before.length + perRow / after.length);
    if (Math.abs(mean(before) - judged.mean) <= 2 * noise && variance(before) <= 1.5 * spread) return from;
  }
  return cut;
}

/** The usual case: a start-up was found. */
function window(values: Float64Array, cut: number, target: number | null, confidence: number): Settling {
  let start = withoutIdleCut(values, cut, windowMean(values, cut, target, confidence));
  let judged = windowMean(values, start, target, confidence);
  // A slow tail that the start-up rule left in: cut a quarter at a time, never below a third of all rows.
  while (judged.drifts) {
    const next = start + Math.ceil((values.length - start) / 4);
    if (values.length - next < Math.max(fewestRows, values.length / 3)) break;
    const later = windowMean(values, next, target, confidence);
    start = next;
    judged = later;
  }
  if (judged.drifts) {
    const last = windowMean(values, Math.floor(values.length / 2), target, confidence);
    return report(last, "drifting", [driftFinding(last)]);
  }
  return verdictOf(judged, target, 0);
}

/** The start-up rule found no steady stretch. A history that runs into a constant still counts when the rest of its way is below the target. */
function lateStart(values: Float64Array, cut: number, target: number | null, confidence: number): Settling {
  const half = Math.floor(values.length / 2);
  const last = windowMean(values, half, target, confidence);
  const latest = values.length - Math.max(fewestRows, Math.ceil(values.length / 4));
  let best: { judged: WindowMean; band: number } | null = null;
  const steps = 8;
  for (let step = 0; step <= steps && latest >= half; step += 1) {
    const judged = windowMean(values, half + Math.floor(((latest - half) * step) / steps), target, confidence);
    const band = bandOf(judged);
    if (calmsDown(judged.samples) && band <= mattering(target, judged.mean) && !(best !== null && best.band <= band))
      best = { judged, band };
  }
  if (best !== null) {
    const { judged, band } = best;
    const slow = finding(
      "slow-approach",
      "note",
      `the rows from ${judged.firstRow + 1} on still approach their end value; the half-width covers the way seen and the way to go`,
      "Run on if a narrower interval is wanted.",
    );
    const verdict = swings(judged, target) ? "oscillating" : "settled";
    return report({ ...judged, halfWidth: band }, verdict, [...swingFindings(judged, target), slow]);
  }
  // Noise alone puts the least criterion into the second half now and then: rows that look alike throughout have no start-up.
  const from = withoutIdleCut(values, half, last);
  if (from < half / 2) return window(values, from, target, confidence);
  const open = finding(
    "start-up-open",
    "warning",
    "the start-up reaches into the second half of the rows: there is no steady stretch yet (MSER-5)",
    "Run on.",
  );
  if (last.drifts) return report(last, "drifting", [open, driftFinding(last)]);
  return verdictOf(last, target, Math.max(5, 2 * cut - values.length), open);
}

/** The history repeats with a swing that matters. */
const swings = (judged: WindowMean, target: number | null): boolean =>
  judged.period !== null && judged.standardDeviation * Math.SQRT2 > mattering(target, judged.mean);

function swingFindings(judged: WindowMean, target: number | null): Finding[] {
  if (judged.period === null || !swings(judged, target)) return [];
  const swing = (judged.standardDeviation * Math.SQRT2).toPrecision(2);
  if (judged.period.rows < 2.5) {
    const message = `the values alternate from row to row by ${swing}; the window holds an even number of rows`;
    return [finding("zig-zag", "note", message, "Lower relaxation factors damp it.")];
  }
  const message = `the values repeat every ${judged.period.rows.toPrecision(3)} rows with a swing of ${swing}; the window holds whole periods`;
  return [
    finding("limit-cycle", "note", message, "The flow has no steady state on this mesh; the mean over whole periods is used."),
  ];
}

function driftFinding(judged: WindowMean): Finding {
  const last = judged.firstRow + judged.rows;
  return finding(
    "drift",
    "warning",
    `the mean still changes by ${judged.change.toPrecision(2)} over rows ${judged.firstRow + 1} to ${last}`,
    "Run on until the drift has ended.",
  );
}

/** @param needed rows that are missing whatever the interval; more than 0 forbids `settled`, with the finding that says why */
function verdictOf(judged: WindowMean, target: number | null, needed: number, open: Finding | null = null): Settling {
  const findings = [...(open === null ? [] : [open]), ...swingFindings(judged, target)];
  const enough = judged.effectiveSamples >= fewestSamples;
  const narrow = target === null || judged.halfWidth <= target;
  const band = bandOf(judged);
  const banded = band <= mattering(target, judged.mean);
  if (needed === 0 && ((enough && narrow) || banded)) {
    const halfWidth = enough && narrow ? judged.halfWidth : band;
    return report({ ...judged, halfWidth }, swings(judged, target) ? "oscillating" : "settled", findings);
  }
  if (!enough) {
    const samples = judged.effectiveSamples.toFixed(1);
    findings.push(
      finding(
        "few-samples",
        "warning",
        `the window of ${judged.rows} rows is worth only ${samples} independent samples; ${fewestSamples} are needed`,
        "Run on.",
      ),
    );
  }
  const forWidth = target === null ? 0 : judged.rows * (judged.halfWidth / target) ** 2 - judged.rows;
  const forSamples = enough ? 0 : judged.rows * (fewestSamples / judged.effectiveSamples) - judged.rows;
  const more = Math.max(forWidth, forSamples, needed, 1);
  return { ...report(judged, "not-yet", findings), stillNeeded: Number.isFinite(more) ? Math.ceil(more) : null };
}

function report(judged: WindowMean, verdict: SettlingVerdict, findings: Finding[]): Settling {
  return {
    verdict,
    mean: judged.mean,
    halfWidth: judged.halfWidth,
    startUp: judged.firstRow,
    firstRow: judged.firstRow,
    rows: judged.rows,
    effectiveSamples: judged.effectiveSamples,
    period: judged.period?.rows ?? null,
    stillNeeded: null,
    standardDeviation: judged.standardDeviation,
    findings,
  };
}

function withoutMean(verdict: SettlingVerdict, rows: number, message: string, remedy: string): Settling {
  return {
    verdict,
    mean: Number.NaN,
    halfWidth: Number.POSITIVE_INFINITY,
    startUp: 0,
    firstRow: 0,
    rows,
    effectiveSamples: 0,
    period: null,
    stillNeeded: null,
    standardDeviation: Number.NaN,
    findings: [finding(verdict, verdict === "too-short" ? "warning" : "error", message, remedy)],
  };
}
