import { describe, expect, test } from "vitest";
import { axleLift } from "../../src/ledger/axles.js";
import { buildLedger } from "../../src/ledger/build.js";
import { forcePerCoefficient } from "../../src/ledger/reference.js";
import { sumOf } from "../../src/ledger/series-sums.js";
import { constant, record, reference, series } from "../ledger/records.js";

// Vehicle aerodynamics conventions against figures from outside the project.

describe("SAE J1594 (2010): x rearward, z up, centre on the ground at mid-wheelbase, moments on the wheelbase", () => {
  test("worked by hand: 300 N of drag and 100 N of lift at x 0.5 m, z 0.4 m, wheelbase 2.7 m", () => {
    // PM = 0.4 m 300 N - 0.5 m 100 N = 70 N m nose-up: front 50 + 70 / 2.7, rear 50 - 70 / 2.7.
    const axles = axleLift({ cl: Float64Array.of(100), cm: Float64Array.of(70 / 2.7) }, { wheelbase: 2.7, length: 2.7 })!;
    expect(axles.front[0]).toBeCloseTo(75.9259, 4);
    expect(axles.rear[0]).toBeCloseTo(24.0741, 4);
  });
});

/**
 * Part table of a two-seater open car, wheelbase 2.65 m, published in the wiki of the GitHub repository y-yosuke/formula-ppoino
 * (page fp024f): Cd and Cl of body, front and rear wheels; total Cd 0.5688, Cl -0.1923, Cm 0.0263; axles -0.0698 and -0.1225.
 */
describe("a published part table", () => {
  const rows = 60;
  const published: [name: string, cd: number, cl: number][] = [
    ["body", 0.4574, -0.23],
    ["front wheels", 0.0491, 0.0304],
    ["rear wheels", 0.0623, 0.0073],
  ];
  const parts = published.map(([name, cd, cl]) => series(name, constant(cd, rows), constant(cl, rows)));
  const whole = { ...sumOf(parts, "whole"), cm: constant(0.0263, rows) };
  const ledger = buildLedger(record(whole, parts, { reference: { ...reference, wheelbase: 2.65, length: 2.65 } }));

  test("the parts add up to its totals", () => {
    expect(ledger.total.cd.value).toBeCloseTo(0.5688, 10);
    expect(ledger.total.cl.value).toBeCloseTo(-0.1923, 10);
    expect(ledger.closing.ok).toBe(true);
    expect(ledger.parts.map(({ name, cd, cl }) => [name, Number(cd.value.toFixed(4)), Number(cl.value.toFixed(4))])).toEqual(
      published,
    );
  });

  test("its axle lifts come out, to half a unit of their last digit", () => {
    expect(Math.abs(ledger.total.clFront!.value - -0.0698)).toBeLessThanOrEqual(0.5001e-4);
    expect(Math.abs(ledger.total.clRear!.value - -0.1225)).toBeLessThanOrEqual(0.5001e-4);
  });

  test.each([
    [0.4556, 0.0492, 0.0636, 0.5684],
    [0.4569, 0.0492, 0.062, 0.5681],
  ])("its other rows close as well: %d + %d + %d = %d", (...numbers) => {
    const total = numbers.pop()!;
    const others = numbers.map((cd, index) => series(`part ${index}`, constant(cd, rows), constant(0.1, rows)));
    const { closing } = buildLedger(record(series("whole", constant(total, rows), constant(0.3, rows)), others));
    expect(closing.ok).toBe(true);
  });

  test("a table with one digit changed does not close", () => {
    const wrong = { ...whole, cd: constant(0.5689, rows) };
    expect(buildLedger(record(wrong, parts)).closing.ok).toBe(false);
  });
});

/** Worked from 0.5 rho U² with rho 1.225 kg/m³ and g 9.80665 m/s². */
describe("forces on the road", () => {
  const kmh = (speed: number) => speed / 3.6;
  const newtons = (area: number, speed: number) => forcePerCoefficient({ ...reference, area, speed: kmh(speed), density: 1.225 })!;

  test.each([
    [50, 118.152],
    [100, 472.608],
    [120, 680.556],
    [130, 798.708],
    [140, 926.312],
    [200, 1890.432],
  ])("dynamic pressure at %d km/h: %d Pa", (speed, pascals) => {
    expect(newtons(1, speed)).toBeCloseTo(pascals, 3);
  });

  test.each([
    ["CdA 0.66 m² at 100 km/h", 0.66, 1, 100, 311.921],
    ["CdA 0.66 m² at 120 km/h", 0.66, 1, 120, 449.167],
    ["one count on 2.2 m² at 100 km/h", 2.2, 0.001, 100, 1.0397],
    ["one count on 2.2 m² at 130 km/h", 2.2, 0.001, 130, 1.7572],
    ["Cl 0.10 on 2.2 m² at 130 km/h", 2.2, 0.1, 130, 175.716],
    ["Cl 0.05 on 2.0 m² at 200 km/h", 2, 0.05, 200, 189.0432],
  ])("%s", (_, area, coefficient, speed, force) => {
    expect(Math.abs((coefficient * newtons(area, speed)) / force - 1)).toBeLessThan(5e-5);
  });
});
