import type { Vector3 } from "../geometry/vector.js";

/** What a table of a function object holds, found from its header and shape, never from its folder. */
export type TableLayout =
  | "coefficients"
  | "forces"
  | "moments"
  | "residuals"
  | "solver-information"
  | "y-plus"
  | "wall-shear"
  | "bins"
  | "unknown";

export interface Column {
  name: string;
  /** one per row */
  values: Float64Array;
}

/** One table file as it stands. The first column is `Time`. */
export interface Table {
  layout: TableLayout;
  /** Which of the layouts C1-C7 / F1-F6 of the solver's history, for people; "" where it does not matter. */
  dialect: string;
  /** Values of the header lines (`magUInf`, `Aref`, `dragDir`, ...). */
  header: Record<string, number | string | Vector3>;
  columns: Column[];
  /** Text cells, such as patch names or solver names, one array per text column. */
  words: { name: string; values: string[] }[];
  rows: number;
  /** What was odd: cut last line, header and rows that differ, ... as code and sentence. */
  remarks: { code: string; message: string }[];
}
