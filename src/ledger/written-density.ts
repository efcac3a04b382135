import type { ForceObject } from "./force-objects.js";
import type { Directions } from "./part-series.js";

/** Fewest rows with drag that must agree. */
const fewestRows = 10;
/** Seven printed digits on both sides, and a little for directions that were rounded in the header. */
const agreement = 1e-5;

/**
 * The density that the force tables of a case were written with, told from a force table and a coefficient table of the same patches: their
 * drag is then in one ratio, 0.5 rho U² A, in every row. Null when no two tables are.
 */
export function densityFromTables(objects: ForceObject[], axes: Directions): number | null {
  for (const { forces } of objects) {
    if (forces === null) continue;
    const [x, y, z] = forces.total;
    const [dx, dy, dz] = axes.drag;
    for (const { coefficients } of objects) {
      const { area, speed } = coefficients?.header ?? {};
      if (!coefficients || area === undefined || speed === undefined || coefficients.cd.length !== x.length) continue;
      const perDensity = 0.5 * speed ** 2 * area;
      const density = constantRatio(
        x.length,
        (row) => dx * x[row] + dy * y[row] + dz * z[row],
        (row) => coefficients.cd[row] * perDensity,
      );
      if (density !== null && density > 0) return density;
    }
  }
  return null;
}

/** a over b when it is the same in every row; null otherwise. The row with the largest value gives the ratio its digits. */
function constantRatio(rows: number, a: (row: number) => number, b: (row: number) => number): number | null {
  let [best, used] = [0, 0];
  for (let row = 0; row < rows; row++) {
    if (b(row) !== 0) used++;
    if (Math.abs(b(row)) > Math.abs(b(best))) best = row;
  }
  if (used < fewestRows) return null;
  const ratio = a(best) / b(best);
  const size = Math.abs(a(best));
  for (let row = 0; row < rows; row++) if (!(Math.abs(a(row) - ratio * b(row)) <= agreement * size)) return null;
  return ratio;
}
