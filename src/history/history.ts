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
  /** Name of the function object (folder below postProcessing). */
  object: string;
  layout: TableLayout;
  dialect: string;
  header: Record<string, number | string | Vector3>;
  /** columns[0] is `Time`, increasing; NaN marks a missing cell. */
  columns: Column[];
  rows: number;
  segments: Segment[];
  findings: Finding[];
}
