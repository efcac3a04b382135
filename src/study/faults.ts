import type { z } from "zod";
import { inputProblem, type Problem } from "../errors.js";
import { keyAt, notComputed, studyKeys } from "./keys.js";
import { shownValue } from "./quantity.js";
import type { YamlSource } from "./yaml-source.js";

type Path = readonly PropertyKey[];

/** One thing wrong in a study file. */
export interface Fault {
  path: Path;
  /** Whether the key or its value is to be pointed at. */
  at: "key" | "value";
  code: string;
  message: string;
  remedy: string;
}

/** A path as it is written in messages: `variants.open-bed.files[0]`. */
export function keyText(path: Path): string {
  return path.map((step, k) => (typeof step === "number" ? `[${step}]` : `${k > 0 ? "." : ""}${String(step)}`)).join("");
}

/** The problem to throw for what is wrong with a file: the first fault in the order of the text, and where the others are. */
export function problemOf(faults: Fault[], source: YamlSource, name: string): Problem {
  const placed = faults
    .map((fault) => ({ ...fault, position: source.at(fault.path, fault.at) }))
    .sort((a, b) => a.position.line - b.position.line || a.position.column - b.position.column);
  const first = placed[0]!;
  const others = placed.slice(1, 6).map((fault) => `line ${fault.position.line} (${keyText(fault.path)})`);
  if (placed.length > 6) others.push(`${placed.length - 6} more`);
  const key = keyText(first.path);
  return inputProblem({
    code: first.code,
    message: first.message,
    where: `${name}:${first.position.line}:${first.position.column}${key ? ` (${key})` : ""}`,
    remedy: others.length > 0 ? `${first.remedy} Also wrong: ${others.join(", ")}.` : first.remedy,
  });
}

/** What the schema found, in the words of the study file. `value` is the whole document. */
export function schemaFaults(issues: readonly z.core.$ZodIssue[], value: unknown): Fault[] {
  return issues.flatMap((issue) =>
    issue.code === "unrecognized_keys" ? issue.keys.map((key) => unknownKey([...issue.path, key])) : [valueFault(issue, value)],
  );
}

function valueFault(issue: z.core.$ZodIssue, document: unknown): Fault {
  const { path } = issue;
  if (path.length === 0)
    return {
      path,
      at: "value",
      code: "study-not-a-map",
      message: `The study file holds ${kindOf(document)}; expected keys such as 'study', 'speed' and 'variants'.`,
      remedy: "Write a study file with: dragledger new study.yaml body.stl",
    };
  const name = keyText(path);
  const entry = keyAt(path);
  const expects = entry?.expects ?? "another value";
  const value = valueAt(document, path);
  if (entry?.single && value !== null)
    return {
      path,
      at: "value",
      code: "not-computed",
      message: `Key '${name}' is ${shownValue(value)}, which is not computed by this version; the only value possible is ${entry.choices![0]}.`,
      remedy: `Write ${String(path.at(-1))}: ${entry.choices![0]}, or remove the key.`,
    };
  if (issue.code === "custom")
    return {
      path,
      at: "value",
      code: "study-value",
      message: `Key '${name}' ${issue.message}.`,
      remedy: remedyFor(entry?.description),
    };
  if (value === undefined)
    return {
      path,
      at: "key",
      code: "study-missing-key",
      message: `Key '${name}' is missing; expected ${expects}.`,
      remedy: remedyFor(entry?.description),
    };
  const found =
    value === null ? "has no value" : Array.isArray(value) && value.length === 0 ? "is an empty list" : `is ${kindOf(value)}`;
  return {
    path,
    at: value === null ? "key" : "value",
    code: "study-value",
    message: `Key '${name}' ${found}; expected ${typeof path.at(-1) === "number" ? `in the list ${expects}` : expects}.`,
    remedy: remedyFor(entry?.description),
  };
}

const remedyFor = (description: string | undefined): string => description ?? "Correct the value.";

function kindOf(value: unknown): string {
  if (value === null || value === undefined) return "nothing";
  if (Array.isArray(value)) return "a list";
  return typeof value === "object" ? "a block of keys" : shownValue(value);
}

function valueAt(document: unknown, path: Path): unknown {
  let value = document;
  for (const step of path)
    value = value === null || value === undefined ? undefined : (value as Record<PropertyKey, unknown>)[step];
  return value;
}

function unknownKey(path: Path): Fault {
  const key = String(path.at(-1));
  const later = notComputed.get(keyText(path));
  if (later !== undefined)
    return { path, at: "key", code: "not-computed", message: `Key '${key}': ${later}.`, remedy: "Remove the key." };
  const known = keysBelow(path.slice(0, -1));
  const meant =
    nearest(key, known) ??
    nearest(
      key,
      studyKeys.filter((entry) => !entry.key.includes("*")).map((entry) => entry.key),
    );
  return {
    path,
    at: "key",
    code: "study-unknown-key",
    message: `Unknown key '${key.slice(0, 60)}'${meant === null ? "" : ` (did you mean '${meant}'?)`}.`,
    remedy: `Keys possible here: ${known.join(", ")}.`,
  };
}

/** Names of the keys that can stand below a place. */
function keysBelow(path: Path): string[] {
  const above = path.length === 0 ? "" : `${keyAt(path)?.key ?? "?"}.`;
  return studyKeys
    .filter((entry) => entry.key.startsWith(above) && !entry.key.slice(above.length).includes("."))
    .map((entry) => entry.key.slice(above.length));
}

/**
 * The candidate that a misspelt word most likely means, or null. Case and separators do not count; a path such as `mesh.cells` is
 * also known by its last word. At most a third of the letters may differ.
 */
export function nearest(word: string, candidates: readonly string[]): string | null {
  const bare = (text: string): string => text.toLowerCase().replace(/[^\p{L}\p{N}]/gu, "");
  const wanted = bare(word.slice(0, 60));
  let best: string | null = null;
  let least = Math.max(1, Math.floor(wanted.length / 3)) + 1;
  for (const candidate of candidates) {
    const distance = editDistance(wanted, bare(candidate.slice(candidate.lastIndexOf(".") + 1)));
    if (distance < least) {
      least = distance;
      best = candidate;
    }
  }
  return best;
}

/** Letters to insert, remove, replace or swap with a neighbour (optimal string alignment; Damerau 1964). */
function editDistance(a: string, b: string): number {
  let before: number[] = [];
  let above = Array.from({ length: b.length + 1 }, (_, k) => k);
  for (let i = 1; i <= a.length; i++) {
    const row = [i];
    for (let j = 1; j <= b.length; j++) {
      const same = a[i - 1] === b[j - 1] ? 0 : 1;
      row[j] = Math.min(above[j]! + 1, row[j - 1]! + 1, above[j - 1]! + same);
      if (i > 1 && j > 1 && a[i - 1] === b[j - 2] && a[i - 2] === b[j - 1]) row[j] = Math.min(row[j]!, before[j - 2]! + 1);
    }
    before = above;
    above = row;
  }
  return above[b.length]!;
}
