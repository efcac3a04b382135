import type { z } from "zod";
import { inputProblem, type Problem } from "../errors.js";
import { keyAt, notComputed, type StudyKey, studyKeys } from "./keys.js";
import { printable, shownValue } from "./message-text.js";
import { nearest } from "./nearest.js";
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

/** Faults whose place is looked up; a file with more is no study. */
const MOST_PLACED = 100;

/** A path as it is written in messages: `variants.open-bed.files[0]`. */
export function keyText(path: Path): string {
  return path
    .map((step, k) => (typeof step === "number" ? `[${step}]` : `${k > 0 ? "." : ""}${printable(String(step)).slice(0, 60)}`))
    .join("");
}

/** The problem to throw for what is wrong with a file: the first fault in the order of the text, and where the others are. */
export function problemOf(faults: Fault[], source: YamlSource, name: string): Problem {
  const placed = faults
    .slice(0, MOST_PLACED)
    .map((fault) => ({ ...fault, position: source.at(fault.path, fault.at) }))
    .sort((a, b) => a.position.line - b.position.line || a.position.column - b.position.column);
  const first = placed[0]!;
  const others = placed.slice(1, 6).map((fault) => `line ${fault.position.line} (${keyText(fault.path)})`);
  if (faults.length > 6) others.push(`${faults.length - 6} more`);
  const key = keyText(first.path);
  return inputProblem({
    code: first.code,
    message: printable(first.message),
    where: `${name}:${first.position.line}:${first.position.column}${key ? ` (${key})` : ""}`,
    remedy: printable(others.length > 0 ? `${first.remedy} Also wrong: ${others.join(", ")}.` : first.remedy),
  });
}

/** What the schema found, in the words of the study file. `document` is the whole of what was checked. */
export function schemaFaults(issues: readonly z.core.$ZodIssue[], document: unknown): Fault[] {
  return issues.flatMap((issue) =>
    issue.code === "unrecognized_keys" ? issue.keys.map((key) => unknownKey([...issue.path, key])) : [valueFault(issue, document)],
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
  const entry = keyAt(path);
  if (entry === null) throw new Error(`study key ${keyText(path)} has no entry`);
  const name = `Key '${keyText(path)}'`;
  const value = valueAt(document, path);
  const expects = typeof path.at(-1) === "number" && !entry.quantity ? "a text" : entry.expects;
  const remedy = remedyFor(entry);
  if (value === undefined)
    return { path, at: "key", code: "study-missing-key", message: `${name} is missing; expected ${expects}.`, remedy };
  if (value === null)
    return { path, at: "key", code: "study-value", message: `${name} has no value; expected ${expects}.`, remedy };
  if (entry.single && !(issue.code === "custom" && issue.params?.worded))
    return {
      path,
      at: "value",
      code: "not-computed",
      message: `${name} is ${shownValue(value)}, which this version does not compute; the only value possible is ${entry.choices![0]}.`,
      remedy: `Write ${lastWord(entry)}: ${entry.choices![0]}, or remove the key.`,
    };
  if (issue.code === "custom") return { path, at: "value", code: "study-value", message: `${name} ${issue.message}.`, remedy };
  if ((typeof value === "number" || typeof value === "boolean") && !entry.quantity && !entry.choices)
    return {
      path,
      at: "value",
      code: "study-value",
      message: `${name} is ${shownValue(value)}, which YAML reads as a ${typeof value}; expected ${expects}.`,
      remedy: `Put it in quotes if it is meant: "${shownValue(value)}".`,
    };
  const found = isEmpty(value) ? "is empty" : (tooMany(issue) ?? `is ${kindOf(value)}`);
  return { path, at: "value", code: "study-value", message: `${name} ${found}; expected ${expects}.`, remedy };
}

const isEmpty = (value: unknown): boolean => value === "" || (Array.isArray(value) && value.length === 0);

/** Lists are the only thing that can be too long; within a union the fault is one level down. */
function tooMany(issue: z.core.$ZodIssue): string | null {
  if (issue.code === "too_big") return `is a list of more than ${issue.maximum}`;
  if (issue.code !== "invalid_union") return null;
  return (
    issue.errors
      .flat()
      .map(tooMany)
      .find((found) => found !== null) ?? null
  );
}

const lastWord = (entry: StudyKey): string => entry.key.slice(entry.key.lastIndexOf(".") + 1);

function remedyFor(entry: StudyKey): string {
  if (entry.default !== undefined) return `Correct it, or remove the key to have ${entry.default}.`;
  if (lastWord(entry) === "*") return `Write, for example, name: ${entry.example}.`;
  if (entry.required) return `Write, for example, ${lastWord(entry)}: ${entry.example}.`;
  return `Write, for example, ${lastWord(entry)}: ${entry.example}, or remove the key.`;
}

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
  const here = keysBelow(path.slice(0, -1));
  const anywhere = studyKeys.map((entry) => entry.key).filter((each) => !each.includes("*"));
  const meant = nearest(key, here) ?? nearest(key, anywhere);
  return {
    path,
    at: "key",
    code: "study-unknown-key",
    message: `Unknown key '${key.slice(0, 60)}'${meant === null ? "" : ` (did you mean '${meant}'?)`}.`,
    remedy: `Keys possible here: ${here.join(", ")}.`,
  };
}

/** Names of the keys that can stand below a place. */
function keysBelow(path: Path): string[] {
  const above = path.length === 0 ? "" : `${keyAt(path)?.key ?? "?"}.`;
  return studyKeys
    .filter((entry) => entry.key.startsWith(above) && !entry.key.slice(above.length).includes("."))
    .map((entry) => entry.key.slice(above.length));
}
