import type { CaseRecord } from "./case-record.js";
import type { LedgerRun } from "./ledger.js";
import type { PartSeries } from "./part-series.js";

/**
 * Differences that print precision explains: tables hold seven digits or more, so a sum is good to 5e-7 of the sizes that went into it;
 * twice that is allowed. Anything larger is a patch that is counted twice or not at all.
 */
const printShare = 1e-6;

interface Worst {
  share: number;
  row: number;
}

/**
 * Whether the ledger closes, row by row over all rows: parts add up to the whole in drag and lift, pressure and friction to the drag of
 * each object, and the coefficient table agrees with the forces. `worst` is the largest difference as a share of the sizes summed.
 */
export function closingOf(record: CaseRecord): LedgerRun["closing"] {
  const { whole, parts, tableCd } = record;
  const checks: { name: string; worst: Worst }[] = [];
  if (parts.length > 0) {
    checks.push({
      name: "parts against the whole in drag",
      worst: worstOf(
        whole.cd,
        parts.map((part) => part.cd),
      ),
    });
    checks.push({
      name: "parts against the whole in lift",
      worst: worstOf(
        whole.cl,
        parts.map((part) => part.cl),
      ),
    });
  }
  const split = [whole, ...parts].filter(isSplit);
  for (const each of split)
    checks.push({
      name: `pressure and friction against the drag of ${each.name}`,
      worst: worstOf(each.cd, [each.cdPressure, each.cdFriction]),
    });
  if (tableCd) checks.push({ name: "coefficient table against the forces", worst: worstOf(tableCd, [whole.cd]) });
  if (checks.length === 0) return { ok: true, worst: 0, message: "only the whole is recorded; there is nothing to add up" };
  const worst = checks.reduce((a, b) => (b.worst.share > a.worst.share ? b : a));
  const { share, row } = worst.worst;
  const rows = whole.cd.length;
  const size = share.toExponential(1);
  if (share <= printShare)
    return {
      ok: true,
      worst: share,
      message: `${checks.length} sums over ${rows} rows agree within print precision (largest difference ${size} of the sizes summed)`,
    };
  return {
    ok: false,
    worst: share,
    message: `${worst.name}: off by ${size} of the sizes summed at ${whole.time[row]}; a patch is counted twice or is missing, or tables of different runs stand together`,
  };
}

const isSplit = (series: PartSeries): series is PartSeries & { cdPressure: Float64Array; cdFriction: Float64Array } =>
  series.cdPressure !== null && series.cdFriction !== null;

function worstOf(whole: Float64Array, parts: Float64Array[]): Worst {
  const worst: Worst = { share: 0, row: 0 };
  for (let row = 0; row < whole.length; row++) {
    let [sum, size] = [0, Math.abs(whole[row])];
    for (const part of parts) {
      sum += part[row];
      size += Math.abs(part[row]);
    }
    const share = size > 0 ? Math.abs(sum - whole[row]) / size : 0;
    if (share > worst.share || Number.isNaN(share))
      Object.assign(worst, { share: Number.isNaN(share) ? Number.POSITIVE_INFINITY : share, row });
  }
  return worst;
}
