import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { differenceOf } from "../../src/compare/difference.js";
import { studentQuantile } from "../../src/history/student.js";

const mean = fc.record({
  mean: fc.double({ min: -1, max: 1, noNaN: true }),
  standardError: fc.double({ min: 1e-6, max: 0.1, noNaN: true }),
  degreesOfFreedom: fc.double({ min: 1, max: 500, noNaN: true }),
});

describe("difference of two means", () => {
  test("B minus A turns its sign with the order; the half-width does not", () => {
    fc.assert(
      fc.property(mean, mean, (a, b) => {
        const [forth, back] = [differenceOf(a, b), differenceOf(b, a)];
        expect(forth.delta).toBe(-back.delta);
        expect(forth.halfWidth).toBeCloseTo(back.halfWidth, 14);
        expect(forth.halfWidth).toBeGreaterThan(0);
      }),
      { seed: 5, numRuns: 200 },
    );
  });

  test("degrees of freedom lie between the smaller and the sum (Satterthwaite)", () => {
    fc.assert(
      fc.property(mean, mean, (a, b) => {
        const { degreesOfFreedom } = differenceOf(a, b);
        expect(degreesOfFreedom).toBeGreaterThanOrEqual(Math.min(a.degreesOfFreedom, b.degreesOfFreedom) * (1 - 1e-12));
        expect(degreesOfFreedom).toBeLessThanOrEqual((a.degreesOfFreedom + b.degreesOfFreedom) * (1 + 1e-12));
      }),
      { seed: 6, numRuns: 200 },
    );
  });

  test("against a certain value the other's own interval remains", () => {
    const known = { mean: 0, standardError: 0, degreesOfFreedom: 1 };
    const { halfWidth, degreesOfFreedom } = differenceOf(known, { mean: 0.3, standardError: 0.01, degreesOfFreedom: 7 });
    expect(degreesOfFreedom).toBeCloseTo(7, 12);
    expect(halfWidth).toBeCloseTo(0.01 * studentQuantile(0.975, 7), 12);
    expect(differenceOf(known, known)).toEqual({ delta: 0, halfWidth: 0, degreesOfFreedom: 2 });
  });

  test("bounds (no end of degrees of freedom) combine as the root of their squares", () => {
    const bound = (halfWidth: number) => ({
      mean: 0,
      standardError: halfWidth / studentQuantile(0.975, Number.POSITIVE_INFINITY),
      degreesOfFreedom: Number.POSITIVE_INFINITY,
    });
    expect(differenceOf(bound(0.003), bound(0.004)).halfWidth).toBeCloseTo(0.005, 12);
  });

  test("an unknown error leaves the difference unknown, never small", () => {
    const unknown = { mean: 0.1, standardError: Number.POSITIVE_INFINITY, degreesOfFreedom: 1 };
    expect(Number.isFinite(differenceOf(unknown, { mean: 0, standardError: 0.01, degreesOfFreedom: 5 }).halfWidth)).toBe(false);
  });
});
