import { type Finding, finding } from "../finding.js";
import type { CaseRecord } from "./case-record.js";
import type { Entry } from "./ledger.js";
import type { LedgerWindow } from "./window.js";

/** What the reader of a ledger must know beside its numbers: parts without forces, means that may move, entries that are missing and why. */
export function ledgerFindings(record: CaseRecord, window: LedgerWindow, total: Entry): Finding[] {
  return [
    ...zeroForces(record),
    ...unsettled(window),
    ...unlikelyDensity(record),
    ...unlikelyArea(record),
    ...missingEntries(record, total),
    ...halfModel(record),
  ];
}

function zeroForces({ whole, parts }: CaseRecord): Finding[] {
  const zero = (values: Float64Array) => values.every((value) => value === 0);
  return [whole, ...parts]
    .filter(({ cd, cl }) => cd.length > 0 && zero(cd) && zero(cl))
    .map(({ name }) =>
      finding(
        "zero-forces",
        "error",
        "every force is exactly zero: the patch pattern of its force object matches nothing, or the part is not in the mesh.",
        "Compare the patch names in constant/polyMesh/boundary with the force object.",
        { part: name },
      ),
    );
}

function unsettled({ drag, lift }: LedgerWindow): Finding[] {
  return Object.entries({ drag, lift })
    .filter(([, { verdict }]) => verdict !== "settled" && verdict !== "oscillating")
    .map(([name, { verdict }]) =>
      finding(
        "not-settled",
        "warning",
        `${name} has not settled (${verdict}): its mean may still move by more than its half-width.`,
        "Run on, or see dragledger converged.",
      ),
    );
}

function unlikelyDensity({ reference: { density } }: CaseRecord): Finding[] {
  if (density === null || Math.abs(density - 1) > 1e-6) return [];
  return [
    finding(
      "density-one",
      "warning",
      "The density is 1 kg/m3, which usually means that none was set: newtons are then about a fifth too small.",
      "Give the real one with --density.",
    ),
  ];
}

/** A ratio of areas within this share of one half or two is no accident of shape. */
const nearRatio = 0.03;

/** The area of half a vehicle under the forces of a whole one, or the reverse: every coefficient is off by two. */
function unlikelyArea({ card, reference: { area, symmetryFactor } }: CaseRecord): Finding[] {
  if (card === null || area === null) return [];
  const ratio = area / card.body.frontalArea;
  // The body of a half model may have been given as a half: twice its area is then right.
  const wrong = symmetryFactor === 2 ? [0.5, 4] : [0.5, 2];
  const near = wrong.find((factor) => Math.abs(ratio / factor - 1) <= nearRatio);
  if (near === undefined) return [];
  return [
    finding(
      "area-of-half",
      "error",
      `The reference area of ${area.toPrecision(4)} m² is about ${near} times the frontal area of the body, ${card.body.frontalArea.toPrecision(4)} m²: one is of half a vehicle, the other of a whole one.`,
      "Give the frontal area of the whole vehicle.",
    ),
  ];
}

function missingEntries({ reference, card }: CaseRecord, total: Entry): Finding[] {
  const { speed, density, wheelbase, length, centre } = reference;
  const missing: Finding[] = [];
  const say = (what: string, options: string[]) =>
    missing.push(
      finding("not-given", "note", `${what}: the files of the case do not say what is needed.`, `Give ${options.join(" and ")}.`),
    );
  const lacking = (values: Record<string, unknown>) =>
    Object.entries(values)
      .filter(([, value]) => value === null)
      .map(([key]) => `--${key}`);
  const forces = lacking({ speed, density });
  if (forces.length > 0) say("No forces in newtons", forces);
  const moment = lacking({ length, centre });
  if (total.cm === null && moment.length > 0) say("No pitching moment", moment);
  else if (total.cm === null)
    missing.push(
      finding(
        "not-recorded",
        "note",
        "No pitching moment and no axle lifts: no table of the whole holds a moment about a known point.",
        "Record the moments of the whole: a forces object writes them beside its forces.",
      ),
    );
  // A run card without a wheelbase is of a body without axles.
  if (total.cm !== null && wheelbase === null && card === null) say("No axle lifts", ["--wheelbase"]);
  return missing;
}

function halfModel({ reference }: CaseRecord): Finding[] {
  if (reference.symmetryFactor !== 2) return [];
  return [
    finding(
      "half-model",
      "note",
      "Half model: every number is of the whole vehicle, and a part stands for itself and its mirror image.",
      "",
    ),
  ];
}
