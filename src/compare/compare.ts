import { type Finding, finding } from "../finding.js";
import type { Settling } from "../history/settling.js";
import { studentQuantile } from "../history/student.js";
import { axleLift } from "../ledger/axles.js";
import type { CaseRecord } from "../ledger/case-record.js";
import { forcePerCoefficient } from "../ledger/reference.js";
import { type LedgerWindow, windowOf } from "../ledger/window.js";
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

/**
 * B minus A, for the whole and part by part: Welch's interval on the effective samples of each history. The mesh's own spread (`floor`) is
 * not measured in this version, so no difference is called resolved: one larger than its half-width is a direction.
 *
 * Measured on made-up pairs without a difference (AR(1), 400 pairs each): a direction was seen in 4.5 % (phi 0.5, 800 rows), 5.5 % (phi
 * 0.9, 1000 rows) and 9 % (phi 0.9, 400 rows, which are some twenty independent samples); 5 % would be exact.
 */
export function compareRuns(a: CaseRecord, b: CaseRecord): Comparison {
  const { comparable, checked, findings } = comparability(a, b);
  const [windowA, windowB] = [windowOf(a), windowOf(b)];
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
  const wholeA = quantitiesOf(a, windowA);
  const wholeB = quantitiesOf(b, windowB);
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
          one ? measure(one[quantity], windowA.first, targetOf(a, quantity)) : null,
          other ? measure(other[quantity], windowB.first, targetOf(b, quantity)) : null,
        ),
      );
  }
  const total = differences.find((each) => each.part === null && each.name === "cd")!;
  return {
    a: { path: a.path, variant: a.variant, condition: a.condition },
    b: { path: b.path, variant: b.variant, condition: b.condition },
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

function quantitiesOf({ whole, reference, card }: CaseRecord, window: LedgerWindow): Map<string, Measured> {
  const found = new Map<string, Measured>();
  const add = (name: string, measured: Measured | null) => {
    if (measured) found.set(name, measured);
  };
  const { drag, lift } = card?.stop ?? {};
  const { first } = window;
  const maybe = (values: Float64Array | null) => values && measure(values, first, lift);
  const axles = axleLift(whole, reference);
  const [cd, cl] = [measure(whole.cd, first, drag, window.drag), measure(whole.cl, first, lift, window.lift)];
  const newtons = forcePerCoefficient(reference);
  add("cd", cd);
  add("cl", cl);
  add("clFront", maybe(axles?.front ?? null));
  add("clRear", maybe(axles?.rear ?? null));
  add("cs", maybe(whole.cs));
  add("cm", maybe(whole.cm));
  add("cda", reference.area === null ? null : times(cd, reference.area));
  add("drag", newtons === null ? null : times(cd, newtons));
  add("lift", newtons === null ? null : times(cl, newtons));
  return found;
}

const times = (measured: Measured, factor: number): Measured => ({
  ...measured,
  mean: measured.mean * factor,
  standardError: measured.standardError * factor,
});

/** The standard error is taken back from the half-width, so that one estimate of correlation serves ledger and comparison. */
function measure(values: Float64Array, first: number, target: number | undefined, known?: Settling): Measured {
  const { mean, halfWidth, degreesOfFreedom, usable } = estimateFrom(values, first, target, known);
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
