import { describe, expect, test } from "vitest";
import { settleRecord } from "../../src/ledger/converged.js";
import type { PartSeries } from "../../src/ledger/part-series.js";
import { sumOf } from "../../src/ledger/series-sums.js";
import { codes, constant, noisy, record, reference, runCard, series } from "./records.js";

const calm = series("cab", noisy(1, 0.25, 0.0004), noisy(2, 0.1, 0.0004), { cs: noisy(3, 0, 0.0004), cm: noisy(4, 0.02, 0.0004) });
const wild = series("wing", noisy(5, 0.05, 0.05), noisy(6, 0.02, 0.05), { cs: noisy(7, 0, 0.0004), cm: noisy(8, 0.01, 0.0004) });
const ramp = Float64Array.from({ length: 1000 }, (_, row) => 0.3 + 1e-4 * row);

const verdicts = (whole: PartSeries, more: Partial<Parameters<typeof record>[2]> = {}, targets = {}) =>
  settleRecord(record(whole, [], more), targets).verdict;

describe("whether a case has settled", () => {
  test("every quantity of the whole, drag and lift of every part, in this order", () => {
    const { quantities, verdict, path } = settleRecord(record(sumOf([calm], "whole"), [calm, wild]), { drag: 0.001, lift: 0.003 });
    expect(quantities.map(({ name, part }) => [name, part])).toEqual([
      ...["cd", "cl", "clFront", "clRear", "cs", "cm"].map((name) => [name, null]),
      ...["cab", "wing"].flatMap((part) => ["cd", "cl"].map((name) => [name, part])),
    ]);
    expect([path, verdict]).toEqual(["case", "settled"]);
    // The contract's keys
    for (const quantity of quantities)
      for (const key of ["verdict", "mean", "halfWidth", "startUp", "rows", "effectiveSamples", "period", "stillNeeded"])
        expect(quantity).toHaveProperty(key);
  });

  test("the case is as good as the worse of drag and lift; parts and other quantities do not decide", () => {
    const targets = { drag: 0.001, lift: 0.003 };
    const cl = noisy(2, 0.1, 0.0004);
    expect(verdicts(series("whole", calm.cd, cl), {}, targets)).toBe("settled");
    expect(verdicts(series("whole", ramp, cl), {}, targets)).toBe("drifting");
    expect(verdicts(series("whole", calm.cd, ramp), {}, targets)).toBe("drifting");
    expect(verdicts(series("whole", wild.cd, cl), {}, targets)).toBe("not-yet");
    expect(verdicts(series("whole", wild.cd, ramp), {}, targets)).toBe("drifting");
    expect(
      verdicts(
        series(
          "whole",
          calm.cd.map((x, row) => (row > 900 ? Number.NaN : x)),
          ramp,
        ),
        {},
        targets,
      ),
    ).toBe("diverged");
    expect(verdicts(series("whole", constant(0), constant(0)), {}, targets)).toBe("zero");
    expect(verdicts(series("whole", calm.cd.slice(0, 30), cl.slice(0, 30)), {}, targets)).toBe("too-short");
    const cycle = Float64Array.from({ length: 1000 }, (_, row) => 0.3 + 0.02 * Math.sin(row));
    expect(verdicts(series("whole", cycle, cl), {}, targets)).toBe("oscillating");
    expect(settleRecord(record(series("whole", calm.cd, cl), [wild]), targets).verdict).toBe("settled");
    expect(settleRecord(record({ ...calm, cm: ramp, cs: ramp }), targets).verdict).toBe("settled");
  });

  test("targets given win over the run card's; the run card's over none", () => {
    const cd = noisy(11, 0.3, 0.01, 400);
    const whole = series("whole", cd, noisy(12, 0.1, 0.0004, 400));
    expect(verdicts(whole, { card: runCard({ stop: { drag: 1e-4, lift: 0.003, confidence: 0.95 } }) })).toBe("not-yet");
    expect(verdicts(whole, { card: runCard({ stop: { drag: 0.05, lift: 0.003, confidence: 0.95 } }) })).toBe("settled");
    expect(verdicts(whole, { card: runCard() }, { drag: 0.05 })).toBe("settled");
    expect(verdicts(whole, {}, { drag: 1e-4 })).toBe("not-yet");
  });

  test("the run card's confidence widens the interval", () => {
    const at = (confidence: number) =>
      settleRecord(record(calm, [], { card: runCard({ stop: { drag: 0.01, lift: 0.01, confidence } }) })).quantities[0].halfWidth;
    expect(at(0.99)).toBeGreaterThan(1.2 * at(0.95));
  });

  test("axles need a wheelbase; what is not recorded is not judged", () => {
    const names = settleRecord(
      record(series("whole", calm.cd, calm.cl), [], { reference: { ...reference, wheelbase: null } }),
    ).quantities.map(({ name }) => name);
    expect(names).toEqual(["cd", "cl"]);
  });

  test("findings of the record and of the deciding quantities are told, with the quantity they are about", () => {
    const own = { code: "x", severity: "note" as const, part: null, count: 1, places: [], message: "", remedy: "" };
    const settled = settleRecord(
      record(series("whole", ramp, calm.cl), [], { findings: [own], card: runCard({ recorded: "long ago" }) }),
    );
    expect(codes(settled)[0]).toBe("x");
    expect(settled.findings.slice(1)).not.toEqual([]);
    for (const found of settled.findings.slice(1)) expect(found.part).toBe("cd");
    expect(settled.recorded).toBe("long ago");
  });
});
