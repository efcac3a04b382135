import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { skinFriction, wallSpacing } from "../../src/flow/wall.js";

describe("wall spacing", () => {
  test("the cell centre lies at the asked y+, and the cell is twice as high", () => {
    fc.assert(
      fc.property(
        fc.double({ min: 5, max: 100, noNaN: true }),
        fc.double({ min: 0.2, max: 20, noNaN: true }),
        fc.double({ min: 1.2e-5, max: 2e-5, noNaN: true }),
        fc.double({ min: 1, max: 300, noNaN: true }),
        (speed, length, kinematicViscosity, yPlus) => {
          const wall = wallSpacing({ speed, length, kinematicViscosity, yPlus });
          expect((wall.frictionVelocity * (wall.firstCell / 2)) / kinematicViscosity / yPlus).toBeCloseTo(1, 12);
          expect(wall.firstCell).toBe(2 * wall.centreDistance);
          expect((2 * wall.frictionVelocity ** 2) / speed ** 2).toBeCloseTo(wall.skinFriction, 12);
          expect(wall.reynolds).toBeCloseTo((speed * length) / kinematicViscosity, 6);
          expect(wallSpacing({ speed, length, kinematicViscosity, yPlus: 2 * yPlus }).firstCell).toBeCloseTo(
            2 * wall.firstCell,
            12,
          );
        },
      ),
      { seed: 61, numRuns: 300 },
    );
  });

  test("friction falls with the Reynolds number", () => {
    for (let power = 3; power < 9; power += 0.25)
      expect(skinFriction(10 ** (power + 0.25))).toBeLessThan(skinFriction(10 ** power));
  });

  test("refuses what is not positive, and Reynolds numbers without a meaning", () => {
    const given = { speed: 30, length: 4, kinematicViscosity: 1.5e-5, yPlus: 50 };
    expect(() => wallSpacing({ ...given, speed: 0 })).toThrow("speed is 0, must be positive");
    expect(() => wallSpacing({ ...given, yPlus: Number.NaN })).toThrow("yPlus is NaN, must be positive");
    expect(() => skinFriction(10)).toThrow("Reynolds number is 10, must be at least 1000");
  });
});
