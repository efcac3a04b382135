import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { settle } from "../../src/history/settle.js";
import { buildLedger } from "../../src/ledger/build.js";
import type { Entry, Estimate } from "../../src/ledger/ledger.js";
import type { PartSeries } from "../../src/ledger/part-series.js";
import { sumOf } from "../../src/ledger/series-sums.js";
import { windowOf } from "../../src/ledger/window.js";
import { codes, constant, noisy, record, reference, runCard, series } from "./records.js";

/** A history with a start-up in front: `away` at the first row, decaying. */
const withStartUp = (values: Float64Array, away: number, decay = 8): Float64Array =>
  values.map((value, row) => value + away * Math.exp(-row / decay));

function part(seed: number, mean: number, deviation: number, rows = 800): PartSeries {
  const cdPressure = withStartUp(noisy(seed, 0.9 * mean, deviation, rows), 0.5 * mean);
  const cdFriction = noisy(seed + 1, 0.1 * mean, 0.1 * deviation, rows);
  return series(
    `part ${seed}`,
    cdPressure.map((value, row) => value + cdFriction[row]),
    noisy(seed + 2, -mean, deviation, rows),
    { cs: noisy(seed + 3, 0, deviation, rows), cm: noisy(seed + 4, 0.1 * mean, deviation, rows), cdPressure, cdFriction },
  );
}

const parts = [part(10, 0.2, 0.002), part(20, 0.08, 0.004), part(30, 0.02, 0.0005)];
const whole = sumOf(parts, "whole");
const keys = ["cd", "cl", "cs", "clFront", "clRear", "cm", "cdPressure", "cdFriction", "cda", "drag", "lift", "side"] as const;

describe("entries of a ledger", () => {
  const ledger = buildLedger(record(whole, parts));
  const entries: Entry[] = [ledger.total, ...ledger.parts];

  test("values of parts add up to the whole in every column, to rounding", () => {
    for (const key of keys) {
      const sum = ledger.parts.reduce((all, each) => all + each[key]!.value, 0);
      expect(sum).toBeCloseTo(ledger.total[key]!.value, 9);
    }
  });

  test("pressure and friction make drag, axles make lift, in every line", () => {
    for (const { cd, cl, cdPressure, cdFriction, clFront, clRear } of entries) {
      expect(cdPressure!.value + cdFriction!.value).toBeCloseTo(cd.value, 12);
      expect(clFront!.value + clRear!.value).toBeCloseTo(cl.value, 12);
    }
  });

  test("newtons and CdA are the coefficient times 0.5 rho U² A and A, half-widths too", () => {
    const newtons = 0.5 * 1.225 * 30 ** 2 * 2.1;
    const scaled = ({ value, halfWidth }: Estimate, factor: number) => ({ value: value * factor, halfWidth: halfWidth! * factor });
    for (const { cd, cl, cs, cda, drag, lift, side } of entries)
      expect([cda, drag, lift, side]).toEqual([scaled(cd, 2.1), scaled(cd, newtons), scaled(cl, newtons), scaled(cs!, newtons)]);
  });

  test("each half-width is that of its own history: the wanderer's is wide, the calm one's narrow", () => {
    const [calm, wanderer, small] = ledger.parts.map(({ cd }) => cd.halfWidth!);
    expect(wanderer).toBeGreaterThan(1.4 * calm);
    expect(small).toBeLessThan(calm / 2);
    for (const [index, each] of parts.entries()) {
      const settling = settle(each.cd);
      expect(ledger.parts[index].cd.halfWidth).toBeCloseTo(
        settling.halfWidth + Math.abs(settling.mean - ledger.parts[index].cd.value),
        12,
      );
    }
  });

  test("the window is past the start-up of drag and lift, and is told", () => {
    const window = windowOf(record(whole, parts));
    expect(ledger.window).toEqual({
      from: window.first + 1,
      to: 800,
      rows: 800 - window.first,
      effectiveSamples: window.drag.effectiveSamples,
    });
    expect(window.first).toBeGreaterThanOrEqual(Math.max(settle(whole.cd).firstRow, settle(whole.cl).firstRow));
    expect(window.first).toBeGreaterThan(8);
    const mean = whole.cd.subarray(window.first).reduce((sum, value) => sum + value, 0) / (800 - window.first);
    expect(ledger.total.cd.value).toBeCloseTo(mean, 12);
  });

  test("a lift that takes longer to start up than the drag moves the window of both", () => {
    const late = withStartUp(noisy(51, 0.1, 0.001, 800), 0.5, 40);
    const slow = record(series("whole", noisy(50, 0.3, 0.001, 800), late));
    const { first, drag, lift } = windowOf(slow);
    expect(lift.verdict).toBe("settled");
    expect(drag.firstRow).toBeLessThan(20);
    expect(first).toBe(lift.firstRow);
    expect(first).toBeGreaterThan(100);
    expect(buildLedger(slow).total.cl.value).toBeCloseTo(0.1, 3);
  });

  test("the contract's keys are all there, each a value with a half-width", () => {
    for (const entry of entries)
      for (const key of keys) expect(entry[key]).toEqual({ value: expect.any(Number), halfWidth: expect.any(Number) });
    expect(JSON.parse(JSON.stringify(ledger))).toMatchObject({
      path: "case",
      variant: "case",
      condition: "",
      reference: { area: 2.1, length: 2.7, centre: [0, 0, 0], speed: 30, density: 1.225 },
      closing: { ok: true },
      findings: [],
    });
  });
});

describe("noise-free histories", () => {
  test("planted means are recovered exactly, with no doubt left", () => {
    const value = fc.double({ min: -0.5, max: 0.5, noNaN: true });
    fc.assert(
      fc.property(fc.array(fc.tuple(value, value, value, value), { minLength: 1, maxLength: 6 }), (planted) => {
        const exact = planted.map(([pressure, friction, lift, pitch], index) =>
          series(`part ${index}`, constant(pressure + friction, 60), constant(lift, 60), {
            cdPressure: constant(pressure, 60),
            cdFriction: constant(friction, 60),
            cm: constant(pitch, 60),
          }),
        );
        const ledger = buildLedger(record(sumOf(exact, "whole"), exact));
        planted.forEach(([pressure, friction, lift, pitch], index) => {
          const entry = ledger.parts[index];
          expect(entry.cd.value).toBe(pressure + friction);
          expect(entry.cl.value).toBe(lift);
          expect(entry.clFront!.value).toBe(lift / 2 + pitch);
          expect(entry.clRear!.value).toBe(lift / 2 - pitch);
          expect(entry.cd.halfWidth).toBe(0);
        });
        expect(ledger.total.cd.value).toBeCloseTo(
          planted.reduce((sum, [p, f]) => sum + p + f, 0),
          12,
        );
        expect(ledger.closing.ok).toBe(true);
      }),
      { seed: 11, numRuns: 60 },
    );
  });

  test("the mean of a limit cycle is taken over whole periods", () => {
    const cycle = Float64Array.from({ length: 700 }, (_, row) => 0.3 + 0.01 * Math.sin((2 * Math.PI * row) / 14));
    const ledger = buildLedger(record(series("whole", cycle, constant(0.1, 700))));
    expect(ledger.window.rows % 14).toBe(0);
    expect(ledger.total.cd.value).toBeCloseTo(0.3, 6);
    expect(codes(ledger)).toEqual(["not-recorded"]);
  });
});

describe("what is not known", () => {
  const lines = (more: Partial<typeof reference>) => buildLedger(record(whole, parts, { reference: { ...reference, ...more } }));

  test("is null, and the finding names the option that supplies it", () => {
    const withoutDensity = lines({ density: null });
    expect([withoutDensity.total.drag, withoutDensity.total.lift, withoutDensity.total.side]).toEqual([null, null, null]);
    expect(withoutDensity.total.cda).not.toBeNull();
    expect(withoutDensity.findings).toMatchObject([{ code: "not-given", severity: "note", remedy: "Give --density." }]);
    expect(lines({ density: null, speed: null }).findings[0].remedy).toBe("Give --speed and --density.");
    const withoutWheelbase = lines({ wheelbase: null });
    expect([withoutWheelbase.total.clFront, withoutWheelbase.total.clRear]).toEqual([null, null]);
    expect(withoutWheelbase.findings).toMatchObject([
      { message: expect.stringContaining("No axle lifts"), remedy: "Give --wheelbase." },
    ]);
    const bare = series("whole", whole.cd, whole.cl);
    const withoutMoment = buildLedger(record(bare, [], { reference: { ...reference, length: null, centre: null } }));
    expect([withoutMoment.total.cm, withoutMoment.total.cs, withoutMoment.total.cdPressure, withoutMoment.total.side]).toEqual([
      null,
      null,
      null,
      null,
    ]);
    expect(withoutMoment.findings).toMatchObject([{ remedy: "Give --length and --centre." }]);
  });

  test("too few rows: means without half-widths", () => {
    const short = buildLedger(record(series("whole", noisy(3, 0.3, 0.01, 8), noisy(4, 0.1, 0.01, 8))));
    expect(short.total.cd).toEqual({ value: expect.any(Number), halfWidth: null });
    expect(codes(short)).toEqual(["not-settled", "not-settled", "not-recorded"]);
  });

  test("a drifting history is averaged over its last half, with a warning", () => {
    const ramp = Float64Array.from({ length: 400 }, (_, row) => 0.3 + row * 1e-4);
    const ledger = buildLedger(record(series("whole", ramp, constant(0.1, 400)), [], { card: runCard() }));
    expect(ledger.window.from).toBeGreaterThanOrEqual(201);
    expect(ledger.findings[0]).toMatchObject({ code: "not-settled", severity: "warning" });
    expect(ledger.findings[0].message).toContain("drag has not settled (drifting)");
    // Another window of this ramp would have a mean that is higher by the change over this one.
    const change = 1e-4 * ledger.window.rows;
    const { halfWidth } = ledger.total.cd;
    expect(halfWidth === null || halfWidth >= 0.99 * change).toBe(true);
  });

  test("the half-width of a drifting mean holds the way of one more window; where the drift is nearly all there is none", () => {
    const drifting = (slope: number) => {
      const values = noisy(40, 0.3, 0.002, 600, 0.3).map((value, row) => value + slope * row);
      const ledger = buildLedger(record(series("whole", values, noisy(41, 0.1, 0.001, 600)), [], { card: runCard() }));
      expect(ledger.findings[0].message).toContain("drag has not settled (drifting)");
      return { halfWidth: ledger.total.cd.halfWidth, change: slope * ledger.window.rows };
    };
    const { halfWidth, change } = drifting(1e-5);
    expect(halfWidth!).toBeGreaterThan(0.8 * change);
    expect(halfWidth!).toBeLessThan(1.2 * change + 0.002);
    expect(drifting(1e-4).halfWidth).toBeNull();
  });

  test("a diverged history has no half-width and does not close", () => {
    const broken = whole.cd.map((value, row) => (row > 700 ? Number.NaN : value));
    const ledger = buildLedger(record({ ...whole, cd: broken }, parts));
    expect(ledger.total.cd.halfWidth).toBeNull();
    expect(ledger.closing.ok).toBe(false);
    expect(ledger.findings[0].message).toContain("(diverged)");
  });

  test("parts of zeros, unit density and half models are said", () => {
    const zero = series("glass", constant(0, 800), constant(0, 800));
    const ledger = buildLedger(record(whole, [...parts, zero], { reference: { ...reference, density: 1, symmetryFactor: 2 } }));
    expect(ledger.findings.map(({ code, severity, part }) => [code, severity, part])).toEqual([
      ["zero-forces", "error", "glass"],
      ["density-one", "warning", null],
      ["half-model", "note", null],
    ]);
  });
});
