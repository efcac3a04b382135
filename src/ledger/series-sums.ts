import type { PartSeries } from "./part-series.js";

/** Agreement of a sum with the whole at which objects count as its parts: far above print precision, far below any real part. */
const sameSum = 1e-4;
/** Two tables of the same patches differ by the digits of their headers and rows, seven as a rule. */
const sameValue = 1e-5;

/** Sum of series that share their rows; a quantity that one of them lacks is missing in the sum. */
export function sumOf(parts: readonly PartSeries[], name: string): PartSeries {
  const add = (pick: (part: PartSeries) => Float64Array | null): Float64Array | null => {
    const sum = new Float64Array(parts[0].time.length);
    for (const part of parts) {
      const values = pick(part);
      if (values === null) return null;
      for (let row = 0; row < sum.length; row++) sum[row] += values[row];
    }
    return sum;
  };
  return {
    name,
    patches: parts.every((part) => part.patches !== null) ? parts.flatMap((part) => part.patches!) : null,
    time: parts[0].time,
    cd: add((part) => part.cd)!,
    cl: add((part) => part.cl)!,
    cs: add((part) => part.cs),
    cm: add((part) => part.cm),
    cdPressure: add((part) => part.cdPressure),
    cdFriction: add((part) => part.cdFriction),
  };
}

/** What the parts leave of the whole, on the same rows. */
export function minus(whole: PartSeries, parts: readonly PartSeries[]): PartSeries {
  const sum = sumOf(parts, "");
  const rest = (a: Float64Array | null, b: Float64Array | null) => a && b && a.map((value, row) => value - b[row]);
  return {
    name: "",
    patches: null,
    time: whole.time,
    cd: rest(whole.cd, sum.cd)!,
    cl: rest(whole.cl, sum.cl)!,
    cs: rest(whole.cs, sum.cs),
    cm: rest(whole.cm, sum.cm),
    cdPressure: rest(whole.cdPressure, sum.cdPressure),
    cdFriction: rest(whole.cdFriction, sum.cdFriction),
  };
}

/** The whole is the sum of the parts in drag and lift, in every row. */
export function isSumOf(whole: PartSeries, parts: readonly PartSeries[]): boolean {
  if (whole.time.length === 0) return false;
  for (let row = 0; row < whole.time.length; row++) {
    let [drag, lift] = [-whole.cd[row], -whole.cl[row]];
    let size = Math.abs(whole.cd[row]) + Math.abs(whole.cl[row]);
    for (const { cd, cl } of parts) {
      drag += cd[row];
      lift += cl[row];
      size += Math.abs(cd[row]) + Math.abs(cl[row]);
    }
    if (!(Math.abs(drag) <= sameSum * size && Math.abs(lift) <= sameSum * size)) return false;
  }
  return true;
}

/** Two records with the same forces in every row. Records of nothing but zeros are alike without being the same. */
export function sameSeries(a: PartSeries, b: PartSeries): boolean {
  if (a.time.length === 0 || a.time.length !== b.time.length) return false;
  let some = false;
  for (let row = 0; row < a.time.length; row++) {
    const size = Math.abs(a.cd[row]) + Math.abs(a.cl[row]) + Math.abs(a.cs?.[row] ?? 0);
    const near = (one: Float64Array, other: Float64Array) => Math.abs(one[row] - other[row]) <= sameValue * size;
    if (!near(a.cd, b.cd) || !near(a.cl, b.cl) || (a.cs && b.cs && !near(a.cs, b.cs))) return false;
    some ||= size > 0;
  }
  return some;
}
