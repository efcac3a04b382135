import { lstat, mkdir, readdir, rename, rm, stat, writeFile } from "node:fs/promises";
import { basename, dirname, join } from "node:path";
import { lock } from "proper-lockfile";
import { inputProblem } from "../errors.js";
import type { CaseContent } from "./case-content.js";
import { type FileChange, fileChanges } from "./file-changes.js";
import { keepAside, resultsIn } from "./keep-aside.js";
import { planDifferences } from "./plan-differences.js";
import { readRunCard } from "./read-run-card.js";
import type { CaseFile } from "./render.js";
import { type RunCard, runCardName } from "./run-card.js";

export interface Written {
  changed: boolean;
  remarks: string[];
}

/**
 * Writes a case folder, or brings one of ours up to date.
 *
 * A new case is assembled beside its place and renamed: it is there as a whole or not at all. In one that exists, each file is replaced by
 * renaming and the run card comes last, so that a call that is cut short leaves the old card, by which the next one sees what is left
 * to do. A case that is as planned is not touched.
 *
 * Where the change makes results or the mesh worthless, or would undo edits made by hand, it needs `again`; results are then moved
 * to earlier/<number> in the case.
 *
 * @throws Problem(input) `foreign-folder`, `case-of-another-study`, `case-has-results`, `case-edited`, `case-is-running`,
 * `damaged-run-card`, `cannot-write-case`.
 */
export async function writeCase(folder: string, content: CaseContent, options: { again: boolean }): Promise<Written> {
  try {
    return await bringUpToDate(folder, content, options);
  } catch (error) {
    const why = refusals[(error as NodeJS.ErrnoException).code ?? ""];
    if (why === undefined) throw error;
    throw inputProblem({
      code: "cannot-write-case",
      message: `The case cannot be written: ${why}.`,
      where: (error as NodeJS.ErrnoException).path ?? folder,
      remedy: "Make room or set the permissions there, then prepare again: what was written so far is kept or repaired.",
      cause: error,
    });
  }
}

/** What the system may say no with, in words. */
const refusals: Record<string, string> = {
  EACCES: "permission denied",
  EPERM: "permission denied",
  EROFS: "the file system is read-only",
  ENOSPC: "the disk is full",
  EDQUOT: "the disk quota is used up",
  ENOTDIR: "there is a file where a folder is needed",
  EEXIST: "there is a file where a folder is needed",
  EISDIR: "there is a folder where a file is needed",
  ENAMETOOLONG: "the path is too long",
};

async function bringUpToDate(folder: string, content: CaseContent, options: { again: boolean }): Promise<Written> {
  if (await isFree(folder)) {
    await writeNew(folder, content);
    return { changed: true, remarks: [] };
  }
  const before = await ownCard(folder, content.card);
  const changes = await fileChanges(folder, content, before);
  if (changes.every(({ kind }) => kind === "left") && sameCard(before, content.card))
    return { changed: false, remarks: leftRemarks(changes) };
  return withLock(folder, () => update(folder, content, before, changes, options));
}

async function update(
  folder: string,
  content: CaseContent,
  before: RunCard,
  changes: FileChange[],
  { again }: { again: boolean },
): Promise<Written> {
  const edited = changes.filter(({ kind }) => kind === "edited");
  if (edited.length > 0 && !again)
    throw inputProblem({
      code: "case-edited",
      message: `${listed(edited.map(({ path }) => path))} ${edited.length === 1 ? "was" : "were"} edited by hand since the case was prepared, and would change.`,
      where: folder,
      remedy: "Bring the edits into the study where it has a key for them, or prepare with --again to write over them.",
    });
  const results = changes.some(({ spoils }) => spoils) ? await resultsIn(folder) : [];
  const remarks = leftRemarks(changes);
  if (results.length > 0) {
    if (!again) throw hasResults(folder, before, content.card, changes);
    remarks.push(`The results of the earlier set-up were moved to ${await keepAside(folder, results)}.`);
  }
  const byPath = new Map(content.files.map((file) => [file.path, file]));
  for (const { path, kind } of changes) {
    if (kind === "left") continue;
    if (kind === "gone") await rm(join(folder, path), { force: true });
    else await writeOne(folder, byPath.get(path)!);
  }
  await writeOne(folder, cardFile(content.card));
  return { changed: true, remarks };
}

function hasResults(folder: string, before: RunCard, now: RunCard, changes: FileChange[]) {
  const paths = changes.filter(({ spoils }) => spoils).map(({ path }) => path);
  const differences = planDifferences(before, now);
  const what = differences.length > 0 ? listed(differences, "; ") : `other contents of ${listed(paths)}`;
  return inputProblem({
    code: "case-has-results",
    message: `The case holds a mesh or results of another set-up: ${what}.`,
    where: folder,
    remedy: "Prepare with --again to set it up anew (the old results are moved to earlier/), or undo the change.",
  });
}

const listed = (items: string[], between = ", "): string =>
  items.length <= 4 ? items.join(between) : `${items.slice(0, 3).join(between)} and ${items.length - 3} more`;

function leftRemarks(changes: FileChange[]): string[] {
  const left = changes.filter(({ kind }) => kind === "left").map(({ path }) => path);
  return left.length === 0 ? [] : [`Edited by hand and left as ${left.length === 1 ? "it is" : "they are"}: ${listed(left)}.`];
}

/** Nothing there, or an empty folder. A link to nowhere is not free. */
async function isFree(folder: string): Promise<boolean> {
  const found = await lstat(folder).catch(() => null);
  if (found === null) return true;
  if (!found.isDirectory()) return false;
  return (await readdir(folder)).length === 0;
}

async function ownCard(folder: string, card: RunCard): Promise<RunCard> {
  const found = await stat(folder).catch(() => null);
  const before = found?.isDirectory() ? await readRunCard(folder) : null;
  if (before === null)
    throw inputProblem({
      code: "foreign-folder",
      message: `${found?.isDirectory() ? `This folder has no ${runCardName}: it` : "This"} was not made by dragledger and is left alone; a case was to be written here.`,
      where: folder,
      remedy: "Move it away, or rename the variant.",
    });
  if (before.study.name !== card.study.name || before.variant !== card.variant)
    throw inputProblem({
      code: "case-of-another-study",
      message: `The folder holds variant '${before.variant}' of study '${before.study.name}'; variant '${card.variant}' of '${card.study.name}' was to be written here.`,
      where: folder,
      remedy: "Keep the two study files in different folders, or rename the variant; move the case away if the study was renamed.",
    });
  return before;
}

const cardText = (card: RunCard): string => `${JSON.stringify(card, null, 2)}\n`;
const cardFile = (card: RunCard): CaseFile => ({ path: runCardName, content: cardText(card), executable: false });

/** The same whatever the order of keys; the version of the program alone is no difference. */
function sameCard(before: RunCard, now: RunCard): boolean {
  const plain = (card: RunCard): string => JSON.stringify(sorted({ ...card, tool: null, recorded: null }));
  return plain(before) === plain(now);
}

function sorted(value: unknown): unknown {
  if (Array.isArray(value)) return value.map(sorted);
  if (value === null || typeof value !== "object") return value;
  return Object.fromEntries(
    Object.entries(value)
      .sort(([a], [b]) => (a < b ? -1 : 1))
      .map(([key, child]) => [key, sorted(child)]),
  );
}

const partOf = (folder: string): string => join(dirname(folder), `.${basename(folder)}.part`);

async function writeNew(folder: string, { files, card }: CaseContent): Promise<void> {
  const part = partOf(folder);
  // What a call that was cut short has left.
  await rm(part, { recursive: true, force: true });
  for (const file of files) await writeOne(part, file);
  await writeOne(part, cardFile(card));
  await rename(part, folder);
}

/** Replaces a file by renaming; a link in its place is replaced, not followed. */
async function writeOne(folder: string, { path, content, executable }: CaseFile): Promise<void> {
  const target = join(folder, path);
  await mkdir(dirname(target), { recursive: true });
  const temporary = join(dirname(target), `.${basename(target)}.part`);
  await writeFile(temporary, content, { mode: executable ? 0o755 : 0o644 });
  await rename(temporary, target);
}

/** The lock that a run holds on its case. */
export const runLockName = "run.lock";

async function withLock<Result>(folder: string, work: () => Promise<Result>): Promise<Result> {
  const release = await lock(folder, { lockfilePath: join(folder, runLockName), stale: 30_000, realpath: false }).catch(
    (error: NodeJS.ErrnoException) => {
      if (error.code !== "ELOCKED") throw error;
      throw inputProblem({
        code: "case-is-running",
        message: "This case is being run; it was not changed.",
        where: folder,
        remedy: "Wait until the run has ended, or end it first (Ctrl-C there); then prepare again.",
      });
    },
  );
  try {
    return await work();
  } finally {
    await release();
  }
}
