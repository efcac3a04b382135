import type { PlannedNumber } from "./plan.js";
import type { RunCard } from "./run-card.js";

/** What a study's change comes to for one case, in words: the inputs and the numbers of the plan that differ, causes first. */
export function planDifferences(before: RunCard, now: RunCard): string[] {
  return [...inputDifferences(before, now), ...numberDifferences(before.plan, now.plan)];
}

function inputDifferences(before: RunCard, now: RunCard): string[] {
  const hashes = (card: RunCard) => new Map(card.hashes.inputs.map(({ path, sha256 }) => [path, sha256]));
  const [old, current] = [hashes(before), hashes(now)];
  return [...new Set([...old.keys(), ...current.keys()])]
    .filter((path) => old.get(path) !== current.get(path))
    .map((path) => `${path} ${!old.has(path) ? "is new" : !current.has(path) ? "is left out" : "has changed"}`);
}

function numberDifferences(before: PlannedNumber[], now: PlannedNumber[]): string[] {
  const old = new Map(before.map((row) => [row.key, row]));
  return now.flatMap((row) => {
    const earlier = old.get(row.key);
    if (earlier === undefined || row.key.startsWith("mesh.predicted") || shown(earlier) === shown(row)) return [];
    return [`${row.key} ${shown(earlier)} -> ${shown(row)}`];
  });
}

function shown({ value, unit }: PlannedNumber): string {
  const text = Array.isArray(value)
    ? `(${value.map((x) => Number(x.toPrecision(4))).join(" ")})`
    : typeof value === "number"
      ? String(Number(value.toPrecision(4)))
      : value;
  return unit === "" ? text : `${text} ${unit}`;
}
