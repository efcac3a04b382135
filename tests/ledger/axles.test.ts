import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { axleLift } from "../../src/ledger/axles.js";

describe("axle lift", () => {
  test("it is the balance of moments of a beam on two axles", () => {
    // Lift L at x behind the middle and drag D at height z; wheelbase w, x rearward. About the rear axle: front = L (1/2 - x/w) + D z/w.
    const number = (min: number, max: number) => fc.double({ min, max, noNaN: true });
    fc.assert(
      fc.property(
        number(-2, 2),
        number(-2, 2),
        number(-3, 3),
        number(-1, 3),
        number(1.5, 4),
        number(0.5, 5),
        (cd, cl, x, z, w, length) => {
          // Nose-up moment of (D, 0, L) at (x, 0, z): the y part of r x F, z D - x L, on the reference length.
          const cm = (z * cd - x * cl) / length;
          const axles = axleLift({ cl: Float64Array.of(cl), cm: Float64Array.of(cm) }, { wheelbase: w, length })!;
          const front = cl * (0.5 - x / w) + (cd * z) / w;
          expect(axles.front[0]).toBeCloseTo(front, 12);
          expect(axles.rear[0]).toBeCloseTo(cl - front, 12);
        },
      ),
      { seed: 7, numRuns: 200 },
    );
  });

  test("without wheelbase, length or moment there is none", () => {
    const cl = Float64Array.of(0.1);
    const cm = Float64Array.of(0.02);
    expect(axleLift({ cl, cm }, { wheelbase: null, length: 2.7 })).toBeNull();
    expect(axleLift({ cl, cm }, { wheelbase: 2.7, length: null })).toBeNull();
    expect(axleLift({ cl, cm: null }, { wheelbase: 2.7, length: 2.7 })).toBeNull();
  });
});
