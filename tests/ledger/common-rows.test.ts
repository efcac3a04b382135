import { describe, expect, test } from "vitest";
import { cutSeries, onCommonRows, seriesAt } from "../../src/ledger/common-rows.js";
import type { PartSeries } from "../../src/ledger/part-series.js";
import { series } from "./records.js";

/** A series whose drag is ten times its time. */
function at(name: string, times: number[]): PartSeries {
  const values = Float64Array.from(times, (time) => 10 * time);
  return { ...series(name, values, values), time: Float64Array.from(times), cm: values };
}

const range = (from: number, to: number, step = 1): number[] =>
  Array.from({ length: Math.floor((to - from) / step) + 1 }, (_, index) => from + index * step);

const common = (...records: PartSeries[]) => onCommonRows(records, (each) => each.time, cutSeries);

describe("rows that all objects have", () => {
  test("nothing is copied when they agree", () => {
    const [a, b] = [at("a", range(1, 60)), at("b", range(1, 60))];
    const { kept, dropped, leftOut } = common(a, b);
    expect(kept[0]).toBe(a);
    expect(kept[1]).toBe(b);
    expect([dropped, leftOut]).toEqual([0, []]);
  });

  test("a row is the same moment in each", () => {
    const { kept, dropped } = common(
      at("a", range(1, 100)),
      at("b", range(11, 101)),
      at(
        "c",
        range(2, 100, 1).filter((t) => t !== 50),
      ),
    );
    expect(dropped).toBe(11);
    for (const each of kept) {
      expect([...each.time]).toEqual(range(11, 100).filter((time) => time !== 50));
      for (const values of [each.cd, each.cl, each.cm!]) expect([...values]).toEqual([...each.time].map((time) => 10 * time));
      expect([each.cs, each.cdPressure]).toEqual([null, null]);
    }
  });

  test("an object of an earlier run, or with one row, does not empty the others", () => {
    const { kept, dropped, leftOut } = common(
      at("old", range(1, 30)),
      at("now", range(1, 200)),
      at("once", [200]),
      at("part", range(1, 199)),
    );
    expect(kept.map(({ name }) => name)).toEqual(["now", "part"]);
    expect(leftOut.map(({ name }) => name).sort()).toEqual(["old", "once"]);
    expect(dropped).toBe(1);
  });

  test("short records must be shared in full", () => {
    expect(common(at("a", range(1, 20)), at("b", range(1, 20))).leftOut).toEqual([]);
    expect(common(at("a", range(1, 20)), at("b", range(2, 20))).leftOut).toHaveLength(1);
    expect(common().kept).toEqual([]);
  });

  test("a series at given times; none when one is missing", () => {
    expect([...seriesAt(at("a", range(1, 9)), Float64Array.of(3, 7))!.cd]).toEqual([30, 70]);
    expect(seriesAt(at("a", range(1, 9)), Float64Array.of(3, 7.5))).toBeNull();
    const same = at("a", range(1, 9));
    expect(seriesAt(same, same.time)).toBe(same);
  });
});
