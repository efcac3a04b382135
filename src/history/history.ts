import type { Finding } from "../finding.js";
import type { Vector3 } from "../geometry/vector.js";
import type { Column, TableLayout } from "../openfoam/table.js";

/** One file's share of a spliced history. */
export interface Segment {
  file: string;
  /** first and last time in the file */
  from: number;
  to: number;
  rows: number;
  /** rows that went into the history */
  used: number;
  /** Why rows were used, dropped or left out, in words. */
  reason: string;
}

/** The record of one function object over iterations or time, spliced from all its files. */
export interface History {
  /** Name of the function object (folder below postProcessing); `region/object` for a mesh region with a name. */
  object: string;
  /** Name of the table's files without folder, restart suffix and ending: `coefficient`, `force`, `CdBin`. */
  table: string;
  layout: TableLayout;
  dialect: string;
  header: Record<string, number | string | Vector3>;
  /** columns[0] is `Time`, increasing (in tables with a row per patch a time repeats); NaN marks a missing cell. */
  columns: Column[];
  /** Text cells, such as patch names: one array per text column, one entry per row. */
  words: { name: string; values: string[] }[];
  rows: number;
  segments: Segment[];
  findings: Finding[];
}
