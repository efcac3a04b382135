import type { PlannedNumber } from "../case/plan.js";
import type { RunCard } from "../case/run-card.js";
import { type Finding, finding } from "../finding.js";
import type { CaseRecord } from "../ledger/case-record.js";
import type { Reference } from "../ledger/ledger.js";

export interface Comparability {
  /** nothing is known that the cases do not share */
  comparable: boolean;
  /** both have a run card, so that domain, grid and settings were compared */
  checked: boolean;
  findings: Finding[];
}

/** What two prepared cases must share for their difference to be one of shape. */
const shared: { what: string; why: string; of(card: RunCard): unknown }[] = [
  { what: "the study", why: "domain, grid and reference are anchored per study", of: (card) => card.study.name },
  { what: "the baseline", why: "domain, grid and reference are anchored to it", of: (card) => card.study.baseline },
  { what: "the domain", why: "blockage and inlet differ", of: (card) => card.mesh.domain },
  { what: "the base cell", why: "the grids differ everywhere", of: (card) => card.mesh.baseCell },
  { what: "the divisions of the base grid", why: "the grids differ everywhere", of: (card) => card.mesh.divisions },
  { what: "the surface level", why: "the cells on the body differ", of: (card) => card.mesh.surfaceLevel },
  { what: "the refinement boxes", why: "the wake is resolved differently", of: (card) => card.mesh.boxes },
  { what: "the yaw angle", why: "the flow differs", of: (card) => card.condition.yaw },
  { what: "the ground", why: "a moving and a fixed ground differ by 3 to 4 % in drag", of: (card) => card.condition.ground },
  { what: "the templates", why: "numerics or models may differ", of: (card) => card.hashes.templates },
];

/** Numbers of a plan that make mesh, air and the way to the result, and do not follow from the shape of the variant. */
const settings = /^(?:air\.|mesh\.(?!predicted)|parts\..*\.(?:level|omega)$|flow\.turbulence$|iterations\..*elaxation$)/;
/** Differences below these are of rounding: a share, and a size for values that are zero. */
const sameShare = 1e-9;
const sameSize = 1e-12;

/** Reference values that must agree, with what a difference does. */
const references: { key: keyof Reference; severity: Finding["severity"]; why: string }[] = [
  { key: "area", severity: "warning", why: "differences of coefficients mix shape and reference: compare CdA first" },
  { key: "length", severity: "warning", why: "moment coefficients stand on different lengths" },
  { key: "wheelbase", severity: "warning", why: "axle lifts stand on different wheelbases" },
  { key: "centre", severity: "warning", why: "moments and axle lifts are about different points" },
  { key: "speed", severity: "error", why: "forces and Reynolds number differ" },
  { key: "density", severity: "error", why: "forces in newtons are not of one air" },
  { key: "symmetryFactor", severity: "error", why: "half and whole models differ by several counts on the same grid" },
];

/** Whether two cases can be compared, and everything they do not share. Cases without run cards are compared with a warning. */
export function comparability(a: CaseRecord, b: CaseRecord): Comparability {
  const differing = [...referenceFindings(a.reference, b.reference)];
  const [one, other] = [a.card, b.card];
  if (one && other) differing.push(...cardFindings(one, other));
  const findings = [...differing];
  if (!one || !other)
    findings.push(
      finding(
        "no-run-card",
        "warning",
        `${one ? "B has no" : other ? "A has no" : "Neither case has a"} run card: whether domain, grid and settings are the same cannot be checked.`,
        "Take the verdict for what the two histories say, no more.",
      ),
    );
  return { comparable: differing.length === 0, checked: one !== null && other !== null, findings };
}

function cardFindings(a: RunCard, b: RunCard): Finding[] {
  const findings = shared
    .filter(({ of }) => !alike(of(a), of(b)))
    .map(({ what, why }) => notShared(`A and B do not share ${what}: ${why}.`));
  const old = new Map(a.plan.map((row) => [row.key, row]));
  const settled = b.plan.flatMap((row) => {
    const before = settings.test(row.key) ? old.get(row.key) : undefined;
    return before === undefined || alike(before.value, row.value) ? [] : [`${row.key} (${shown(before)} and ${shown(row)})`];
  });
  if (settled.length > 0) findings.push(notShared(`A and B do not share ${settled.join(", ")}: mesh, air or numerics differ.`));
  return findings;
}

const notShared = (message: string): Finding =>
  finding("not-shared", "error", message, "Prepare and run both as variants of one study.");

const shown = ({ value, unit }: PlannedNumber): string =>
  `${typeof value === "number" ? Number(value.toPrecision(4)) : value}${unit === "" ? "" : ` ${unit}`}`;

function referenceFindings(a: Reference, b: Reference): Finding[] {
  return references
    .filter(({ key }) => a[key] !== null && b[key] !== null && !alike(a[key], b[key]))
    .map(({ key, severity, why }) =>
      finding(
        "reference-differs",
        severity,
        `The reference ${key === "symmetryFactor" ? "symmetry factor" : key} of A is ${a[key]}, of B ${b[key]}: ${why}.`,
        "Use one reference for both, with --area and its like.",
      ),
    );
}

/** Equal in structure, numbers within rounding. */
function alike(a: unknown, b: unknown): boolean {
  if (typeof a === "number" && typeof b === "number")
    return Math.abs(a - b) <= sameSize + sameShare * Math.max(Math.abs(a), Math.abs(b));
  if (typeof a !== "object" || typeof b !== "object" || a === null || b === null) return a === b;
  const [one, other] = [Object.entries(a), new Map(Object.entries(b))];
  return one.length === other.size && one.every(([key, value]) => other.has(key) && alike(value, other.get(key)));
}
