import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { type BodyInTunnel, boundingDomain, type DomainOptions, defaultDomain } from "../../src/flow/domain.js";
import type { Survey } from "../../src/geometry/survey.js";
import type { Box, Vector3 } from "../../src/geometry/vector.js";

/** A car: 4.5 x 1.8 x 1.5 m, wheelbase 2.7 m, mid-wheelbase at x = 0. */
const car: BodyInTunnel = { bounds: { min: [-2.2, -0.9, 0], max: [2.3, 0.9, 1.5] }, frontalArea: 2.2 };

const body = fc
  .record({
    nose: fc.double({ min: -20, max: 2, noNaN: true }),
    length: fc.double({ min: 0.2, max: 20, noNaN: true }),
    left: fc.double({ min: 0.05, max: 3, noNaN: true }),
    right: fc.double({ min: 0.05, max: 3, noNaN: true }),
    height: fc.double({ min: 0.1, max: 5, noNaN: true }),
    filled: fc.double({ min: 0.05, max: 1, noNaN: true }),
  })
  .map(
    ({ nose, length, left, right, height, filled }): BodyInTunnel => ({
      bounds: { min: [nose, -left, 0], max: [nose + length, right, height] },
      frontalArea: filled * (left + right) * height,
    }),
  );
const options = fc.record({
  ahead: fc.double({ min: 0.5, max: 6, noNaN: true }),
  behind: fc.double({ min: 0.5, max: 15, noNaN: true }),
  side: fc.double({ min: 0.2, max: 5, noNaN: true }),
  top: fc.double({ min: 0.2, max: 5, noNaN: true }),
  mostBlockage: fc.double({ min: 0.003, max: 0.2, noNaN: true }),
  baseCell: fc.option(fc.double({ min: 0.05, max: 2, noNaN: true })),
  half: fc.boolean(),
});

describe("the bounding domain", () => {
  test("of a car by hand", () => {
    // A cross-section of 2 (0.9 + 1.5 * 4.5) * (1.5 + 1.5 * 4.5) = 126.2 m² has 1.74 % blockage, so both grow by sqrt(1.743 / 1.5).
    const domain = boundingDomain(car, { baseCell: 0.5 });
    expect(domain.min).toEqual([-16, -8.5, 0]);
    expect(domain.max).toEqual([29.5, 8.5, 9]);
    expect(domain.divisions).toEqual([91, 34, 18]);
    expect(domain.crossSection).toBeCloseTo(153, 12);
    expect(domain.blockage).toBeCloseTo(2.2 / 153, 12);
    expect(domain.grown).toBeCloseTo(Math.sqrt(2.2 / (2 * 7.65 * 8.25) / 0.015), 12);
    expect(domain.distances.ahead).toBeCloseTo(13.8, 12);
    expect(domain.distances.behind).toBeCloseTo(27.2, 12);
    expect(domain.distances.side).toBeCloseTo(7.6, 12);
    expect(domain.distances.top).toBeCloseTo(7.5, 12);
    expect(domain.kept).toBeNull();
  });

  test("takes a fifth of the length, to two digits, as base cell", () => {
    expect(boundingDomain(car).baseCell).toBe(0.9);
    expect(boundingDomain({ ...car, bounds: { min: [-0.5, -0.2, 0], max: [0.544, 0.2, 0.3] }, frontalArea: 0.1 }).baseCell).toBe(
      0.21,
    );
  });

  test("keeps distances and blockage, lies on the grid anchored at the origin, and holds the body", () => {
    fc.assert(
      fc.property(body, options, (given, wanted) => {
        const domain = boundingDomain(given, wanted);
        const { min, max } = given.bounds;
        const length = max[0] - min[0];
        const tolerance = 1e-8 * (length + domain.baseCell);
        expect(domain.blockage).toBeLessThanOrEqual(wanted.mostBlockage * (1 + 1e-7));
        expect(domain.distances.ahead).toBeGreaterThanOrEqual(wanted.ahead * length - tolerance);
        expect(domain.distances.behind).toBeGreaterThanOrEqual(wanted.behind * length - tolerance);
        expect(domain.distances.side).toBeGreaterThanOrEqual(wanted.side * length - tolerance);
        expect(domain.distances.top).toBeGreaterThanOrEqual(wanted.top * length - tolerance);
        expect(domain.distances.ahead).toBeLessThanOrEqual(wanted.ahead * length + domain.baseCell + tolerance);
        for (const axis of [0, 1, 2]) {
          for (const face of [domain.min[axis]!, domain.max[axis]!])
            expect(face).toBe(Math.round(face / domain.baseCell) * domain.baseCell + 0);
          expect(domain.divisions[axis]! * domain.baseCell).toBeCloseTo(domain.max[axis]! - domain.min[axis]!, 8);
          expect(domain.divisions[axis]).toBeGreaterThan(0);
        }
        expect(domain.min[2]).toBe(0);
        expect(domain.blockage * domain.crossSection).toBeCloseTo(given.frontalArea, 9);
        if (wanted.half) {
          expect(domain.kept).toBe("right");
          expect(Object.is(domain.min[1], 0)).toBe(true);
        } else expect(domain.min[1]).toBe(-domain.max[1]);
      }),
      { seed: 31, numRuns: 500 },
    );
  });

  test("a half domain is the half of the whole one, on the side of the body", () => {
    fc.assert(
      fc.property(body, options, (given, wanted) => {
        const whole = boundingDomain(given, { ...wanted, half: false });
        const half = boundingDomain(given, { ...wanted, half: true });
        expect(half).toEqual({
          ...whole,
          kept: "right",
          min: [whole.min[0], 0, 0],
          divisions: [whole.divisions[0], whole.divisions[1] / 2, whole.divisions[2]],
        });
        const reach = given.bounds.max[1];
        const leftOnly: Box = { min: [given.bounds.min[0], -reach, 0], max: [given.bounds.max[0], 0, given.bounds.max[2]] };
        const left = boundingDomain({ ...given, bounds: leftOnly }, { ...wanted, half: true });
        const rightOnly: Box = { min: [leftOnly.min[0], 0, 0], max: [leftOnly.max[0], reach, leftOnly.max[2]] };
        const right = boundingDomain({ ...given, bounds: rightOnly }, { ...wanted, half: true });
        expect(left.kept).toBe("left");
        expect(left.min[1]).toBe(-right.max[1]);
        expect(Object.is(left.max[1], 0)).toBe(true);
        expect({ ...left, min: 0, max: 0, kept: 0 }).toEqual({ ...right, min: 0, max: 0, kept: 0 });
      }),
      { seed: 32, numRuns: 200 },
    );
  });

  test("bodies with one base cell share their grid planes", () => {
    fc.assert(
      fc.property(body, body, fc.double({ min: 0.05, max: 2, noNaN: true }), (a, b, baseCell) => {
        const one = boundingDomain(a, { baseCell });
        const two = boundingDomain(b, { baseCell });
        for (const axis of [0, 1, 2]) {
          const apart = (one.min[axis]! - two.min[axis]!) / baseCell;
          expect(Math.abs(apart - Math.round(apart))).toBeLessThan(1e-6);
        }
      }),
      { seed: 33, numRuns: 200 },
    );
  });

  test("scales with the body", () => {
    fc.assert(
      fc.property(body, fc.integer({ min: -4, max: 4 }), (given, power) => {
        // A power of two scales doubles without rounding.
        const factor = 2 ** power;
        const scaled = (point: Vector3): Vector3 => [point[0] * factor, point[1] * factor, point[2] * factor];
        const small = boundingDomain(given, { baseCell: 0.25 });
        const large = boundingDomain(
          {
            bounds: { min: scaled(given.bounds.min), max: scaled(given.bounds.max) },
            frontalArea: given.frontalArea * factor ** 2,
          },
          { baseCell: 0.25 * factor },
        );
        expect(large.divisions).toEqual(small.divisions);
        expect(large.min).toEqual(scaled(small.min).map((value) => value + 0));
        expect(large.max).toEqual(scaled(small.max));
        expect(large.blockage).toBeCloseTo(small.blockage, 12);
      }),
      { seed: 34, numRuns: 200 },
    );
  });

  test("refuses what has no extent", () => {
    const flat = { ...car, bounds: { min: [0, -1, 0], max: [0, 1, 1] } } as BodyInTunnel;
    expect(() => boundingDomain(flat)).toThrow("length is 0, must be positive");
    expect(() => boundingDomain({ ...car, frontalArea: 0 })).toThrow("frontalArea is 0, must be positive");
    expect(() => boundingDomain({ ...car, frontalArea: Number.NaN })).toThrow("frontalArea is NaN, must be positive");
    expect(() => boundingDomain(car, { mostBlockage: 0 })).toThrow("mostBlockage is 0, must be positive");
    expect(() => boundingDomain(car, { baseCell: -1 })).toThrow("baseCell is -1, must be positive");
  });

  test("has defaults within what is practised: blockage under 1.5 %, inlet at 3 to 5 lengths, outlet at 5 to 15", () => {
    const wanted: DomainOptions = defaultDomain;
    expect(wanted.mostBlockage).toBe(0.015);
    expect(wanted.ahead).toBeGreaterThanOrEqual(3);
    expect(wanted.ahead).toBeLessThanOrEqual(5);
    expect(wanted.behind).toBeGreaterThanOrEqual(5);
    expect(wanted.behind).toBeLessThanOrEqual(15);
  });
});

describe("the bounding domain of a surveyed body", () => {
  /** The car of above in file axes: drives towards +y, up is +x, so its right is +z; shifted by (10, 20, 30). */
  function survey(more: Partial<Survey> = {}): Survey {
    const wheel = (y: number) => ({
      part: `wheel${y}`,
      centre: [10.3, 20 + y, 30] as Vector3,
      axis: [0, 0, 1] as Vector3,
      radius: 0.3,
      width: 0.2,
      fitError: 0,
    });
    return {
      files: [],
      parts: [],
      triangles: 0,
      vertices: 0,
      bounds: { min: [10, 17.7, 29.1], max: [11.5, 22.2, 30.9] },
      extents: { length: 4.5, width: 1.8, height: 1.5 },
      wettedArea: 1,
      volume: 1,
      centroid: [0, 0, 0],
      frontalArea: { value: 2.2, error: 0 },
      unit: { value: "m", basis: "", certain: true },
      axes: { travel: "+y", up: "+x", basis: "", certain: true },
      topology: { openEdges: 0, nonManifoldEdges: 0, flippedEdges: 0, degenerate: 0, duplicate: 0, shells: 1 },
      wheels: [wheel(1.35), wheel(-1.35)],
      wheelbase: 2.7,
      symmetry: { kind: "whole", plane: 30, deviation: 0 },
      findings: [],
      verdict: "fit",
      ...more,
    };
  }

  test("is that of the body in case axes", () => {
    expect(boundingDomain(survey(), { baseCell: 0.5 })).toEqual(boundingDomain(car, { baseCell: 0.5 }));
  });

  test("lies about mid-length without axles", () => {
    const about = { ...car, bounds: { min: [-2.25, -0.9, 0], max: [2.25, 0.9, 1.5] } as Box };
    expect(boundingDomain(survey({ wheels: [], wheelbase: null }), { baseCell: 0.5 })).toEqual(
      boundingDomain(about, { baseCell: 0.5 }),
    );
  });

  test("counts a half body with its mirror image", () => {
    const half = survey({
      bounds: { min: [10, 17.7, 30], max: [11.5, 22.2, 30.9] },
      extents: { length: 4.5, width: 0.9, height: 1.5 },
      frontalArea: { value: 1.1, error: 0 },
      symmetry: { kind: "half", plane: 30, deviation: 0 },
    });
    expect(boundingDomain(half, { baseCell: 0.5 })).toEqual(boundingDomain(car, { baseCell: 0.5 }));
  });
});
