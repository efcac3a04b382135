import fc from "fast-check";
import { describe, expect, test } from "vitest";
import type { Vector3 } from "../../src/geometry/vector.js";
import type { ForceObject, VectorSeries } from "../../src/ledger/force-objects.js";
import { directionsOf, type RunReference, seriesOf, seriesOfTable } from "../../src/ledger/part-series.js";
import { reference } from "./records.js";
import { add, cross, dot, scale } from "./vehicle.js";

const rowOf = (vector: Vector3): VectorSeries => vector.map((x) => Float64Array.of(x)) as VectorSeries;
const zero: Vector3 = [0, 0, 0];

/** A forces object with one row: a pressure and a friction force at a point, moments about `centre`. */
function forcesAt(at: Vector3, pressure: Vector3, friction: Vector3, centre: Vector3): ForceObject {
  const total = add(pressure, friction);
  return {
    name: "part",
    patches: null,
    statedDensity: null,
    time: Float64Array.of(1),
    forces: { total: rowOf(total), pressure: rowOf(pressure), viscous: rowOf(friction) },
    moments: { total: rowOf(cross(add(at, scale(centre, -1)), total)), centre },
    coefficients: null,
    histories: [],
  };
}

/** The same force as a coefficient table about `centre` on a reference of its own. */
function tableAt(
  at: Vector3,
  force: Vector3,
  centre: Vector3,
  header: { area: number; length: number; speed: number },
  flip = 1,
): ForceObject {
  const unit = 0.5 * header.speed ** 2 * header.area;
  const pitch = dot(cross(add(at, scale(centre, -1)), force), [0, flip, 0]) / (unit * header.length);
  return {
    name: "part",
    patches: null,
    statedDensity: null,
    time: Float64Array.of(1),
    forces: null,
    moments: null,
    coefficients: {
      cd: Float64Array.of(force[0] / unit),
      cl: Float64Array.of(force[2] / unit),
      cs: Float64Array.of(force[1] / unit),
      pitch: Float64Array.of(pitch),
      header: { ...header, centre, drag: [1, 0, 0], lift: [0, 0, 1], pitch: [0, flip, 0] },
      file: "coefficient.dat",
    },
    histories: [],
  };
}

const run = (more: Partial<RunReference["reference"]> = {}, density = 1): RunReference => ({
  reference: { ...reference, area: 2, length: 2.5, speed: 10, density, ...more },
  axes: directionsOf([1, 0, 0], [0, 0, 1]),
  writtenDensity: () => density,
});

const coordinate = fc.double({ min: -3, max: 3, noNaN: true });
const vector = fc.tuple(coordinate, coordinate, coordinate);

describe("coefficients of one object", () => {
  test("a force at a point: drag, lift, side and the moment about the reference centre", () => {
    // 0.5 * 1 * 10² * 2 = 100 N per unit of coefficient
    const series = seriesOf(forcesAt([1, 0, 0.5], [30, 2, 10], [1, 0, 0], [4, 5, 6]), "x", run())!;
    expect(series.cd[0]).toBeCloseTo(0.31, 12);
    expect(series.cdPressure![0]).toBeCloseTo(0.3, 12);
    expect(series.cdFriction![0]).toBeCloseTo(0.01, 12);
    expect(series.cl[0]).toBeCloseTo(0.1, 12);
    expect(series.cs![0]).toBeCloseTo(0.02, 12);
    // nose-up: drag above the ground, less lift behind the centre
    expect(series.cm![0]).toBeCloseTo((0.5 * 0.31 - 1 * 0.1) / 2.5, 12);
  });

  test("where the run took its moments about makes no difference", () => {
    fc.assert(
      fc.property(vector, vector, vector, vector, vector, (at, pressure, friction, first, second) => {
        const [one, other] = [first, second].map((centre) => seriesOf(forcesAt(at, pressure, friction, centre), "x", run())!);
        expect(one.cm![0]).toBeCloseTo(other.cm![0], 10);
      }),
      { seed: 1, numRuns: 200 },
    );
  });

  test("a coefficient table on any reference, centre and pitch axis says the same as the forces", () => {
    const positive = fc.double({ min: 0.2, max: 40, noNaN: true });
    fc.assert(
      fc.property(
        vector,
        vector,
        vector,
        positive,
        positive,
        positive,
        fc.constantFrom(1, -1),
        (at, force, centre, area, length, speed, flip) => {
          // The newtons are those of the reference flow; the table of another speed has other coefficients of the same force.
          const forces = seriesOf(forcesAt(at, force, zero, centre), "x", run())!;
          const table = seriesOfTable(tableAt(at, force, centre, { area, length, speed }, flip), "x", run())!;
          for (const key of ["cd", "cl", "cs", "cm"] as const) expect(table[key]![0]).toBeCloseTo(forces[key]![0], 9);
        },
      ),
      { seed: 2, numRuns: 200 },
    );
  });

  test("turning the whole case turns nothing in the coefficients", () => {
    const turned = (axis: Vector3, angle: number) => (point: Vector3) => {
      const unit = scale(axis, 1 / Math.hypot(...axis));
      const [c, s] = [Math.cos(angle), Math.sin(angle)];
      return add(add(scale(point, c), scale(cross(unit, point), s)), scale(unit, dot(unit, point) * (1 - c)));
    };
    fc.assert(
      fc.property(
        vector,
        vector,
        vector,
        vector,
        fc.double({ min: 0, max: 6.3, noNaN: true }),
        (at, force, centre, axis, angle) => {
          fc.pre(Math.hypot(...axis) > 0.1);
          const turn = turned(axis, angle);
          const straight = seriesOf(forcesAt(at, force, zero, centre), "x", run())!;
          const turnedRun = { ...run(), axes: directionsOf(turn([1, 0, 0]), turn([0, 0, 1])) };
          const oblique = seriesOf(forcesAt(turn(at), turn(force), zero, turn(centre)), "x", turnedRun)!;
          for (const key of ["cd", "cl", "cs", "cm"] as const) expect(oblique[key]![0]).toBeCloseTo(straight[key]![0], 10);
        },
      ),
      { seed: 3, numRuns: 200 },
    );
  });

  test("newtons are those of the density they were written with; coefficients do not know it", () => {
    const object = forcesAt([0, 0, 0], [30, 0, 10], zero, zero);
    const heavier = forcesAt([0, 0, 0], [36, 0, 12], zero, zero);
    expect(seriesOf(heavier, "x", run({ density: 1.2 }, 1.2))!.cd[0]).toBeCloseTo(seriesOf(object, "x", run())!.cd[0], 12);
    // The air of the report may be another one than that of the table.
    expect(seriesOf(object, "x", { ...run({ density: 1.2 }), writtenDensity: () => 1 })!.cd[0]).toBeCloseTo(0.3, 12);
  });

  test("a half model counts twice, and its side force does not count", () => {
    const whole = seriesOf(forcesAt([1, 0, 1], [30, 2, 10], [1, 0, 0], zero), "x", run())!;
    const half = seriesOf(forcesAt([1, 0.4, 1], [15, 40, 5], [0.5, 0, 0], zero), "x", run({ symmetryFactor: 2 }))!;
    expect(half.cs).toBeNull();
    for (const key of ["cd", "cl", "cm", "cdPressure", "cdFriction"] as const)
      expect(half[key]![0]).toBeCloseTo(whole[key]![0], 12);
  });

  test("what is not known is null", () => {
    const object = forcesAt([1, 0, 1], [30, 0, 10], zero, zero);
    expect(seriesOf(object, "x", run({ area: null }))).toBeNull();
    expect(seriesOf(object, "x", { ...run(), writtenDensity: () => null })).toBeNull();
    expect(seriesOf(object, "x", run({ centre: null }))!.cm).toBeNull();
    expect(seriesOf(object, "x", run({ length: null }))!.cm).toBeNull();
    expect(seriesOf({ ...object, moments: null }, "x", run())!.cm).toBeNull();
    const table = tableAt([1, 0, 1], [30, 0, 10], zero, { area: 2, length: 2.5, speed: 10 });
    expect(seriesOf({ ...table, coefficients: { ...table.coefficients!, pitch: null } }, "x", run())!.cm).toBeNull();
    expect(seriesOf({ ...table, coefficients: { ...table.coefficients!, cs: null } }, "x", run())!.cs).toBeNull();
    expect(seriesOf({ ...table, coefficients: null }, "x", run())).toBeNull();
  });

  test("drag and lift along one line leave side and pitch open", () => {
    const axes = directionsOf([1, 0, 0], [1, 0, 0]);
    const series = seriesOf(forcesAt([1, 0, 1], [30, 2, 10], zero, zero), "x", { ...run(), axes })!;
    expect([series.cs, series.cm]).toEqual([null, null]);
    expect(series.cd[0]).toBeCloseTo(0.3, 12);
  });

  test("forces without moments take the pitching moment of their coefficient table", () => {
    const force: Vector3 = [30, 0, 10];
    const both = {
      ...forcesAt([1, 0, 1], force, zero, zero),
      moments: null,
      coefficients: tableAt([1, 0, 1], force, [0.3, 0, 0], { area: 2, length: 2.5, speed: 10 }).coefficients,
    };
    expect(seriesOf(both, "x", run())!.cm![0]).toBeCloseTo((0.3 - 0.1) / 2.5, 12);
  });
});
