import type { History } from "../history/history.js";
import type { PartSeries } from "./part-series.js";

export interface CommonRows<T> {
  /** cut to the times that all of them have, in the order given */
  kept: T[];
  /** rows of the longest that another one lacks */
  dropped: number;
  /** what shares too few rows with the longest */
  leftOut: T[];
}

/** Rows that must remain for a mean to be known (`settle` asks for as many); a shorter record must be shared in full. */
const fewestRows = 50;

/**
 * Cuts records to the times that all of them have, so that a row of one is the same moment as a row of another. The longest stands; others
 * are taken in order of the rows they share with it, and one that would leave fewer than fifty rows (a table of an earlier run, a single
 * row written afterwards) is left out instead.
 *
 * @param timesOf increasing
 * @param cut the record at the given rows
 */
export function onCommonRows<T>(
  records: readonly T[],
  timesOf: (record: T) => Float64Array,
  cut: (record: T, rows: Uint32Array) => T,
): CommonRows<T> {
  if (records.length === 0) return { kept: [], dropped: 0, leftOut: [] };
  const longest = records.reduce((a, b) => (timesOf(b).length > timesOf(a).length ? b : a));
  const all = timesOf(longest);
  const least = Math.min(fewestRows, all.length);
  const others = records
    .filter((each) => each !== longest)
    .map((each) => ({ each, shared: shared(all, timesOf(each)) }))
    .sort((a, b) => b.shared.length - a.shared.length);
  let common = all;
  const leftOut = new Set<T>();
  for (const { each, shared: own } of others) {
    const next = shared(common, own);
    if (next.length < least) leftOut.add(each);
    else common = next;
  }
  const kept = records
    .filter((each) => !leftOut.has(each))
    .map((each) => (timesOf(each).length === common.length ? each : cut(each, rowsAt(timesOf(each), common))));
  return { kept, dropped: all.length - common.length, leftOut: [...leftOut] };
}

/** Times that both have; the first array itself when it loses none. */
function shared(a: Float64Array, b: Float64Array): Float64Array {
  const found = new Float64Array(Math.min(a.length, b.length));
  let [count, one, other] = [0, 0, 0];
  while (one < a.length && other < b.length) {
    if (a[one] === b[other]) {
      found[count++] = a[one];
      one++;
      other++;
    } else if (a[one] < b[other]) one++;
    else other++;
  }
  return count === a.length ? a : found.subarray(0, count);
}

/** Rows of `times` that hold the wanted times, all of which must be there. */
function rowsAt(times: Float64Array, wanted: Float64Array): Uint32Array {
  const rows = new Uint32Array(wanted.length);
  let row = 0;
  wanted.forEach((time, index) => {
    while (times[row] !== time) row++;
    rows[index] = row;
  });
  return rows;
}

const pick = (values: Float64Array, rows: Uint32Array): Float64Array => Float64Array.from(rows, (row) => values[row]);

/** A series at the given times; null when it lacks one of them. */
export function seriesAt(series: PartSeries, times: Float64Array): PartSeries | null {
  const common = shared(times, series.time);
  if (common.length !== times.length) return null;
  return series.time.length === times.length ? series : cutSeries(series, rowsAt(series.time, times));
}

/** A series at some of its rows. */
export function cutSeries(series: PartSeries, rows: Uint32Array): PartSeries {
  const maybe = (values: Float64Array | null) => values && pick(values, rows);
  return {
    ...series,
    time: pick(series.time, rows),
    cd: pick(series.cd, rows),
    cl: pick(series.cl, rows),
    cs: maybe(series.cs),
    cm: maybe(series.cm),
    cdPressure: maybe(series.cdPressure),
    cdFriction: maybe(series.cdFriction),
  };
}

/** A history at some of its rows; its segments and findings stay those of the whole history. */
export function cutHistory(history: History, rows: Uint32Array): History {
  return {
    ...history,
    columns: history.columns.map(({ name, values }) => ({ name, values: pick(values, rows) })),
    rows: rows.length,
  };
}
