import { type Finding, finding } from "../finding.js";
import { mean, variance } from "./correlation.js";
import { dominantPeriod, periodMeans } from "./period.js";
import type { Settling, SettlingVerdict } from "./settling.js";
import { type StartUp, startUp, startUpBatches } from "./start-up.js";
import { studentQuantile } from "./student.js";
import { bandOf, calmsDown, fewestSamples, mattering, type WindowMean, windowMean } from "./window-mean.js";

export interface SettleOptions {
  /** Half-width wanted, in the unit of the values. Without it no size of the interval is asked for. */
  halfWidth?: number;
  /** Probability of the interval, 0.95 unless told otherwise. */
  confidence?: number;
  /**
   * A magnitude that no healthy value reaches in the second half of a run; the default fits coefficients and forces of vehicles.
   */
  runaway?: number;
}

/** What every step of the judgement needs to know of the call. */
interface Asked {
  target: number | null;
  confidence: number;
  /** rows per value that is judged */
  group: number;
}

/** Fewer rows than this hold no ten batches of five: nothing can be said. */
export const fewestRows = 50;
/** A history that wanders within this part of the target is as good as constant. */
const farInside = 3;
const defaultRunaway = 1e6;
/** Longer histories are judged by means over a few rows: the interval hardly changes, the time does. */
const mostRows = 16_384;

/**
 * Whether the mean of a history is known, and how well. Rows are equally spaced (iterations or time steps of one size).
 *
 * 1. Start-up: MSER-5 (`startUp`), on means over whole periods where the history repeats. A cut that the rows do not ask for (those
 *    before it look like those after it) is taken back.
 * 2. Window: the rows after it, cut further while a significant trend remains; whole periods of a limit cycle or zig-zag.
 * 3. Interval: `windowMean`; on a limit cycle the samples are the means over whole periods.
 * 4. Verdict. `settled`: no drift, at least ten effective samples, half-width within the target (without a target only the first
 *    two), or all samples so close together that the mean cannot be off by more than the target. `oscillating`: the same, on a
 *    limit cycle whose swing is larger than the target: the mean is good, the flow is not steady. `not-yet`, `drifting`: more
 *    rows are needed; the mean is given for orientation. `diverged`, `zero`, `too-short`, `no-data`: no mean.
 *
 * A steady run that creeps into a constant never leaves its start-up by the rule (each later cut has less spread). It is settled
 * when a window of at least a quarter of the rows calms down and the way seen plus the way to go (`bandOf`) is within the target;
 * that bound is then the half-width.
 *
 * Measured on made-up histories (AR(1), phi 0.9, 1000 rows, no target): intervals of 95 % held the mean in 94 % of 400. With
 * fewer than about ten correlation times in the window the correlation is underestimated and a history can look settled too
 * early.
 *
 * A drift that changes the mean by less than half the target over the window is no drift; half of it is added to the half-width.
 * `stillNeeded` extrapolates the half-width with 1/sqrt(rows).
 *
 * @param values one per row, from the start of the run; missing cells (NaN) are allowed at the start only
 */
export function settle(values: Float64Array, options: SettleOptions = {}): Settling {
  const missing = values.findIndex((value) => !Number.isNaN(value));
  if (missing < 0)
    return withoutMean("no-data", values.length, "there is no value", "Check that the function object wrote this quantity.");
  const rows = values.length;
  const known = values.subarray(missing);
  const half = Math.floor(known.length / 2);
  const most = options.runaway ?? defaultRunaway;
  const spoilt = known.findIndex((value, row) => !Number.isFinite(value) || (row >= half && Math.abs(value) > most));
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
  const group = Math.ceil(known.length / mostRows);
  const asked: Asked = { target: options.halfWidth ?? null, confidence: options.confidence ?? 0.95, group };
  const samples = group === 1 ? known : periodMeans(known, group);
  const cut = cutOf(samples);
  const settling = cut.open ? lateStart(samples, cut.rows, asked) : window(samples, cut.rows, asked);
  return inRows(settling, values, group, samples.length * group);
}

/** A judgement of means over `group` rows, in rows of the whole history; the groups cover its last `covered` rows. */
function inRows(settling: Settling, values: Float64Array, group: number, covered: number): Settling {
  const firstRow = values.length - covered + settling.firstRow * group;
  const rows = settling.rows * group;
  return {
    ...settling,
    startUp: firstRow,
    firstRow,
    rows,
    period: settling.period === null ? null : settling.period * group,
    stillNeeded: settling.stillNeeded === null ? null : settling.stillNeeded * group,
    standardDeviation: group === 1 ? settling.standardDeviation : Math.sqrt(variance(values.subarray(firstRow, firstRow + rows))),
  };
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
 * Takes back what was cut by chance: the start-up rule follows the noise, and a window chosen for its small spread gives an
 * interval that is too narrow. Rows before the cut that look like those after it (mean within the noise, spread no larger) are no
 * start-up.
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
function window(values: Float64Array, cut: number, asked: Asked): Settling {
  const first = windowMean(values, cut, asked.target, asked.confidence);
  let start = withoutIdleCut(values, cut, first);
  let judged = start === cut ? first : windowMean(values, start, asked.target, asked.confidence);
  // A slow tail that the start-up rule left in: cut a quarter at a time, never below a third of all rows.
  while (judged.drifts) {
    const next = start + Math.ceil((values.length - start) / 4);
    if (values.length - next < Math.max(fewestRows, values.length / 3)) break;
    const later = windowMean(values, next, asked.target, asked.confidence);
    start = next;
    judged = later;
  }
  if (judged.drifts) {
    const last = windowMean(values, Math.floor(values.length / 2), asked.target, asked.confidence);
    return report(last, "drifting", [driftFinding(last)]);
  }
  return verdictOf(judged, asked, 0);
}

/**
 * The start-up rule found no steady stretch. A history that runs into a constant still counts when the rest of its way is below
 * the target.
 */
function lateStart(values: Float64Array, cut: number, asked: Asked): Settling {
  const half = Math.floor(values.length / 2);
  const last = windowMean(values, half, asked.target, asked.confidence);
  const latest = values.length - Math.max(fewestRows, Math.ceil(values.length / 4));
  let best: { judged: WindowMean; band: number } | null = null;
  const steps = 8;
  for (let step = 0; step <= steps && latest >= half; step += 1) {
    const judged = windowMean(values, half + Math.floor(((latest - half) * step) / steps), asked.target, asked.confidence);
    const band = bandOf(judged);
    const wanted = mattering(asked.target, judged.mean);
    // One that wanders must stay far inside the target to count; one that calms down must only be inside.
    const inside = band <= (calmsDown(judged.samples) ? wanted : wanted / farInside);
    if (inside && !(best !== null && best.band <= band)) best = { judged, band };
  }
  if (best !== null) {
    const { judged, band } = best;
    const slow = finding(
      "slow-approach",
      "note",
      "the window still approaches its end value; the half-width covers the way seen and the way to go",
      "Run on if a narrower interval is wanted.",
    );
    const verdict = swings(judged, asked) ? "oscillating" : "settled";
    return report({ ...judged, halfWidth: band }, verdict, [...swingFindings(judged, asked), slow]);
  }
  // Noise alone puts the least criterion into the second half now and then: rows that look alike throughout have no start-up.
  const from = withoutIdleCut(values, half, last);
  if (from < half / 2) return window(values, from, asked);
  const open = finding(
    "start-up-open",
    "warning",
    "the start-up reaches into the second half of the rows: there is no steady stretch yet (MSER-5)",
    "Run on.",
  );
  if (last.drifts) return report(last, "drifting", [open, driftFinding(last)]);
  return verdictOf(last, asked, Math.max(5, 2 * cut - values.length), open);
}

/** The history repeats with a swing that matters. */
const swings = (judged: WindowMean, asked: Asked): boolean =>
  judged.period !== null && judged.standardDeviation * Math.SQRT2 > mattering(asked.target, judged.mean);

function swingFindings(judged: WindowMean, asked: Asked): Finding[] {
  if (judged.period === null || !swings(judged, asked)) return [];
  const swing = (judged.standardDeviation * Math.SQRT2).toPrecision(2);
  const length = judged.period.rows * asked.group;
  if (length < 2.5) {
    const message = `the values alternate from row to row by ${swing}; the window holds an even number of rows`;
    return [finding("zig-zag", "note", message, "Lower relaxation factors damp it.")];
  }
  const message = `the values repeat every ${length.toPrecision(3)} rows with a swing of ${swing}; the window holds whole periods`;
  return [
    finding("limit-cycle", "note", message, "The flow has no steady state on this mesh; the mean over whole periods is used."),
  ];
}

function driftFinding(judged: WindowMean): Finding {
  const change = judged.change.toPrecision(2);
  return finding("drift", "warning", `the mean still changes by ${change} over the window`, "Run on until the drift has ended.");
}

/** @param needed rows that are missing whatever the interval; more than 0 forbids `settled`, with the finding that says why */
function verdictOf(judged: WindowMean, asked: Asked, needed: number, open: Finding | null = null): Settling {
  const findings = [...(open === null ? [] : [open]), ...swingFindings(judged, asked)];
  const enough = judged.effectiveSamples >= fewestSamples;
  const { target } = asked;
  const narrow = target === null || judged.halfWidth <= target;
  const band = bandOf(judged);
  const banded = band <= mattering(asked.target, judged.mean);
  if (needed === 0 && ((enough && narrow) || banded)) {
    const halfWidth = enough && narrow ? judged.halfWidth : band;
    return report({ ...judged, halfWidth }, swings(judged, asked) ? "oscillating" : "settled", findings);
  }
  if (!enough) {
    const samples = judged.effectiveSamples.toFixed(1);
    findings.push(
      finding(
        "few-samples",
        "warning",
        `the window of ${judged.rows * asked.group} rows is worth only ${samples} independent samples; ${fewestSamples} are needed`,
        "Run on.",
      ),
    );
  }
  // With more samples the quantile shrinks too.
  const quantile = (samples: number): number => studentQuantile(0.5 + asked.confidence / 2, samples - 1);
  const shrink = quantile(Math.max(judged.effectiveSamples, fewestSamples)) / quantile(judged.effectiveSamples);
  const forWidth = target === null ? 0 : judged.rows * ((judged.halfWidth * shrink) / target) ** 2 - judged.rows;
  const forSamples = enough ? 0 : judged.rows * (fewestSamples / judged.effectiveSamples) - judged.rows;
  // Without an interval only the samples can be extrapolated.
  const more = Math.max(Number.isFinite(forWidth) ? forWidth : 0, forSamples, needed, 1);
  return { ...report(judged, "not-yet", findings), stillNeeded: Math.ceil(more) };
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
