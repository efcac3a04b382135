import { type Finding, finding } from "../finding.js";
import type { PartSeries } from "./part-series.js";
import { isSumOf, minus, sameSeries, sumOf } from "./series-sums.js";

export interface WholeAndParts {
  whole: PartSeries;
  parts: PartSeries[];
  findings: Finding[];
}

/** Names that people give to the object over all of the body. */
const wholeName = /(^|[^a-z])(total|whole|all|complete|overall)([^a-z]|$)/i;

/**
 * Which of the recorded objects is the whole vehicle, when no run card says it: the one whose values are the sum of all others', else the
 * one whose patches hold all others', else (where the patches are not known) the one that is called so, else the only one, else the sum of
 * all (with a finding). Where the others do not make up the whole, what is left is a part called `rest`. Objects that record the same
 * patches twice count once; of objects that share patches the smaller ones are the parts.
 *
 * @param recorded on common rows, at least one
 */
export function wholeAndParts(recorded: PartSeries[]): WholeAndParts {
  const objects = withoutTwins(recorded);
  if (objects.length === 1) return { whole: objects[0], parts: [], findings: [] };
  const others = (whole: PartSeries) => objects.filter((each) => each !== whole);
  const bySum = objects.find((each) => mayHold(each, others(each)) && isSumOf(each, others(each)));
  if (bySum) return { whole: bySum, parts: others(bySum), findings: [] };
  const byPatches = objects.find((each) => holdsAll(each, objects));
  if (byPatches) {
    const { parts, findings } = disjoint(others(byPatches));
    return withRest(byPatches, parts, findings);
  }
  const named = objects.filter((each) => each.patches === null && wholeName.test(spaced(each.name)));
  if (named.length === 1) return withRest(named[0], others(named[0]), []);
  const { parts, findings } = disjoint(objects);
  const counted = parts.every((part) => part.patches !== null)
    ? "the whole is taken as their sum"
    : "the whole is taken as their sum, which counts a patch twice if two of them share it";
  return {
    whole: sumOf(parts, "whole"),
    parts,
    findings: [
      ...findings,
      finding(
        "whole-not-recorded",
        "warning",
        `None of the ${objects.length} force objects is the whole of the others: ${counted}.`,
        "Record one force object over all of the body.",
      ),
    ],
  };
}

/** `forcesTotal` and `part_base` as words. */
const spaced = (name: string): string => name.replaceAll("_", " ").replace(/([a-z])([A-Z])/g, "$1 $2");

function withRest(whole: PartSeries, parts: PartSeries[], findings: Finding[]): WholeAndParts {
  const covered = new Set(parts.flatMap((part) => part.patches ?? []));
  const missing = whole.patches?.filter((patch) => !covered.has(patch)) ?? null;
  // All patches are there: a sum that differs is for the closing to say.
  if (missing?.length === 0) return { whole, parts, findings };
  const rest: PartSeries = { ...minus(whole, parts), name: freeName(parts), patches: missing };
  const why = missing === null ? "its name says so" : "it holds the patches of all others";
  return {
    whole,
    parts: [...parts, rest],
    findings: [
      ...findings,
      finding(
        "rest-not-recorded",
        "warning",
        `${whole.name} is taken as the whole (${why}); the other objects do not add up to it, and what is left is the part called ${rest.name}.`,
        missing === null ? "If it is not the whole, leave its table out." : `Record ${listed(missing)} as parts of their own.`,
      ),
    ],
  };
}

function freeName(parts: PartSeries[]): string {
  let name = "rest";
  while (parts.some((part) => part.name === name)) name += " of the whole";
  return name;
}

const listed = (names: string[]): string =>
  names.length > 5 ? `${names.slice(0, 5).join(", ")} and ${names.length - 5} more` : names.join(", ");

/** The objects without those that share a patch with smaller ones; objects with unknown patches stay. */
function disjoint(objects: PartSeries[]): { parts: PartSeries[]; findings: Finding[] } {
  const taken = new Set<string>();
  const overlapping = new Set<PartSeries>();
  const size = (part: PartSeries) => part.patches?.length ?? 0;
  for (const object of [...objects].sort((a, b) => size(a) - size(b))) {
    if (object.patches?.some((patch) => taken.has(patch))) overlapping.add(object);
    else for (const patch of object.patches ?? []) taken.add(patch);
  }
  return {
    parts: objects.filter((object) => !overlapping.has(object)),
    findings: [...overlapping].map((object) =>
      finding(
        "patches-counted-twice",
        "note",
        "shares patches with other objects that are parts already, and is left out of the ledger.",
        "",
        { part: object.name },
      ),
    ),
  };
}

function withoutTwins(recorded: PartSeries[]): PartSeries[] {
  const kept: PartSeries[] = [];
  for (const each of recorded) {
    const twin = kept.findIndex((other) => sameObject(each, other));
    if (twin < 0) kept.push(each);
    else kept[twin] = joined(kept[twin], each);
  }
  return kept;
}

/** Two records of the same patches: by the patches where they are known, else by the values. */
function sameObject(a: PartSeries, b: PartSeries): boolean {
  if (a.patches === null || b.patches === null) return sameSeries(a, b);
  return a.patches.length > 0 && samePatches(a.patches, b.patches);
}

export const samePatches = (a: string[], b: string[]): boolean => [...a].sort().join("\n") === [...b].sort().join("\n");

/** Of two records the one that is split into pressure and friction is worth more; what it lacks comes from the other. */
function joined(first: PartSeries, second: PartSeries): PartSeries {
  const [base, other] = first.cdPressure === null && second.cdPressure !== null ? [second, first] : [first, second];
  return {
    ...base,
    name: first.name,
    patches: base.patches ?? other.patches,
    cs: base.cs ?? other.cs,
    cm: base.cm ?? other.cm,
  };
}

/** Known patches do not speak against a whole: of two mirror images each is the sum of "all others". */
function mayHold(whole: PartSeries, others: PartSeries[]): boolean {
  const own = whole.patches && new Set(whole.patches);
  return own === null || others.every((each) => each.patches === null || each.patches.every((patch) => own.has(patch)));
}

function holdsAll(whole: PartSeries, objects: PartSeries[]): boolean {
  const own = new Set(whole.patches ?? []);
  const others = objects.filter((each) => each !== whole);
  const some = others.some(({ patches }) => patches !== null && patches.length > 0);
  return some && others.every((each) => each.patches?.every((patch) => own.has(patch)) === true);
}
