import { describe, expect, test } from "vitest";
import { differenceOf, type MeanWithError } from "../../src/compare/difference.js";
import { studentTwoSided } from "../../src/history/student.js";

/** Mean, standard error and degrees of freedom of n independent values. */
const sample = (count: number, mean: number, deviation: number): MeanWithError => ({
  mean,
  standardError: deviation / Math.sqrt(count),
  degreesOfFreedom: count - 1,
});

describe("Welch's test against published examples", () => {
  // Two-sample t-test example of the NIST/SEMATECH e-handbook (car mileage, 249 cars of one origin and 79 of another) with unequal
  // variances as worked in the documentation of Boost.Math.
  test("car mileage: t -12.94627 with 136.87499 degrees of freedom, p 1.571e-25", () => {
    const [a, b] = [sample(249, 20.14458, 6.4147), sample(79, 30.48101, 6.10771)];
    const { delta, halfWidth, degreesOfFreedom } = differenceOf(a, b);
    const error = Math.hypot(a.standardError, b.standardError);
    expect(degreesOfFreedom).toBeCloseTo(136.87499, 5);
    expect(-delta / error).toBeCloseTo(-12.94627, 5);
    expect(studentTwoSided(delta / error, degreesOfFreedom)).toBeCloseTo(1.571e-25, 28);
    // t(0.975, 136.87499) = 1.977447304677 (SciPy)
    expect(halfWidth / error).toBeCloseTo(1.977447304677, 9);
  });

  // NAG library, example of routine g07caf.
  test("NAG g07caf: t 2.5922 with 8.0 degrees of freedom, p 0.0320, interval 0.4410 to 7.5590", () => {
    const [a, b] = [sample(8, 21, 4.208), sample(4, 25, 0.8185)];
    const { delta, halfWidth, degreesOfFreedom } = differenceOf(a, b);
    const error = Math.hypot(a.standardError, b.standardError);
    // The published deviations have four digits, which leaves t open by 3e-4.
    expect(Math.abs(delta / error - 2.5922)).toBeLessThan(3e-4);
    expect(Number(degreesOfFreedom.toFixed(1))).toBe(8);
    expect(studentTwoSided(delta / error, degreesOfFreedom)).toBeCloseTo(0.032, 4);
    expect(delta - halfWidth).toBeCloseTo(0.441, 3);
    expect(delta + halfWidth).toBeCloseTo(7.559, 3);
  });
});
