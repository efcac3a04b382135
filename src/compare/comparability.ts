import type { RunCard } from "../case/run-card.js";
import { type Finding, finding } from "../finding.js";
import type { CaseRecord } from "../ledger/case-record.js";

/** What two cases must share for their difference to be one of shape. */
const shared: { what: string; why: string; of(card: RunCard): unknown }[] = [
  { what: "the domain", why: "blockage and inlet differ", of: (card) => card.mesh.domain },
  { what: "the base cell", why: "the grids differ everywhere", of: (card) => card.mesh.baseCell },
  { what: "the surface level", why: "the cells on the body differ", of: (card) => card.mesh.surfaceLevel },
  { what: "the refinement boxes", why: "the wake is resolved differently", of: (card) => card.mesh.boxes },
  { what: "the speed", why: "forces and Reynolds number differ", of: (card) => card.condition.speed },
  { what: "the yaw angle", why: "the flow differs", of: (card) => card.condition.yaw },
  { what: "the ground", why: "a moving and a fixed ground differ by 3 to 4 % in drag", of: (card) => card.condition.ground },
  {
    what: "half or whole model",
    why: "half and whole differ by several counts on the same grid",
    of: (card) => card.reference.symmetryFactor,
  },
  { what: "the templates", why: "numerics or models may differ", of: (card) => card.hashes.templates },
];

/** Whether two cases can be compared, and everything they do not share. Cases without run cards are compared with a warning. */
export function comparability(a: CaseRecord, b: CaseRecord): { comparable: boolean; findings: Finding[] } {
  const findings: Finding[] = [];
  const [one, other] = [a.card, b.card];
  if (one && other) {
    for (const { what, why, of } of shared)
      if (JSON.stringify(of(one)) !== JSON.stringify(of(other)))
        findings.push(
          finding("not-shared", "error", `A and B do not share ${what}: ${why}.`, "Prepare both as variants of one study."),
        );
  } else
    findings.push(
      finding(
        "no-run-card",
        "warning",
        `${one ? "B" : other ? "A" : "Neither case"} has ${one || other ? "no" : "a"} run card: whether domain, grid and settings are the same cannot be checked.`,
        "Take the verdict for what the two histories say, no more.",
      ),
    );
  const referenceKeys = ["area", "length", "speed", "density", "wheelbase", "symmetryFactor"] as const;
  for (const key of referenceKeys) {
    const [x, y] = [a.reference[key], b.reference[key]];
    if (x === null || y === null || Math.abs(x - y) <= 1e-9 * Math.max(Math.abs(x), Math.abs(y))) continue;
    findings.push(
      finding(
        "reference-differs",
        key === "area" || key === "length" || key === "wheelbase" ? "warning" : "error",
        `The reference ${key} of A is ${x}, of B ${y}: differences of coefficients mix shape and reference; compare CdA first.`,
        "Use one reference for both, with --area and its like.",
      ),
    );
  }
  return { comparable: findings.every((found) => found.severity === "note" || found.code === "no-run-card"), findings };
}
