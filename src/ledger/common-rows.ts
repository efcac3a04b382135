import type { PartSeries } from "./part-series.js";

/** The series cut to the times that all of them have, so that a row of one is the same moment as a row of another. */
export function onCommonRows(series: PartSeries[]): { series: PartSeries[]; dropped: number } {
  const [first, ...others] = series;
  if (first === undefined || others.every((each) => sameTimes(first.time, each.time))) return { series, dropped: 0 };
  const seen = new Map<number, number>();
  for (const each of series) for (const time of each.time) seen.set(time, (seen.get(time) ?? 0) + 1);
  const longest = Math.max(...series.map((each) => each.time.length));
  const cut = series.map((each) => {
    const rows = Uint32Array.from([...each.time.keys()].filter((row) => seen.get(each.time[row]) === series.length));
    const pick = (values: Float64Array) => Float64Array.from(rows, (row) => values[row]);
    const maybe = (values: Float64Array | null) => values && pick(values);
    return {
      ...each,
      time: pick(each.time),
      cd: pick(each.cd),
      cl: pick(each.cl),
      cs: maybe(each.cs),
      cm: maybe(each.cm),
      cdPressure: maybe(each.cdPressure),
      cdFriction: maybe(each.cdFriction),
    };
  });
  return { series: cut, dropped: longest - cut[0]!.time.length };
}

const sameTimes = (a: Float64Array, b: Float64Array): boolean => a.length === b.length && a.every((time, row) => time === b[row]);
