import type { CaseRecord } from "./case-record.js";
import type { LedgerRun } from "./ledger.js";
import type { PartSeries } from "./part-series.js";

/**
 * Difference that print precision explains, as a share of the sizes summed: n significant digits leave half a unit of the last one open, at
 * most 5 * 10^-n of a number, in each of them; twice that is allowed, 1e-6 for the solver's usual seven digits. Tables with more digits are
 * held to no more than that: it is far below any part. Anything larger is a patch that is counted twice or not at all.
 */
const shareOf = (digits: number): number => Math.max(1e-6, 10 ** (1 - digits));
/** The coefficient table stands on printed header values as well: area, and speed twice. */
const tableFactor = 4;

interface Worst {
  share: number;
  row: number;
}

interface Check {
  name: string;
  worst: Worst;
  /** multiple of what print precision explains that is allowed */
  factor: number;
}

/**
 * Whether the ledger closes, row by row over all rows: parts add up to the whole in drag and lift, pressure and friction to the drag of
 * each object, and the coefficient table agrees with the forces. `worst` is the largest difference as a share of the sizes summed.
 */
export function closingOf(record: CaseRecord): LedgerRun["closing"] {
  const { whole, parts, tableCd, oblique } = record;
  const checks: Check[] = [];
  const check = (name: string, of: PartSeries[], against: Float64Array, values: Float64Array[], factor = 1): void => {
    checks.push({ name, factor, worst: worstOf(against, values, oblique ? forceSizes(of) : null) });
  };
  if (parts.length > 0) {
    const all = (key: "cd" | "cl") => parts.map((part) => part[key]);
    check("parts against the whole in drag", [whole, ...parts], whole.cd, all("cd"));
    check("parts against the whole in lift", [whole, ...parts], whole.cl, all("cl"));
  }
  for (const each of [whole, ...parts].filter(isSplit))
    check(`pressure and friction against the drag of ${each.name}`, [each], each.cd, [each.cdPressure, each.cdFriction]);
  if (tableCd) check("coefficient table against the forces", [whole], tableCd, [whole.cd], tableFactor);
  if (checks.length === 0) return { ok: true, worst: 0, message: "only the whole is recorded; there is nothing to add up" };
  const allowed = shareOf(record.printedDigits);
  const far = ({ worst: { share }, factor }: Check) => share / factor;
  const worst = checks.reduce((a, b) => (far(b) > far(a) ? b : a));
  const { share, row } = worst.worst;
  const rows = whole.cd.length;
  const size = share.toExponential(1);
  if (share === Number.POSITIVE_INFINITY)
    return { ok: false, worst: share, message: `the tables hold nan or inf at ${whole.time[row]}: the run diverged` };
  if (share <= worst.factor * allowed)
    return {
      ok: true,
      worst: share,
      message: `${checks.length} sums over ${rows} rows agree within print precision (largest difference ${size} of the sizes summed)`,
    };
  return {
    ok: false,
    worst: share,
    message: `${worst.name}: off by ${size} of the sizes summed at ${whole.time[row]}, where ${(worst.factor * allowed).toExponential(1)} is explained by print precision; a patch is counted twice or is missing, or tables of different runs stand together`,
  };
}

/** Sizes of the forces of some objects, summed per row: what was printed are their parts along the axes of the case. */
function forceSizes(objects: PartSeries[]): Float64Array {
  const sizes = new Float64Array(objects[0].cd.length);
  for (const { cd, cl, cs } of objects)
    for (let row = 0; row < sizes.length; row++) sizes[row] += Math.hypot(cd[row], cl[row], cs?.[row] ?? 0);
  return sizes;
}

const isSplit = (series: PartSeries): series is PartSeries & { cdPressure: Float64Array; cdFriction: Float64Array } =>
  series.cdPressure !== null && series.cdFriction !== null;

function worstOf(whole: Float64Array, parts: Float64Array[], sizes: Float64Array | null): Worst {
  const worst: Worst = { share: 0, row: 0 };
  for (let row = 0; row < whole.length; row++) {
    let [sum, size] = [0, Math.abs(whole[row])];
    for (const part of parts) {
      sum += part[row];
      size += Math.abs(part[row]);
    }
    // In oblique axes each value is a difference of larger printed numbers.
    size = Math.max(size, sizes?.[row] ?? 0);
    const share = size === 0 ? 0 : Math.abs(sum - whole[row]) / size;
    if (share > worst.share || Number.isNaN(share))
      Object.assign(worst, { share: Number.isNaN(share) ? Number.POSITIVE_INFINITY : share, row });
  }
  return worst;
}
