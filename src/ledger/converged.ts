import type { Finding } from "../finding.js";
import type { Segment } from "../history/history.js";
import { settle } from "../history/settle.js";
import type { QuantitySettling, Settling, SettlingVerdict } from "../history/settling.js";
import { axleLift } from "./axles.js";
import type { CaseRecord } from "./case-record.js";
import type { PartSeries } from "./part-series.js";

/** Half-widths wanted of the whole vehicle's coefficients; what is left out comes from the run card, and without one no size is asked for. */
export interface SettlingTargets {
  drag?: number | undefined;
  lift?: number | undefined;
}

export interface ConvergedCase {
  path: string;
  /** the worse of the whole's drag and lift */
  verdict: SettlingVerdict;
  quantities: QuantitySettling[];
  segments: Segment[];
  recorded: string | null;
  findings: Finding[];
}

/** From best to worst. */
const order: SettlingVerdict[] = ["settled", "oscillating", "not-yet", "too-short", "drifting", "no-data", "zero", "diverged"];

/**
 * Settling of every quantity of the whole and of drag and lift of every part. Parts are judged by the targets of the whole: a part is
 * known well enough when it is known as well as is asked of the whole.
 */
export function settleRecord(record: CaseRecord, targets: SettlingTargets = {}): ConvergedCase {
  const { card, whole, reference } = record;
  const confidence = card?.stop.confidence ?? 0.95;
  const drag = targets.drag ?? card?.stop.drag;
  const lift = targets.lift ?? card?.stop.lift;
  const judge = (name: string, part: string | null, values: Float64Array | null, halfWidth?: number): QuantitySettling[] => {
    if (values === null) return [];
    const settled: Settling = settle(values, { confidence, ...(halfWidth === undefined ? {} : { halfWidth }) });
    return [{ ...settled, name, part }];
  };
  const axles = axleLift(whole, reference);
  const quantities = [
    ...judge("cd", null, whole.cd, drag),
    ...judge("cl", null, whole.cl, lift),
    ...judge("clFront", null, axles?.front ?? null, lift),
    ...judge("clRear", null, axles?.rear ?? null, lift),
    ...judge("cs", null, whole.cs, lift),
    ...judge("cm", null, whole.cm, lift),
    ...record.parts.flatMap((part: PartSeries) => [
      ...judge("cd", part.name, part.cd, drag),
      ...judge("cl", part.name, part.cl, lift),
    ]),
  ];
  const deciding = quantities.filter(({ name, part }) => part === null && (name === "cd" || name === "cl"));
  const verdict = deciding.reduce<SettlingVerdict>(
    (worst, { verdict: own }) => (order.indexOf(own) > order.indexOf(worst) ? own : worst),
    "settled",
  );
  return {
    path: record.path,
    verdict,
    quantities,
    segments: record.segments,
    recorded: card?.recorded ?? null,
    findings: [
      ...record.findings,
      ...deciding.flatMap((each) => each.findings.map((found) => ({ ...found, part: found.part ?? each.name }))),
    ],
  };
}
