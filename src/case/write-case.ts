import { existsSync } from "node:fs";
import { chmod, mkdir, readdir, rename, rm, writeFile } from "node:fs/promises";
import { basename, dirname, join } from "node:path";
import writeFileAtomic from "write-file-atomic";
import { inputProblem } from "../errors.js";
import { sha256 } from "./hash.js";
import { readRunCard } from "./read-run-card.js";
import type { CaseFile } from "./render.js";
import { type RunCard, runCardName } from "./run-card.js";

/** What is to be written: every file, and the card without the hashes of the files. */
export interface CaseContent {
  files: CaseFile[];
  card: Omit<RunCard, "hashes"> & { hashes: Omit<RunCard["hashes"], "files"> };
}

export interface Written {
  /** Relative paths that were new or differed; empty when the case was as planned. */
  changed: string[];
}

/**
 * Writes a case folder, or brings one of ours up to date. A new case appears whole or not at all (it is assembled beside its place and
 * renamed). A case that is as planned is not touched. One that holds results is changed only with `again`; the results stay where they
 * are, and the next run sets them aside.
 *
 * Throws an input problem for a folder that was not made by this program, or by another study, and for results that would be lost.
 */
export async function writeCase(folder: string, { files, card }: CaseContent, options: { again: boolean }): Promise<Written> {
  const hashes = Object.fromEntries(files.map(({ path, content }) => [path, sha256(content)]));
  const whole: RunCard = { ...card, hashes: { ...card.hashes, files: hashes } };
  if (!existsSync(folder)) {
    await writeNew(folder, files, whole);
    return { changed: files.map(({ path }) => path) };
  }
  const before = await ownedCard(folder, whole);
  const changed = files.filter(({ path }) => before.hashes.files[path] !== hashes[path] || !existsSync(join(folder, path)));
  const gone = Object.keys(before.hashes.files).filter((path) => !(path in hashes));
  const paths = [...changed.map(({ path }) => path), ...gone];
  if (paths.length === 0 && sameCard(before, whole)) return { changed: [] };
  if (paths.length > 0 && !options.again && existsSync(join(folder, "postProcessing")))
    throw inputProblem({
      code: "case-has-results",
      message: `The case holds results of another set-up: ${listed(paths)} would change.`,
      where: folder,
      remedy: "Prepare with --again to change it (the next run keeps the old results aside), or undo the change in the study.",
    });
  for (const file of changed) await writeOne(folder, file);
  for (const path of gone) await rm(join(folder, path), { force: true });
  await writeFileAtomic(join(folder, runCardName), cardText(whole));
  return { changed: paths.length > 0 ? paths : [runCardName] };
}

const cardText = (card: RunCard): string => `${JSON.stringify(card, null, 2)}\n`;

const sameCard = (a: RunCard, b: RunCard): boolean => cardText(a) === cardText(b);

const listed = (paths: string[]): string =>
  paths.length <= 4 ? paths.join(", ") : `${paths.slice(0, 3).join(", ")} and ${paths.length - 3} more files`;

async function ownedCard(folder: string, card: RunCard): Promise<RunCard> {
  const before = await readRunCard(folder);
  if (before === null)
    throw inputProblem({
      code: "foreign-folder",
      message: `The folder exists and was not made by dragledger (it has no ${runCardName}).`,
      where: folder,
      remedy: "Move it away, or give the study another folder.",
    });
  if (before.study.name !== card.study.name || before.variant !== card.variant)
    throw inputProblem({
      code: "case-of-another-study",
      message: `The folder holds variant '${before.variant}' of study '${before.study.name}', not variant '${card.variant}' of '${card.study.name}'.`,
      where: folder,
      remedy: "Put the two study files into different folders, or rename the variant.",
    });
  return before;
}

async function writeNew(folder: string, files: CaseFile[], card: RunCard): Promise<void> {
  const parent = dirname(folder);
  await mkdir(parent, { recursive: true });
  // What an earlier call left when it was killed.
  for (const name of await readdir(parent))
    if (name.startsWith(`.${basename(folder)}.part-`)) await rm(join(parent, name), { recursive: true });
  const part = join(parent, `.${basename(folder)}.part-${process.pid}`);
  for (const file of files) await writeOne(part, file);
  await writeFile(join(part, runCardName), cardText(card));
  await rename(part, folder);
}

async function writeOne(folder: string, { path, content, executable }: CaseFile): Promise<void> {
  const target = join(folder, path);
  await mkdir(dirname(target), { recursive: true });
  await writeFileAtomic(
    target,
    typeof content === "string" ? content : Buffer.from(content.buffer, content.byteOffset, content.byteLength),
  );
  if (executable) await chmod(target, 0o755);
}
