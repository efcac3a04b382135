import { readFile } from "node:fs/promises";
import { basename, dirname } from "node:path";
import { inputProblem } from "../errors.js";
import { readTables } from "../openfoam/read-table.js";
import { shownText } from "../openfoam/table-bytes.js";
import { checkHistory } from "./checks.js";
import type { History } from "./history.js";
import { type Piece, pieceOf } from "./pieces.js";
import { tableFindings } from "./splice.js";

const timeName = /^\d+(?:\.\d*)?(?:[eE][+-]?\d+)?$/;
const tableFileName = /^(.+?)(?:_(\d+(?:\.\d*)?(?:[eE][+-]?\d+)?))?\.dat(?:\.gz)?$/;

/** What a path says of a table file: its object, table name, folder time and restart suffix. */
export interface TablePath {
  object: string;
  table: string;
  /** NaN when the folder's name is no time */
  folderTime: number;
  suffixed: boolean;
}

/** Takes a path such as `.../forces/500/force_500.dat.gz` apart. */
export function tablePath(path: string): TablePath {
  const folder = basename(dirname(path));
  const isTime = timeName.test(folder);
  const name = tableFileName.exec(basename(path));
  return {
    object: shownText(isTime ? basename(dirname(dirname(path))) : folder),
    table: shownText(name?.[1] ?? basename(path)),
    folderTime: isTime ? Number(folder) : Number.NaN,
    suffixed: name?.[2] !== undefined,
  };
}

/** Name of a table that shares its file with another one: a `forces.dat` holds forces and moments. */
export const sharedTableName = (table: string, layout: string, count: number): string =>
  count > 1 ? `${table} (${layout})` : table;

/**
 * The tables of one file as they stand, each with its findings: one history, or two (forces, moments) for a `forces.dat`. All
 * rows of the file are kept, except a cut last line and rows that a later run inside the same file replaced.
 *
 * @throws Problem (input) when the file is missing, damaged or no table
 */
export async function readHistoryFile(path: string): Promise<History[]> {
  const bytes = await readBytes(path);
  const tables = readTables(bytes, path);
  const { object, table: name, folderTime, suffixed } = tablePath(path);
  return tables.map((table) =>
    historyOf(object, sharedTableName(name, table.layout, tables.length), pieceOf(table, path, folderTime, suffixed)),
  );
}

/** The bytes of a file; throws a Problem (input) that names the way out when it cannot be read. */
export async function readBytes(path: string): Promise<Uint8Array> {
  try {
    return await readFile(path);
  } catch (cause) {
    throw inputProblem({
      code: "unreadable-file",
      message: `the file cannot be read (${cause instanceof Error ? cause.message : String(cause)})`,
      where: path,
      remedy: "Check the path and its permissions.",
      cause,
    });
  }
}

function historyOf(object: string, name: string, piece: Piece): History {
  const { table } = piece;
  const history: History = {
    object,
    table: name,
    layout: table.layout,
    dialect: table.dialect,
    header: table.header,
    columns: table.columns,
    words: table.words,
    rows: table.rows,
    segments: [
      {
        file: piece.file,
        from: piece.from,
        to: piece.to,
        rows: piece.fileRows,
        used: table.rows,
        reason: piece.remark === "" ? "read on its own" : `read on its own; ${piece.remark}`,
      },
    ],
    findings: tableFindings(piece),
  };
  history.findings.push(...checkHistory(history));
  return history;
}
