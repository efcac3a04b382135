import { describe, expect, test } from "vitest";
import { incompleteBeta, logGamma, normalQuantile, studentQuantile, studentTwoSided } from "../../src/history/student.js";

/** 40 CFR 1065.602, Table 1: two-sided 95 % and 90 %. */
const regulation95: [degrees: number, t: number][] = [
  [1, 12.706],
  [2, 4.303],
  [3, 3.182],
  [4, 2.776],
  [5, 2.571],
  [6, 2.447],
  [7, 2.365],
  [8, 2.306],
  [9, 2.262],
  [10, 2.228],
  [11, 2.201],
  [12, 2.179],
  [13, 2.16],
  [14, 2.145],
  [15, 2.131],
  [16, 2.12],
  [18, 2.101],
  [20, 2.086],
  [22, 2.074],
  [24, 2.064],
  [26, 2.056],
  [28, 2.048],
  [30, 2.042],
  [35, 2.03],
  [40, 2.021],
  [50, 2.009],
  [70, 1.994],
  [100, 1.984],
];
const regulation90: [degrees: number, t: number][] = [
  [1, 6.314],
  [2, 2.92],
  [5, 2.015],
  [10, 1.812],
  [30, 1.697],
];

/** Probability that |T| is at most t for an even number of degrees of freedom: a finite sum (Abramowitz and Stegun 26.7.4). */
function insideEven(t: number, degrees: number): number {
  const cosine = degrees / (degrees + t * t);
  let term = 1;
  let sum = 1;
  for (let k = 1; k < degrees / 2; k += 1) {
    term *= (cosine * (2 * k - 1)) / (2 * k);
    sum += term;
  }
  return (t / Math.sqrt(degrees + t * t)) * sum;
}

describe("Student's quantile", () => {
  test.each(regulation95)("40 CFR 1065.602, 95 %%, %i degrees of freedom", (degrees, t) => {
    expect(Number(studentQuantile(0.975, degrees).toFixed(3))).toBe(t);
  });

  test.each(regulation90)("40 CFR 1065.602, 90 %%, %i degrees of freedom", (degrees, t) => {
    expect(Number(studentQuantile(0.95, degrees).toFixed(3))).toBe(t);
  });

  test("40 CFR 1065.602, its last row: 1000 and more", () => {
    expect(studentQuantile(0.975, Number.POSITIVE_INFINITY).toFixed(3)).toBe("1.960");
    expect(studentQuantile(0.95, Number.POSITIVE_INFINITY).toFixed(3)).toBe("1.645");
  });

  // Computed for this test with 30 digits from the incomplete beta function.
  test.each([
    [0.975, 1.5, 6.016663104427928],
    [0.6, 1.5, 0.3007453925697953],
    [0.975, 3, 3.18244630528371],
    [0.975, 5, 2.5705818356363146],
    [0.975, 10, 2.228138851986275],
    [0.975, 30, 2.042272456301238],
    [0.6, 100, 0.2540221824582278],
    [0.975, 136.87499, 1.9774473046927803],
    [0.975, 1000, 1.9623390808264081],
    [0.975, 1e5, 1.9599877075346093],
    [0.975, 9.9e5, 1.9599663807764995],
    [0.975, 19_900, 1.960083201277283],
    [0.975, 20_100, 1.960082014970872],
    [0.975, 1.01e6, 1.9599663333262172],
  ])("p %d with %d degrees of freedom, twelve digits", (p, degrees, t) => {
    expect(Math.abs(studentQuantile(p, degrees) / t - 1)).toBeLessThan(1e-12);
  });

  test("closed forms: one and two degrees of freedom", () => {
    for (const p of [1e-12, 0.01, 0.3, 0.4999999, 0.6, 0.975, 1 - 1e-9]) {
      const one =
        Math.abs(p - 0.5) < 0.25 ? Math.tan(Math.PI * (p - 0.5)) : Math.sign(p - 0.5) / Math.tan(Math.PI * Math.min(p, 1 - p));
      expect(Math.abs(studentQuantile(p, 1) / one - 1)).toBeLessThan(1e-13);
      const two = ((2 * p - 1) * Math.SQRT1_2) / Math.sqrt(p * (1 - p));
      expect(Math.abs(studentQuantile(p, 2) / two - 1)).toBeLessThan(1e-13);
    }
  });

  test("it turns the closed sums of even degrees of freedom around", () => {
    for (let degrees = 4; degrees <= 200; degrees += 14) {
      for (const p of [0.5001, 0.6, 0.9, 0.975, 0.995, 0.999999]) {
        const t = studentQuantile(p, degrees);
        expect(Math.abs(insideEven(t, degrees) - (2 * p - 1))).toBeLessThan(4e-15);
        expect(Math.abs(studentTwoSided(t, degrees) - 2 * (1 - p))).toBeLessThan(4e-15);
      }
    }
  });

  test("symmetric, increasing in p, falling with the degrees of freedom, also fractional ones", () => {
    let last = Number.POSITIVE_INFINITY;
    for (const degrees of [0.05, 0.3, 0.9, 1, 1.1, 1.9, 2, 2.1, 7.7, 33.3, 1e3, 1e5, 1e7, Number.POSITIVE_INFINITY]) {
      const t = studentQuantile(0.975, degrees);
      expect(t).toBeLessThan(last);
      expect(Math.abs(studentQuantile(0.025, degrees) / t + 1)).toBeLessThan(1e-12);
      expect(studentQuantile(0.98, degrees)).toBeGreaterThan(t);
      last = t;
    }
    expect(studentQuantile(0.5, 3)).toBe(0);
  });

  test("outside its arguments there is no number", () => {
    for (const [p, degrees] of [
      [0, 3],
      [1, 3],
      [-1, 3],
      [Number.NaN, 3],
      [0.9, 0],
      [0.9, -1],
      [0.9, Number.NaN],
    ] as const) {
      expect(studentQuantile(p, degrees)).toBeNaN();
    }
  });
});

describe("what it rests on", () => {
  test("gamma function: factorials and the half", () => {
    let factorial = 1;
    for (let n = 1; n < 20; n += 1) {
      expect(Math.abs(logGamma(n) - Math.log(factorial))).toBeLessThan(1e-14 * Math.max(1, Math.log(factorial)));
      factorial *= n;
    }
    expect(logGamma(0.5)).toBeCloseTo(0.5 * Math.log(Math.PI), 14);
  });

  test("incomplete beta: polynomials for whole parameters, and the mirror identity", () => {
    // I_x(a, 1) = x^a; I_x(2, 2) = 3 x^2 - 2 x^3
    for (const x of [0.001, 0.2, 0.5, 0.77, 0.999]) {
      expect(incompleteBeta(x, 1 - x, 3, 1)).toBeCloseTo(x ** 3, 14);
      expect(incompleteBeta(x, 1 - x, 2, 2)).toBeCloseTo(3 * x * x - 2 * x ** 3, 14);
      expect(incompleteBeta(x, 1 - x, 4.5, 0.5) + incompleteBeta(1 - x, x, 0.5, 4.5)).toBeCloseTo(1, 14);
    }
    expect([incompleteBeta(0, 1, 2, 3), incompleteBeta(1, 0, 2, 3)]).toEqual([0, 1]);
  });

  // Wichura (1988) gives these check values of AS 241 (from memory).
  test.each([
    [0.25, -0.6744897501960817],
    [0.001, -3.090232306167814],
    [1e-20, -9.262340089798409],
  ])("normal quantile at %d", (p, z) => {
    expect(Math.abs(normalQuantile(p) / z - 1)).toBeLessThan(1e-15);
  });
});
