import { type Finding, finding } from "../finding.js";
import { axleLift } from "./axles.js";
import type { CaseRecord } from "./case-record.js";
import { closingOf } from "./closing.js";
import type { Entry, Estimate, LedgerRun } from "./ledger.js";
import type { PartSeries } from "./part-series.js";
import { forcePerCoefficient } from "./reference.js";
import { type LedgerWindow, windowOf } from "./window.js";
import { estimateFrom } from "./window-estimate.js";

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

function estimateOf(values: Float64Array, { first }: LedgerWindow, target: number | undefined): Estimate {
  const { mean, halfWidth } = estimateFrom(values, first, target);
  return { value: mean, halfWidth };
}

const times = (estimate: Estimate | null, factor: number | null): Estimate | null =>
  estimate === null || factor === null
    ? null
    : { value: estimate.value * factor, halfWidth: estimate.halfWidth === null ? null : estimate.halfWidth * Math.abs(factor) };

function entryOf(series: PartSeries, { reference, card }: CaseRecord, window: LedgerWindow): Entry {
  // A part is known well enough when it is known as well as is asked of the whole.
  const mean = (values: Float64Array | null, target = card?.stop.drag) => values && estimateOf(values, window, target);
  const lift = card?.stop.lift;
  const axles = axleLift(series, reference);
  const [cd, cl, cs] = [estimateOf(series.cd, window, card?.stop.drag), estimateOf(series.cl, window, lift), mean(series.cs, lift)];
  const newtons = forcePerCoefficient(reference);
  return {
    cd,
    cl,
    cs,
    clFront: mean(axles?.front ?? null, lift),
    clRear: mean(axles?.rear ?? null, lift),
    cm: mean(series.cm, lift),
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
