/** A line in as many points as can be seen. */
export interface Thinned {
  x: Float64Array;
  y: Float64Array;
}

/**
 * Thins a line to its least and greatest value in each of `columns` equal stretches of x, in the order in which they come: drawn at that
 * many pixels across it looks the same, and no peak is lost. Values that are not finite are left out. `x` increases. A line that has no
 * more than two points per column is kept as it is.
 */
export function thinned(x: Float64Array, y: Float64Array, columns: number): Thinned {
  const rows: number[] = [];
  const finite = (row: number): boolean => Number.isFinite(x[row]) && Number.isFinite(y[row]);
  if (x.length <= 2 * columns) {
    for (let row = 0; row < x.length; row++) if (finite(row)) rows.push(row);
    return pick(x, y, rows);
  }
  const from = x[0];
  const step = (x[x.length - 1] - from) / columns;
  for (let row = 0, column = 0; column < columns && row < x.length; column++) {
    const end = column === columns - 1 ? Number.POSITIVE_INFINITY : from + (column + 1) * step;
    let [least, greatest] = [-1, -1];
    for (; row < x.length && x[row] < end; row++) {
      if (!finite(row)) continue;
      if (least < 0 || y[row] < y[least]) least = row;
      if (greatest < 0 || y[row] > y[greatest]) greatest = row;
    }
    if (least < 0) continue;
    rows.push(Math.min(least, greatest));
    if (least !== greatest) rows.push(Math.max(least, greatest));
  }
  return pick(x, y, rows);
}

const pick = (x: Float64Array, y: Float64Array, rows: number[]): Thinned => ({
  x: Float64Array.from(rows, (row) => x[row]),
  y: Float64Array.from(rows, (row) => y[row]),
});
