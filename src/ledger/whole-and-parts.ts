import { type Finding, finding } from "../finding.js";
import type { PartSeries } from "./part-series.js";

export interface WholeAndParts {
  whole: PartSeries;
  parts: PartSeries[];
  findings: Finding[];
}

/** Agreement of a sum with the whole at which the objects count as its parts: far above print precision, far below any real part. */
const sameSum = 1e-4;

/** Names that people give to the object over all of the body. */
const wholeName = /(^|[^a-z])(total|whole|all|body|vehicle|car)([^a-z]|$)/i;

/**
 * Which of the recorded objects is the whole vehicle, when no run card says it: the one whose patches hold all others', else the one
 * whose values are the sum of all others', else the one that is called so, else the only one, else the sum of all (with a finding). Where
 * the others do not make up the whole, what is left is a part called `rest`. Objects that record the same patches or values twice count once.
 */
export function wholeAndParts(recorded: PartSeries[]): WholeAndParts {
  const objects = withoutTwins(recorded);
  if (objects.length === 1) return { whole: objects[0]!, parts: [], findings: [] };
  const others = (whole: PartSeries) => objects.filter((each) => each !== whole);
  const bySum = objects.find((each) => isSumOf(each, others(each)));
  if (bySum) return { whole: bySum, parts: others(bySum), findings: [] };
  const byPatches = objects.find((each) => holdsAll(each, objects));
  const named = objects.filter((each) => wholeName.test(each.name.replaceAll("_", " ").replace(/([a-z])([A-Z])/g, "$1 $2")));
  const whole = byPatches ?? (named.length === 1 ? named[0]! : null);
  if (whole) return withRest(whole, others(whole), byPatches !== undefined);
  return {
    whole: sumOf(objects),
    parts: objects,
    findings: [
      finding(
        "whole-not-recorded",
        "warning",
        `None of the ${objects.length} force objects is the whole of the others: the whole is taken as their sum, which counts a patch twice if two of them share it.`,
        "Record one force object over all of the body.",
      ),
    ],
  };
}

function withRest(whole: PartSeries, parts: PartSeries[], known: boolean): WholeAndParts {
  const sum = sumOf(parts);
  const minus = (a: Float64Array | null, b: Float64Array | null) => a && b && a.map((value, row) => value - b[row]!);
  const rest: PartSeries = {
    name: "rest",
    patches: null,
    time: whole.time,
    cd: minus(whole.cd, sum.cd)!,
    cl: minus(whole.cl, sum.cl)!,
    cs: minus(whole.cs, sum.cs),
    cm: minus(whole.cm, sum.cm),
    cdPressure: minus(whole.cdPressure, sum.cdPressure),
    cdFriction: minus(whole.cdFriction, sum.cdFriction),
  };
  const why = known ? "it holds the patches of all others" : "its name says so";
  return {
    whole,
    parts: [...parts, rest],
    findings: [
      finding(
        "rest-not-recorded",
        "warning",
        `${whole.name} is taken as the whole (${why}); the other objects do not add up to it, and what is left is the part called rest.`,
        known ? "Record the missing patches as parts of their own." : "If it is not the whole, leave its table out.",
      ),
    ],
  };
}

function withoutTwins(recorded: PartSeries[]): PartSeries[] {
  const kept: PartSeries[] = [];
  for (const each of recorded) {
    const twin = kept.findIndex((other) => samePatches(each, other) || sameValues(each.cd, other.cd));
    if (twin < 0) kept.push(each);
    // Of two records of the same patches the one with the split is worth more.
    else if (kept[twin]!.cdPressure === null && each.cdPressure !== null) kept[twin] = { ...each, name: kept[twin]!.name };
  }
  return kept;
}

const samePatches = (a: PartSeries, b: PartSeries): boolean =>
  a.patches !== null && b.patches !== null && [...a.patches].sort().join("\n") === [...b.patches].sort().join("\n");

function sameValues(a: Float64Array, b: Float64Array): boolean {
  if (a.length !== b.length || a.length === 0) return false;
  return a.every((value, row) => Math.abs(value - b[row]) <= 1e-6 * Math.max(Math.abs(value), 1e-9));
}

function holdsAll(whole: PartSeries, objects: PartSeries[]): boolean {
  const own = new Set(whole.patches ?? []);
  const others = objects.filter((each) => each !== whole);
  return own.size > 0 && others.every((each) => each.patches?.every((patch) => own.has(patch)) === true);
}

function isSumOf(whole: PartSeries, parts: PartSeries[]): boolean {
  const count = whole.cd.length;
  if (count === 0 || parts.some((part) => part.cd.length !== count)) return false;
  for (let row = 0; row < count; row++) {
    let [sum, size] = [0, Math.abs(whole.cd[row])];
    for (const part of parts) {
      sum += part.cd[row];
      size += Math.abs(part.cd[row]);
    }
    if (Math.abs(sum - whole.cd[row]) > sameSum * size) return false;
  }
  return true;
}

/** Sum of series that share their rows; a quantity that one of them lacks is missing in the sum. */
export function sumOf(parts: PartSeries[]): PartSeries {
  const first = parts[0]!;
  const add = (pick: (part: PartSeries) => Float64Array | null): Float64Array | null => {
    const sum = new Float64Array(first.time.length);
    for (const part of parts) {
      const values = pick(part);
      if (values === null) return null;
      for (let row = 0; row < sum.length; row++) sum[row] += values[row];
    }
    return sum;
  };
  return {
    name: "whole",
    patches: null,
    time: first.time,
    cd: add((part) => part.cd)!,
    cl: add((part) => part.cl)!,
    cs: add((part) => part.cs),
    cm: add((part) => part.cm),
    cdPressure: add((part) => part.cdPressure),
    cdFriction: add((part) => part.cdFriction),
  };
}
