import { lstat, readFile } from "node:fs/promises";
import { join } from "node:path";
import type { CaseContent } from "./case-content.js";
import { sha256 } from "./hash.js";
import type { RunCard } from "./run-card.js";

/** How a file of a case that exists differs from what is planned. */
export interface FileChange {
  /** relative to the case folder */
  path: string;
  /**
   * write: new, or as it was prepared before; edited: changed by somebody else, and planned otherwise than before; left: changed
   * by somebody else, planned as before; gone: no longer planned.
   */
  kind: "write" | "edited" | "left" | "gone";
  /** The mesh or the solution depends on it. */
  spoils: boolean;
}

/** Neither mesh nor solution depend on these. */
const harmless = new Set(["README.md", "Allrun", "Allclean", "system/decomposeParDict"]);

/** Entries of controlDict that only say how long and how often; a run sets them for itself. */
const pace = /^(startFrom|stopAt|endTime|writeInterval|purgeWrite|runTimeModifiable)\s.*$/gm;
const control = "system/controlDict";

/**
 * The files of a case folder that are not as planned. `before`: its run card, which tells what this program wrote there from what
 * somebody changed since.
 */
export async function fileChanges(folder: string, content: CaseContent, before: RunCard): Promise<FileChange[]> {
  const changes: FileChange[] = [];
  for (const file of content.files) {
    const change = await changeOf(folder, file.path, file.content, before.hashes.files[file.path]);
    if (change !== null) changes.push(change);
  }
  const planned = new Set(content.files.map(({ path }) => path));
  for (const path of Object.keys(before.hashes.files))
    if (!planned.has(path) && inside(path) && (await lstat(join(folder, path)).catch(() => null)) !== null)
      changes.push({ path, kind: "gone", spoils: !harmless.has(path) });
  return changes;
}

async function changeOf(
  folder: string,
  path: string,
  content: string | Uint8Array,
  hashBefore: string | undefined,
): Promise<FileChange | null> {
  const planned = sha256(content);
  const bytes = await readFile(join(folder, path)).catch(() => null);
  const spoils = !harmless.has(path) && planned !== hashBefore && !(path === control && samePace(bytes, content));
  if (bytes === null) return { path, kind: "write", spoils };
  const found = sha256(bytes);
  if (found === planned) return null;
  if (found === hashBefore) return { path, kind: "write", spoils };
  // A run that was killed leaves the entries that it set for itself.
  if (path === control && samePace(bytes, content)) return planned === hashBefore ? null : { path, kind: "write", spoils };
  return { path, kind: planned === hashBefore ? "left" : "edited", spoils };
}

const samePace = (bytes: Buffer | null, content: string | Uint8Array): boolean =>
  bytes !== null && typeof content === "string" && bytes.toString("utf8").replace(pace, "") === content.replace(pace, "");

/** A run card is a file that anybody may edit: no path in it may lead out of the case. */
const inside = (path: string): boolean => !path.startsWith("/") && !path.split(/[/\\]/).includes("..");
