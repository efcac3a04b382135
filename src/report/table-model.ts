import type { DifferenceVerdict } from "../compare/comparison.js";

/** Tables as plain data: what a template prints and a test reads. All texts are unescaped. */

export interface Cell {
  text: string;
  /** second line, smaller: a half-width, another unit */
  note?: string;
  /** the text is a verdict */
  verdict?: DifferenceVerdict;
}

export interface Row {
  head: string;
  note?: string;
  cells: Cell[];
  /** ledger part that the row is about: rows of one part are marked together */
  part?: string;
  /** a sum: set between rules */
  total?: boolean;
  /** the tone that the part is painted in on the body */
  tone?: number;
}

export interface RowGroup {
  /** heading across the table; null for none */
  title: string | null;
  rows: Row[];
}

export interface TableModel {
  /** said above the table, and its name for readers who hear it */
  caption: string;
  /** heading of the first column */
  corner: string;
  columns: { title: string; note?: string; numeric: boolean }[];
  groups: RowGroup[];
}

export const cell = (text: string, note?: string): Cell => (note === undefined ? { text } : { text, note });

export const numeric = (title: string, note?: string): TableModel["columns"][number] =>
  note === undefined ? { title, numeric: true } : { title, note, numeric: true };

export const words = (title: string): TableModel["columns"][number] => ({ title, numeric: false });
