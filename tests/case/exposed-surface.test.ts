import { describe, expect, test } from "vitest";
import { exposedSurface } from "../../src/case/exposed-surface.js";
import { bodyOf, box, joined, shifted, sphere, turnedOver } from "../geometry/shapes.js";

const whole = { side: 0, bothSides: false } as const;

describe("the surface that the air reaches", () => {
  test("a sphere in the air: all of it", () => {
    const found = exposedSurface(bodyOf({ ball: sphere(1, 60, [0, 0, 3]) }), 0.05, whole);
    expect(found.areas[0]! / (4 * Math.PI)).toBeCloseTo(1, 2);
    expect(found.enclosed / ((4 / 3) * Math.PI)).toBeCloseTo(1, 1);
  });

  test("a box on the ground: all but its underside", () => {
    const found = exposedSurface(bodyOf({ box: box([0, 0, 0], [2, 1, 1]) }), 0.05, whole);
    expect(found.areas[0]).toBeCloseTo(10 - 2, 1);
    expect(found.enclosed).toBeCloseTo(2, 0);
  });

  test("a box inside another is hidden, and does not count as a hole in it", () => {
    const found = exposedSurface(
      bodyOf({ outer: box([0, 0, 1], [2, 2, 3]), inner: box([0.5, 0.5, 1.5], [1.5, 1.5, 2.5]) }),
      0.08,
      whole,
    );
    expect(found.areas[0]).toBeCloseTo(24, 1);
    expect(found.areas[1]).toBe(0);
    expect(found.enclosed).toBeCloseTo(8, -0.5);
  });

  test("what reaches out of another part counts only outside", () => {
    // A bar through a cube: half a metre of it sticks out on each side.
    const found = exposedSurface(
      bodyOf({ cube: box([0, 0, 1], [1, 1, 2]), bar: box([-0.5, 0.4, 1.4], [1.5, 0.6, 1.6]) }),
      0.02,
      whole,
    );
    expect(found.areas[1]).toBeCloseTo(2 * (4 * 0.2 * 0.5 + 0.04), 1);
  });

  test("a hole wider than the cells lets the air in, a narrower one does not", () => {
    const open = (width: number) => {
      const y = (1 - width) / 2;
      // A cube whose lid is missing a slit of that width along x.
      const walls = joined(
        box([0, 0, 1], [1, 1, 1.02]),
        box([0, 0, 1], [0.02, 1, 2]),
        box([0.98, 0, 1], [1, 1, 2]),
        box([0, 0, 1], [1, 0.02, 2]),
        box([0, 0.98, 1], [1, 1, 2]),
        box([0, 0, 1.98], [1, y, 2]),
        box([0, 1 - y, 1.98], [1, 1, 2]),
      );
      return exposedSurface(bodyOf({ walls }), 0.04, whole).enclosed;
    };
    expect(open(0.2)).toBeLessThan(0.4);
    expect(open(0.01)).toBeGreaterThan(0.9);
  });

  test("an open sheet has air on both sides", () => {
    const square = [0, 0, 1, 1, 0, 1, 1, 1, 1, 0, 0, 1, 1, 1, 1, 0, 1, 1];
    expect(exposedSurface(bodyOf({ square }), 0.05, { side: 0, bothSides: true }).areas[0]).toBeCloseTo(1, 2);
    expect(exposedSurface(bodyOf({ square: turnedOver(square) }), 0.05, { side: 0, bothSides: true }).areas[0]).toBeCloseTo(1, 2);
  });

  test.each([1, -1] as const)("half a model (side %i) is half the surface, and its open cut is closed by the plane", (side) => {
    const ball = sphere(1, 60, [0, 0, 3]);
    const full = exposedSurface(bodyOf({ ball }), 0.05, { side, bothSides: false });
    expect(full.areas[0]! / (2 * Math.PI)).toBeCloseTo(1, 1);
    expect(full.enclosed / ((2 / 3) * Math.PI)).toBeCloseTo(1, 0);
    // The same from triangles of one side only: what was cut away is open.
    const half: number[] = [];
    for (let at = 0; at < ball.length; at += 9)
      if ([1, 4, 7].every((k) => side * ball[at + k]! >= -1e-9)) half.push(...ball.slice(at, at + 9));
    const cut = exposedSurface(bodyOf({ half }), 0.05, { side, bothSides: true });
    expect(cut.areas[0]! / full.areas[0]!).toBeCloseTo(1, 1);
    expect(cut.enclosed / full.enclosed).toBeCloseTo(1, 1);
  });

  test("does not depend on where the body stands", () => {
    const ball = sphere(1, 30, [0, 0, 2]);
    const here = exposedSurface(bodyOf({ ball }), 0.07, whole).areas[0]!;
    const there = exposedSurface(bodyOf({ ball: shifted(ball, [123.4, -56.7, 0]) }), 0.07, whole).areas[0]!;
    expect(there / here).toBeCloseTo(1, 3);
  });

  test("cells that would be too many are made larger", () => {
    expect(exposedSurface(bodyOf({ ball: sphere(1, 8, [0, 0, 2]) }), 1e-4, whole).cell).toBeGreaterThan(1e-3);
  });
});
