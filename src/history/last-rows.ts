import type { Finding } from "../finding.js";
import type { History, Segment } from "./history.js";

export interface ColumnSummary {
  name: string;
  last: number;
  /** Mean and population standard deviation of the last rows. */
  mean: number;
  standardDeviation: number;
}

export interface HistorySummary {
  path: string;
  object: string;
  layout: string;
  dialect: string;
  header: History["header"];
  rows: number;
  /** first and last time; NaN without rows */
  from: number;
  to: number;
  columns: ColumnSummary[];
  segments: Segment[];
  findings: Finding[];
}

/** Last value, mean and population spread of each column over its last `count` rows; the time column is left out. */
export function lastRows(path: string, history: History, count: number): HistorySummary {
  const [time, ...columns] = history.columns;
  return {
    path,
    object: history.object,
    layout: history.layout,
    dialect: history.dialect,
    header: history.header,
    rows: history.rows,
    from: time && history.rows > 0 ? time.values[0] : Number.NaN,
    to: time && history.rows > 0 ? time.values[history.rows - 1] : Number.NaN,
    columns: columns.map(({ name, values }) => ({
      name,
      ...summary(values.subarray(Math.max(0, history.rows - count), history.rows)),
    })),
    segments: history.segments,
    findings: history.findings,
  };
}

function summary(values: Float64Array): Omit<ColumnSummary, "name"> {
  if (values.length === 0) return { last: Number.NaN, mean: Number.NaN, standardDeviation: Number.NaN };
  // Deviations from the first value keep the digits of a small spread about a large mean.
  const origin = values[0];
  let sum = 0;
  for (const x of values) sum += x - origin;
  const mean = origin + sum / values.length;
  let squares = 0;
  for (const x of values) squares += (x - mean) ** 2;
  return { last: values[values.length - 1], mean, standardDeviation: Math.sqrt(squares / values.length) };
}
