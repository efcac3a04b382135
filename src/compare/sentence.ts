import type { CaseRecord } from "../ledger/case-record.js";
import type { Difference } from "./comparison.js";

const counts = (coefficient: number): string => (1000 * coefficient).toFixed(1);
const signedCounts = (coefficient: number): string => `${coefficient >= 0 ? "+" : ""}${counts(coefficient)}`;

/** The answer in one sentence: by how much, how surely, and what that is in CdA and newtons. */
export function sentenceOf(a: CaseRecord, b: CaseRecord, differences: Difference[]): string {
  const of = (name: string) => differences.find((each) => each.part === null && each.name === name);
  const cd = of("cd");
  const cl = of("cl");
  if (!cd) return `${b.variant} and ${a.variant} cannot be compared.`;
  const interval = cd.halfWidth === null ? "" : ` ± ${counts(cd.halfWidth)}`;
  const effect = cd.verdict === "not-resolved" ? "the drag difference is not resolved" : cd.delta < 0 ? "drag falls" : "drag rises";
  const cda = of("cda");
  const force = of("drag");
  const also = [
    cda ? `CdA ${cda.delta >= 0 ? "+" : ""}${cda.delta.toFixed(4)} m²` : null,
    force && a.reference.speed !== null
      ? `${force.delta >= 0 ? "+" : ""}${force.delta.toFixed(1)} N at ${(3.6 * a.reference.speed).toFixed(0)} km/h`
      : null,
    cl ? `lift ${signedCounts(cl.delta)}${cl.halfWidth === null ? "" : ` ± ${counts(cl.halfWidth)}`} counts (${cl.verdict})` : null,
  ].filter((text) => text !== null);
  return `${b.variant} against ${a.variant}: ${effect}, ${signedCounts(cd.delta)}${interval} counts of Cd (${cd.verdict}: ${cd.reason}); ${also.join(", ")}.`;
}
