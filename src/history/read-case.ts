import type { Dirent } from "node:fs";
import { readdir, realpath } from "node:fs/promises";
import { join, relative, sep } from "node:path";
import { inputProblem, Problem } from "../errors.js";
import { readTables } from "../openfoam/read-table.js";
import { shownText } from "../openfoam/table-bytes.js";
import type { History } from "./history.js";
import { type Piece, pieceOf } from "./pieces.js";
import { readBytes, sharedTableName, tablePath } from "./read-file.js";
import { type RefusedFile, splice } from "./splice.js";

/** Regions and objects make three levels; more is no output of a function object. */
const deepest = 6;
/** Folders of the case root that hold no tables. */
const otherFolders = /^(?:constant|system|postProcessing|processors?\d*.*|dynamicCode|VTK|\..*|\d.*)$/;
const tableEnding = /\.dat(?:\.gz)?$/;
/** The tables that versions before 2.3 put into the case root. */
const rootTable = /^(?:forces|forceCoeffs)\.dat(?:\.gz)?$/;

/**
 * Every history below a case's `postProcessing` (any depth, any region), and those of old versions in the case root, each spliced
 * from all its files. Files that are no known table are passed over; damaged ones are named in the segments and findings.
 *
 * @returns histories in order of object and table name; empty when the case holds none
 * @throws Problem (input) when the folder does not exist
 */
export async function readCaseHistories(casePath: string): Promise<History[]> {
  const groups = new Map<string, { object: string; table: string; pieces: Piece[]; refused: RefusedFile[] }>();
  for (const path of await findTables(casePath)) {
    const parts = tablePath(path);
    const name = relative(casePath, path).split(sep).join("/");
    const object = objectName(name);
    const group = (table: string) => {
      const key = `${object}\n${table}`;
      let found = groups.get(key);
      if (found === undefined) groups.set(key, (found = { object, table, pieces: [], refused: [] }));
      return found;
    };
    try {
      const tables = readTables(await readBytes(path), path);
      if (tables[0]!.layout === "unknown") continue;
      for (const table of tables) {
        group(sharedTableName(parts.table, table.layout, tables.length)).pieces.push(
          pieceOf(table, path, parts.folderTime, parts.suffixed),
        );
      }
    } catch (error) {
      if (!(error instanceof Problem)) throw error;
      if (error.code !== "no-table") group(parts.table).refused.push({ file: path, reason: error.message });
    }
  }
  moveRefused(groups);
  return [...groups.values()]
    .sort((a, b) => (a.object === b.object ? (a.table < b.table ? -1 : 1) : a.object < b.object ? -1 : 1))
    .map(({ object, table, pieces, refused }) => splice(object, table, pieces, refused));
}

/** A damaged `forces.dat` belongs to both histories that its undamaged siblings gave. */
function moveRefused(groups: Map<string, { object: string; table: string; pieces: Piece[]; refused: RefusedFile[] }>): void {
  for (const [key, group] of groups) {
    if (group.pieces.length > 0) continue;
    const siblings = [...groups.values()].filter(
      (other) => other !== group && other.object === group.object && other.table.startsWith(`${group.table} (`),
    );
    for (const sibling of siblings) sibling.refused.push(...group.refused);
    if (siblings.length > 0) groups.delete(key);
  }
}

/** `postProcessing/[region/]object/time/file` gives `[region/]object`; `object/time/file` gives `object`. */
function objectName(path: string): string {
  const folders = path.split("/").slice(0, -2);
  return shownText((folders[0] === "postProcessing" ? folders.slice(1) : folders).join("/"));
}

async function findTables(casePath: string): Promise<string[]> {
  const top = await entries(casePath);
  if (top === null) {
    throw inputProblem({
      code: "no-case",
      message: "there is no such folder",
      where: casePath,
      remedy: "Give the folder of an OpenFOAM case: the one that holds system/ and constant/.",
    });
  }
  const found: string[] = [];
  await walk(join(casePath, "postProcessing"), 0, tableEnding, new Set(), found);
  for (const entry of top) {
    if (entry.isDirectory() && !otherFolders.test(entry.name)) {
      for (const time of (await entries(join(casePath, entry.name))) ?? []) {
        if (!time.isDirectory()) continue;
        const folder = join(casePath, entry.name, time.name);
        for (const file of (await entries(folder)) ?? []) {
          const path = join(folder, file.name);
          if (rootTable.test(file.name) && !Number.isNaN(tablePath(path).folderTime)) found.push(path);
        }
      }
    }
  }
  return found.sort();
}

async function walk(folder: string, depth: number, wanted: RegExp, seen: Set<string>, found: string[]): Promise<void> {
  const real = await realpath(folder).catch(() => null);
  // A link that leads back up would be walked for ever.
  if (real === null || seen.has(real) || depth > deepest) return;
  seen.add(real);
  for (const entry of (await entries(folder)) ?? []) {
    const path = join(folder, entry.name);
    if (entry.isDirectory() || entry.isSymbolicLink()) await walk(path, depth + 1, wanted, seen, found);
    if (!entry.isDirectory() && wanted.test(entry.name) && !Number.isNaN(tablePath(path).folderTime)) found.push(path);
  }
}

async function entries(folder: string): Promise<Dirent[] | null> {
  return readdir(folder, { withFileTypes: true }).catch(() => null);
}
