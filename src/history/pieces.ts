import type { Column, Table, TableLayout } from "../openfoam/table.js";

/** One table file, ready to be joined with others of the same object: rows in order of time. */
export interface Piece {
  file: string;
  /** Time in the folder's name; NaN for a file read on its own. */
  folderTime: number;
  /** The name ends with `_<time>`: written by a later run than the plain file in the same folder. */
  suffixed: boolean;
  table: Table;
  /** Rows in the file. */
  fileRows: number;
  /** first and last time; NaN without rows */
  from: number;
  to: number;
  /** typical distance of two rows; NaN with fewer than two times */
  step: number;
  /** What was left out while the piece was made ready, in words; "" for nothing. */
  remark: string;
}

/** A time repeats in these tables: one row per patch. */
export const repeatsTimes = (layout: TableLayout, words: Table["words"]): boolean =>
  layout === "y-plus" || layout === "wall-shear" || (layout === "unknown" && words.length > 0);

/** Rows of a table at the given indices. */
export function pickRows(table: Table, indices: Int32Array): Table {
  if (indices.length === table.rows) return table;
  return {
    ...table,
    columns: table.columns.map(({ name, values }) => ({ name, values: Float64Array.from(indices, (row) => values[row]!) })),
    words: table.words.map(({ name, values }) => ({ name, values: Array.from(indices, (row) => values[row]!) })),
    rows: indices.length,
  };
}

/**
 * Makes a table ready for joining: where the time goes back inside the file (files put together by hand) the later rows replace the
 * earlier ones, and of rows with the same time the last is kept.
 */
export function pieceOf(table: Table, file: string, folderTime: number, suffixed: boolean): Piece {
  const time = table.columns[0]?.values ?? new Float64Array(0);
  const repeats = repeatsTimes(table.layout, table.words);
  const kept = new Int32Array(table.rows);
  let count = 0;
  let wentBack = 0;
  for (let row = 0; row < table.rows; row += 1) {
    const now = time[row]!;
    if (count > 0 && now < time[kept[count - 1]!]!) wentBack += 1;
    while (count > 0 && (now < time[kept[count - 1]!]! || (!repeats && now === time[kept[count - 1]!]!))) count -= 1;
    // A run that goes back to a time replaces all rows of that time.
    if (repeats && wentBack > 0 && count > 0 && row > 0 && now < time[row - 1]!) {
      while (count > 0 && time[kept[count - 1]!]! >= now) count -= 1;
    }
    kept[count++] = row;
  }
  const ordered = pickRows(table, kept.slice(0, count));
  const dropped = table.rows - count;
  let remark = "";
  if (dropped > 0) {
    remark =
      wentBack > 0
        ? `the time goes back inside the file: ${dropped} rows were replaced by later ones`
        : `${dropped} rows repeat a time: the last of each was kept`;
  }
  const times = ordered.columns[0]?.values ?? time;
  return {
    file,
    folderTime,
    suffixed,
    table: ordered,
    fileRows: table.rows,
    from: times[0] ?? Number.NaN,
    to: times[count - 1] ?? Number.NaN,
    step: medianStep(times.subarray(0, count)),
    remark,
  };
}

function medianStep(time: Float64Array): number {
  const steps: number[] = [];
  for (let row = 1; row < time.length; row += 1) if (time[row]! > time[row - 1]!) steps.push(time[row]! - time[row - 1]!);
  if (steps.length === 0) return Number.NaN;
  steps.sort((a, b) => a - b);
  return steps[Math.floor(steps.length / 2)]!;
}

/** Columns of several tables one below the other, by name; NaN where a table lacks a column. */
export function stackTables(tables: readonly Table[]): { columns: Column[]; words: Table["words"]; rows: number } {
  const rows = tables.reduce((sum, table) => sum + table.rows, 0);
  const columns = new Map<string, Float64Array>();
  const words = new Map<string, string[]>();
  let offset = 0;
  for (const table of tables) {
    for (const { name, values } of table.columns) {
      let stacked = columns.get(name);
      if (stacked === undefined) columns.set(name, (stacked = new Float64Array(rows).fill(Number.NaN)));
      stacked.set(values, offset);
    }
    for (const { name, values } of table.words) {
      let stacked = words.get(name);
      if (stacked === undefined) words.set(name, (stacked = Array<string>(rows).fill("")));
      for (let row = 0; row < values.length; row += 1) stacked[offset + row] = values[row]!;
    }
    offset += table.rows;
  }
  return {
    columns: [...columns].map(([name, values]) => ({ name, values })),
    words: [...words].map(([name, values]) => ({ name, values })),
    rows,
  };
}
