import { axleLift } from "./axles.js";
import type { CaseRecord } from "./case-record.js";
import { closingOf } from "./closing.js";
import type { Entry, Estimate, LedgerRun } from "./ledger.js";
import { ledgerFindings } from "./ledger-findings.js";
import type { PartSeries } from "./part-series.js";
import { forcePerCoefficient } from "./reference.js";
import { type LedgerWindow, windowOf } from "./window.js";
import { estimateFrom } from "./window-estimate.js";

/** The ledger of one run: means of the whole and of every part over one window, each with the half-width of its own history. */
export function buildLedger(record: CaseRecord): LedgerRun {
  const window = windowOf(record);
  const entry = (series: PartSeries) => entryOf(series, record, window);
  const total = entry(record.whole);
  return {
    path: record.path,
    variant: record.variant,
    condition: record.condition,
    reference: record.reference,
    window: { from: window.from, to: window.to, rows: window.rows, effectiveSamples: window.drag.effectiveSamples },
    total,
    parts: record.parts.map((part) => ({ name: part.name, ...entry(part) })),
    closing: closingOf(record),
    recorded: record.card?.recorded ?? null,
    // What a table says of its zeros is said once, with the part's name.
    findings: [...record.findings.filter(({ code }) => code !== "all-zero"), ...ledgerFindings(record, window, total)],
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
