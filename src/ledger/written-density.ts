import type { ForceObject } from "./force-objects.js";
import type { Directions } from "./part-series.js";

/** Fewest rows with drag that must agree. */
const fewestRows = 10;
/** Seven printed digits on both sides, and a little for directions that were rounded in the header. */
const agreement = 1e-5;
/** What the printed digits of the headers leave open: the shortest decimal this near is the one that was set. */
const printed = 1e-6;

/** The density behind a force table and where it was found. */
export interface WrittenDensity {
  value: number;
  source: string;
}

/**
 * The density that a force table was written with: told from a coefficient table of the same patches (drag is then in one ratio,
 * 0.5 rho U² A, in every row), else `rhoInf` of the object as it stands now; null when neither is there.
 */
export function writtenDensityOf(object: ForceObject, objects: readonly ForceObject[], axes: Directions): WrittenDensity | null {
  if (object.forces === null) return null;
  const told = fromTables(object.forces, objects, axes);
  if (told !== null) return { value: told, source: "ratio of a force table to a coefficient table" };
  return object.statedDensity === null ? null : { value: object.statedDensity, source: "rhoInf in system/controlDict" };
}

function fromTables(
  forces: NonNullable<ForceObject["forces"]>,
  objects: readonly ForceObject[],
  { drag: [dx, dy, dz] }: Directions,
): number | null {
  const [x, y, z] = forces.total;
  for (const { coefficients } of objects) {
    const { area, speed } = coefficients?.header ?? {};
    if (!coefficients || area === undefined || speed === undefined) continue;
    const perDensity = 0.5 * speed ** 2 * area;
    // A run that was killed leaves one table a row longer than the other.
    const density = constantRatio(
      Math.min(x.length, coefficients.cd.length),
      (row) => dx * x[row] + dy * y[row] + dz * z[row],
      (row) => coefficients.cd[row] * perDensity,
    );
    if (density !== null && density > 0) return shortest(density);
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

/** The decimal with the fewest digits within what printing leaves open. */
function shortest(value: number): number {
  for (let digits = 1; digits < 10; digits++) {
    const decimal = Number(value.toPrecision(digits));
    if (Math.abs(decimal - value) <= printed * value) return decimal;
  }
  return value;
}
