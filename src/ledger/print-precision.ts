import type { History } from "../history/history.js";

/** Digits that the solver prints unless told otherwise: one before the point and six after it. */
const usualDigits = 7;
/** The fewest digits in use. */
const fewestDigits = 5;
const mostDigits = 17;
/** Different values that must agree in their number of digits before it is believed. */
const fewestValues = 20;
const mostValues = 60;

/**
 * Significant digits that the numbers of some tables were printed with, told from the numbers: the fewest that reproduce a spread of
 * values exactly. The table with the fewest counts. Where too few different values say so, the solver's usual seven.
 */
export function printedDigits(histories: readonly History[]): number {
  let fewest = Number.POSITIVE_INFINITY;
  for (const { columns, rows } of histories) {
    // Totals may be sums made here, with more digits than the file holds.
    const printed = columns.slice(1).filter(({ name }) => !name.startsWith("total_"));
    const values = spread(printed.map((column) => column.values.subarray(0, rows)));
    fewest = Math.min(fewest, values.length < fewestValues ? usualDigits : digitsOf(values));
  }
  return Number.isFinite(fewest) ? fewest : usualDigits;
}

/** Different finite values other than zero from all over the table. */
function spread(columns: Float64Array[]): number[] {
  const all = columns.reduce((sum, column) => sum + column.length, 0);
  const step = Math.max(1, Math.floor(all / (3 * mostValues)));
  const found = new Set<number>();
  let next = 0;
  let at = 0;
  for (const column of columns)
    for (const value of column) {
      if (at++ < next) continue;
      next += step;
      if (Number.isFinite(value) && value !== 0) found.add(value);
      if (found.size >= mostValues) return [...found];
    }
  return [...found];
}

function digitsOf(values: number[]): number {
  let digits = fewestDigits;
  for (const value of values) while (digits < mostDigits && Number(value.toPrecision(digits)) !== value) digits += 1;
  return digits;
}
