import { type Finding, finding } from "../finding.js";
import { studentQuantile } from "../history/student.js";
import { axleLift } from "../ledger/axles.js";
import type { CaseRecord } from "../ledger/case-record.js";
import type { PartSeries } from "../ledger/part-series.js";
import { forcePerCoefficient } from "../ledger/reference.js";
import { windowOf } from "../ledger/window.js";
import { estimateFrom } from "../ledger/window-estimate.js";
import { comparability } from "./comparability.js";
import type { Comparison, Difference } from "./comparison.js";
import { differenceOf, type MeanWithError } from "./difference.js";
import { sentenceOf } from "./sentence.js";
import { verdictOf } from "./verdict.js";

const confidence = 0.95;

/** One quantity of one case over that case's window. */
interface Measured extends MeanWithError {
  settled: boolean;
}

/** B minus A, for the whole and part by part. The mesh's own spread (`floor`) is not measured in this version: no difference is called resolved. */
export function compareRuns(a: CaseRecord, b: CaseRecord): Comparison {
  const { comparable, checked, findings } = comparability(a, b);
  const [windowA, windowB] = [windowOf(a).first, windowOf(b).first];
  const compare = (name: string, part: string | null, one: Measured | null, other: Measured | null): Difference[] => {
    if (one === null && other === null) return [];
    // A part that one variant does not have makes no force there.
    const none: Measured = { mean: 0, standardError: 0, degreesOfFreedom: 1, settled: true };
    const { delta, halfWidth } = differenceOf(one ?? none, other ?? none, confidence);
    const known = Number.isFinite(halfWidth) ? halfWidth : null;
    const settled = (one ?? none).settled && (other ?? none).settled;
    const verdict = verdictOf({ delta, halfWidth: known, floor: null, comparable, checked, settled });
    const missing = one === null ? "; the part is missing in A" : other === null ? "; the part is missing in B" : "";
    return [
      {
        name,
        part,
        a: one?.mean ?? null,
        b: other?.mean ?? null,
        delta,
        halfWidth: known,
        floor: null,
        verdict: verdict.verdict,
        reason: verdict.reason + missing,
      },
    ];
  };
  const wholeA = quantitiesOf(a.whole, a, windowA);
  const wholeB = quantitiesOf(b.whole, b, windowB);
  const differences = [...wholeA.keys()].flatMap((name) => {
    const [one, other] = [wholeA.get(name)!, wholeB.get(name) ?? null];
    return other === null ? [] : compare(name, null, one, other);
  });
  for (const name of partNames(a, b)) {
    const [one, other] = [a.parts.find((part) => part.name === name), b.parts.find((part) => part.name === name)];
    for (const quantity of ["cd", "cl"] as const)
      differences.push(
        ...compare(
          quantity,
          name,
          one ? measure(one[quantity], windowA, targetOf(a, quantity)) : null,
          other ? measure(other[quantity], windowB, targetOf(b, quantity)) : null,
        ),
      );
  }
  const total = differences.find((each) => each.part === null && each.name === "cd")!;
  return {
    a: { path: a.path, variant: a.variant },
    b: { path: b.path, variant: b.variant },
    comparable,
    differences,
    smallestResolvable: total.halfWidth,
    sentence: sentenceOf(a, b, differences),
    findings: [...findings, ...compareFindings(a, b, total)],
  };
}

/** A part is known well enough when it is known as well as is asked of the whole. */
const targetOf = ({ card }: CaseRecord, quantity: "cd" | "cl"): number | undefined =>
  quantity === "cd" ? card?.stop.drag : card?.stop.lift;

function quantitiesOf(whole: PartSeries, { reference, card }: CaseRecord, first: number): Map<string, Measured> {
  const found = new Map<string, Measured>();
  const add = (name: string, values: Float64Array | null, target: number | undefined, factor = 1) => {
    if (values)
      found.set(name, measure(factor === 1 ? values : values.map((value) => value * factor), first, target && target * factor));
  };
  const { drag, lift } = card?.stop ?? {};
  const axles = axleLift(whole, reference);
  add("cd", whole.cd, drag);
  add("cl", whole.cl, lift);
  add("clFront", axles?.front ?? null, lift);
  add("clRear", axles?.rear ?? null, lift);
  add("cs", whole.cs, lift);
  add("cm", whole.cm, lift);
  if (reference.area !== null) add("cda", whole.cd, drag, reference.area);
  const newtons = forcePerCoefficient(reference);
  if (newtons !== null) {
    add("drag", whole.cd, drag, newtons);
    add("lift", whole.cl, lift, newtons);
  }
  return found;
}

/** The standard error is taken back from the half-width, so that one estimate of correlation serves ledger and comparison. */
function measure(values: Float64Array, first: number, target: number | undefined): Measured {
  const { mean, halfWidth, degreesOfFreedom, usable } = estimateFrom(values, first, target);
  const standardError =
    halfWidth === null ? Number.POSITIVE_INFINITY : halfWidth / studentQuantile(0.5 + confidence / 2, degreesOfFreedom);
  return { mean, standardError, degreesOfFreedom, settled: usable };
}

const partNames = (a: CaseRecord, b: CaseRecord): string[] => [...new Set([...a.parts, ...b.parts].map((part) => part.name))];

function compareFindings(a: CaseRecord, b: CaseRecord, total: Difference): Finding[] {
  const findings: Finding[] = [];
  const onlyIn = (one: CaseRecord, other: CaseRecord) =>
    one.parts.map((part) => part.name).filter((name) => !other.parts.some((part) => part.name === name));
  for (const [letter, names] of [
    ["A", onlyIn(a, b)],
    ["B", onlyIn(b, a)],
  ] as const)
    if (names.length > 0)
      findings.push(
        finding("part-only-in-one", "note", `Only ${letter} has ${names.join(", ")}: the other counts as zero there.`, ""),
      );
  if (total.floor === null)
    findings.push(
      finding(
        "floor-not-measured",
        "warning",
        "The spread that the mesh alone causes was not measured: a difference larger than its half-width is given as a direction, not as resolved.",
        "Repeat both variants on a finer mesh (mesh.cells): believe a difference that keeps its sign and size.",
      ),
    );
  if (a.card?.recorded || b.card?.recorded)
    findings.push(finding("recorded", "note", `Recorded results are compared: ${a.card?.recorded ?? b.card?.recorded}`, ""));
  return findings;
}
