import type { CaseRecord } from "../ledger/case-record.js";
import { halfWidthText, signed } from "../number-text.js";
import type { Difference } from "./comparison.js";

/** Relative difference of two areas that is one of printing. */
const sameArea = 1e-9;

/**
 * The answer in one sentence: by how much, how surely, and what that is in CdA and newtons. Where the reference areas differ, coefficients
 * mix shape and reference, and CdA comes first.
 */
export function sentenceOf(a: CaseRecord, b: CaseRecord, differences: Difference[]): string {
  const of = (name: string) => differences.find((each) => each.part === null && each.name === name);
  const [cd, cl, cda, force] = [of("cd"), of("cl"), of("cda"), of("drag")];
  const named = (record: CaseRecord): string =>
    a.condition === b.condition ? record.variant : `${record.variant} at ${record.condition}`;
  if (!cd) return `${named(b)} and ${named(a)} cannot be compared.`;
  const ownAreas = differentAreas(a, b);
  const main = ownAreas && cda ? cda : cd;
  const effect =
    main.verdict === "not-resolved" ? "the drag difference is not resolved" : main.delta < 0 ? "drag falls" : "drag rises";
  const how = `(${main.verdict}: ${main.reason})`;
  const also = [
    main === cda ? `${inCounts(cd)} of Cd on reference areas that differ` : null,
    cda && main !== cda ? `CdA ${signed(cda.delta, 4)} m²` : null,
    force && a.reference.speed !== null ? `${signed(force.delta, 1)} N at ${(3.6 * a.reference.speed).toFixed(0)} km/h` : null,
    cl ? `lift ${inCounts(cl)} (${cl.verdict})` : null,
  ].filter((text) => text !== null);
  const size = main === cda ? `${withHalfWidth(cda, 1, 4)} m² of CdA` : `${inCounts(cd)} of Cd`;
  return `${named(b)} against ${named(a)}: ${effect}, ${size} ${how}; ${also.join(", ")}.`;
}

export function differentAreas({ reference: a }: CaseRecord, { reference: b }: CaseRecord): boolean {
  return a.area !== null && b.area !== null && Math.abs(a.area - b.area) > sameArea * Math.max(a.area, b.area);
}

const inCounts = (difference: Difference): string => `${withHalfWidth(difference, 1000, 1)} counts`;

function withHalfWidth({ delta, halfWidth }: Difference, factor: number, decimals: number): string {
  return `${signed(factor * delta, decimals)}${halfWidth === null ? "" : ` ± ${halfWidthText(factor * halfWidth, decimals)}`}`;
}
