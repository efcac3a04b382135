import { type Finding, finding } from "../finding.js";
import { windowMean } from "../history/window-mean.js";
import { axleLift } from "./axles.js";
import type { CaseRecord } from "./case-record.js";
import { closingOf } from "./closing.js";
import type { Entry, Estimate, LedgerRun } from "./ledger.js";
import type { PartSeries } from "./part-series.js";
import { forcePerCoefficient } from "./reference.js";
import { type LedgerWindow, windowOf } from "./window.js";

const confidence = 0.95;
/** Below this, Student's t makes the interval so wide that it says nothing: no interval is given. */
const fewestSamplesForInterval = 3;

/** The ledger of one run: means of the whole and of every part over one window, each with the half-width of its own history. */
export function buildLedger(record: CaseRecord): LedgerRun {
  const window = windowOf(record);
  const entry = (series: PartSeries) => entryOf(series, record, window);
  return {
    path: record.path,
    variant: record.variant,
    condition: record.condition,
    reference: record.reference,
    window: { from: window.from, to: window.to, rows: window.rows, effectiveSamples: window.drag.effectiveSamples },
    total: entry(record.whole),
    parts: record.parts.map((part) => ({ name: part.name, ...entry(part) })),
    closing: closingOf(record),
    recorded: record.card?.recorded ?? null,
    findings: [...record.findings, ...ledgerFindings(record, window)],
  };
}

/**
 * Mean over the window and half-width at 95 %. The mean is the plain one over the same rows for every quantity, so entries add up; the
 * half-width comes from the quantity's own correlation in those rows.
 */
export function estimateOf(values: Float64Array, { first, rows }: Pick<LedgerWindow, "first" | "rows">): Estimate {
  const inside = values.subarray(first, first + rows);
  const origin = inside[0] ?? Number.NaN;
  let sum = 0;
  for (const value of inside) sum += value - origin;
  const value = origin + sum / inside.length;
  if (inside.length < 10 || !Number.isFinite(value)) return { value, halfWidth: null };
  const { halfWidth, effectiveSamples } = windowMean(inside, 0, null, confidence);
  return { value, halfWidth: effectiveSamples >= fewestSamplesForInterval && Number.isFinite(halfWidth) ? halfWidth : null };
}

const times = (estimate: Estimate | null, factor: number | null): Estimate | null =>
  estimate === null || factor === null
    ? null
    : { value: estimate.value * factor, halfWidth: estimate.halfWidth === null ? null : estimate.halfWidth * Math.abs(factor) };

function entryOf(series: PartSeries, { reference }: CaseRecord, window: LedgerWindow): Entry {
  const mean = (values: Float64Array | null) => values && estimateOf(values, window);
  const axles = axleLift(series, reference);
  const [cd, cl, cs] = [estimateOf(series.cd, window), estimateOf(series.cl, window), mean(series.cs)];
  const newtons = forcePerCoefficient(reference);
  return {
    cd,
    cl,
    cs,
    clFront: mean(axles?.front ?? null),
    clRear: mean(axles?.rear ?? null),
    cm: mean(series.cm),
    cdPressure: mean(series.cdPressure),
    cdFriction: mean(series.cdFriction),
    cda: times(cd, reference.area),
    drag: times(cd, newtons),
    lift: times(cl, newtons),
    side: times(cs, newtons),
  };
}

function ledgerFindings(record: CaseRecord, { drag, lift }: LedgerWindow): Finding[] {
  const findings: Finding[] = [];
  for (const part of [record.whole, ...record.parts])
    if (part.cd.length > 0 && part.cd.every((value) => value === 0) && part.cl.every((value) => value === 0))
      findings.push(
        finding(
          "zero-forces",
          "error",
          "every force is exactly zero: the patch pattern of its force object matches nothing, or the part is not in the mesh.",
          "Compare the patch names in constant/polyMesh/boundary with the force object.",
          { part: part.name },
        ),
      );
  for (const [name, settling] of Object.entries({ drag, lift }))
    if (settling.verdict !== "settled" && settling.verdict !== "oscillating")
      findings.push(
        finding(
          "not-settled",
          "warning",
          `${name} has not settled (${settling.verdict}): its mean may still move by more than its half-width.`,
          "Run on, or see dragledger converged.",
          {
            part: null,
          },
        ),
      );
  if (record.reference.density === 1)
    findings.push(
      finding(
        "density-one",
        "warning",
        "The density is 1 kg/m3, which usually means that none was set: newtons are then about a fifth too small.",
        "Give the real one with --density.",
      ),
    );
  if (record.reference.symmetryFactor === 2)
    findings.push(
      finding(
        "half-model",
        "note",
        "Half model: every number is of the whole vehicle, and a part stands for itself and its mirror image.",
        "",
      ),
    );
  return findings;
}
