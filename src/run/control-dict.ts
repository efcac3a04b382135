import { createHash } from "node:crypto";
import { readFile, utimes } from "node:fs/promises";
import { join } from "node:path";
import writeFileAtomic from "write-file-atomic";
import { inputProblem } from "../errors.js";

/** Entries of system/controlDict that a run sets for itself; they do not change what is computed. */
export const runEntries = ["startFrom", "stopAt", "endTime", "writeInterval", "runTimeModifiable"] as const;

/** What a run has put into system/controlDict, kept in the state until the file is as it was prepared. */
export interface ControlEdit {
  prepared: string;
  /** sha256 of the texts put there: a file that has none of them was changed by somebody else and is left alone. */
  editedHashes: string[];
}

interface Entry {
  /** Where the value stands in the text: [from, to), without blanks around it. */
  from: number;
  to: number;
}

/**
 * Where the values of the entries of the outermost level stand. Comments, quoted text and sub-dictionaries are stepped over; nothing
 * in the text is carried out.
 */
export function outermostEntries(text: string): Map<string, Entry> {
  const entries = new Map<string, Entry>();
  const token = /\/\/[^\n]*|\/\*[\s\S]*?\*\/|"(?:\\.|[^"\\])*"|[{}();]|[^\s{}();"/]+|\//g;
  let depth = 0;
  let key: string | null = null;
  let from = -1;
  let to = -1;
  for (const match of text.matchAll(token)) {
    const word = match[0];
    if (word.startsWith("//") || word.startsWith("/*")) continue;
    if (word === "{" || word === "(") depth += 1;
    else if (word === "}" || word === ")") {
      depth -= 1;
      if (word === "}" && depth === 0) key = null;
    } else if (depth > 0) continue;
    else if (word === ";") {
      if (key !== null && from >= 0) entries.set(key, { from, to });
      key = null;
    } else if (key === null) {
      key = word;
      from = -1;
    } else {
      if (from < 0) from = match.index;
      to = match.index + word.length;
    }
  }
  return entries;
}

/** The value of an outermost entry as it is written, or null. */
export function entryOf(text: string, key: string): string | null {
  const entry = outermostEntries(text).get(key);
  return entry ? text.slice(entry.from, entry.to) : null;
}

/** The text with outermost entries set to new values; one that is missing is added at the end. All else stays byte for byte. */
export function withEntries(text: string, values: Record<string, string>): string {
  const entries = outermostEntries(text);
  const present = Object.entries(values)
    .filter(([key]) => entries.has(key))
    .sort(([a], [b]) => entries.get(b)!.from - entries.get(a)!.from);
  let edited = text;
  for (const [key, value] of present) {
    const { from, to } = entries.get(key)!;
    edited = edited.slice(0, from) + value + edited.slice(to);
  }
  const added = Object.entries(values).filter(([key]) => !entries.has(key));
  return added.length === 0
    ? edited
    : `${edited.replace(/\n*$/, "\n")}${added.map(([key, value]) => `${key} ${value};\n`).join("")}`;
}

/**
 * A write interval (iterations) near the prepared one that hits the last iteration: fields are only written when the interval divides an
 * iteration, and a run whose end is not written cannot be looked at or continued from there.
 */
export function writeIntervalFor(most: number, prepared: number): number {
  for (const limit of [prepared, 2 * prepared]) {
    for (let interval = Math.min(limit, most); interval >= Math.max(1, prepared / 2); interval -= 1) {
      if (most % interval === 0) return interval;
    }
  }
  return most;
}

export const hashOf = (text: string | Uint8Array): string => createHash("sha256").update(text).digest("hex");

const fileOf = (casePath: string) => join(casePath, "system", "controlDict");

export async function readControlDict(casePath: string): Promise<string> {
  return readFile(fileOf(casePath), "utf8").catch((error: NodeJS.ErrnoException) => {
    throw inputProblem({
      code: "no-control-dictionary",
      message: `The case has no readable system/controlDict (${error.code}).`,
      where: fileOf(casePath),
      remedy: "Write the case with `dragledger prepare`.",
      cause: error,
    });
  });
}

/** The text for the start of a solver: on from the last written time, up to `most` iterations. */
export function textForRun(prepared: string, most: number): string {
  const interval = Number(entryOf(prepared, "writeInterval"));
  const values: Record<string, string> = {
    startFrom: "latestTime",
    stopAt: "endTime",
    endTime: String(most),
    runTimeModifiable: "yes",
  };
  if (Number.isInteger(interval) && interval > 0 && /^(timeStep)?$/.test(entryOf(prepared, "writeControl") ?? "")) {
    values.writeInterval = String(writeIntervalFor(most, interval));
  }
  return withEntries(prepared, values);
}

/** The text that asks the running solver to write its fields at the end of its iteration and to end. */
export const textForEnd = (running: string): string => withEntries(running, { stopAt: "writeNow" });

/**
 * `ahead`: dates the file a minute ahead. A running solver takes it as changed only when its date is more than its
 * "fileModificationSkew" (10 s as shipped) past the one it read; so it notices at once.
 */
export async function writeControlDict(casePath: string, text: string, options: { ahead?: boolean } = {}): Promise<void> {
  await writeFileAtomic(fileOf(casePath), text);
  if (!options.ahead) return;
  const date = new Date(Date.now() + 60_000);
  await utimes(fileOf(casePath), date, date);
}

/** Puts the prepared text back; false when somebody else has changed the file meanwhile, which is then left as it is. */
export async function putBack(casePath: string, edit: ControlEdit): Promise<boolean> {
  const now = await readControlDict(casePath);
  if (now === edit.prepared) return true;
  if (!edit.editedHashes.includes(hashOf(now))) return false;
  await writeControlDict(casePath, edit.prepared);
  return true;
}
