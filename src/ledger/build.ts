import type { Settling } from "../history/settling.js";
import { axleLift } from "./axles.js";
import type { CaseRecord } from "./case-record.js";
import { closingOf } from "./closing.js";
import type { Entry, Estimate, LedgerRun } from "./ledger.js";
import { ledgerFindings } from "./ledger-findings.js";
import type { PartSeries } from "./part-series.js";
import { forcePerCoefficient } from "./reference.js";
import { windAxes } from "./wind-axes.js";
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

const times = (estimate: Estimate | null, factor: number | null): Estimate | null =>
  estimate === null || factor === null
    ? null
    : { value: estimate.value * factor, halfWidth: estimate.halfWidth === null ? null : estimate.halfWidth * Math.abs(factor) };

function entryOf(series: PartSeries, { whole, reference, card }: CaseRecord, window: LedgerWindow): Entry {
  const estimate = (values: Float64Array, target: number | undefined, known?: Settling): Estimate => {
    const { mean, halfWidth } = estimateFrom(values, window.first, target, known);
    return { value: mean, halfWidth };
  };
  const maybe = (values: Float64Array | null, target: number | undefined) => values && estimate(values, target);
  // A part is known well enough when it is known as well as is asked of the whole.
  const { drag, lift } = card?.stop ?? {};
  const axles = axleLift(series, reference);
  const isWhole = series === whole;
  const cd = estimate(series.cd, drag, isWhole ? window.drag : undefined);
  const cl = estimate(series.cl, lift, isWhole ? window.lift : undefined);
  const cs = maybe(series.cs, lift);
  const newtons = forcePerCoefficient(reference);
  const wind = windAxes(series, card?.condition.yaw ?? 0);
  return {
    cd,
    cl,
    cs,
    clFront: maybe(axles?.front ?? null, lift),
    clRear: maybe(axles?.rear ?? null, lift),
    cm: maybe(series.cm, lift),
    cdWind: maybe(wind?.drag ?? null, drag),
    csWind: maybe(wind?.side ?? null, lift),
    cdPressure: maybe(series.cdPressure, drag),
    cdFriction: maybe(series.cdFriction, drag),
    cda: times(cd, reference.area),
    drag: times(cd, newtons),
    lift: times(cl, newtons),
    side: times(cs, newtons),
  };
}
