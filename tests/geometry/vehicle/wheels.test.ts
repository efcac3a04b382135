import { describe, expect, it } from "vitest";
import { surfaceMesh } from "../../../src/geometry/surface-mesh.js";
import type { Vector3 } from "../../../src/geometry/vector.js";
import { axlesOf, joinWheels, wheelbaseOf } from "../../../src/geometry/vehicle/axles.js";
import { outerCircle } from "../../../src/geometry/vehicle/circle.js";
import { fitWheels, type WheelFit } from "../../../src/geometry/vehicle/wheels.js";
import { bodyOf, box, cylinder, joined, moved, random, revolved, shifted, type Triangles, torus, turned } from "../shapes.js";

const axes = { rearward: [1, 0, 0] as Vector3, right: [0, 1, 0] as Vector3, up: [0, 0, 1] as Vector3 };

/** About y: a tread with round shoulders, between discs. */
const tyre = (radius: number, width: number, columns: number): Triangles => {
  const half = width / 2;
  const profile: [number, number][] = [
    [0, -half],
    [0.7 * radius, -half],
    [0.97 * radius, -half * 0.9],
    [radius, -half * 0.6],
    [radius, half * 0.6],
    [0.97 * radius, half * 0.9],
    [0.7 * radius, half],
    [0, half],
  ];
  return turned(revolved(profile, columns), [1, 0, 0], -Math.PI / 2);
};
/** Cut by the ground at z = level: what was lower lies in the plane. */
const cutAt = (shape: Triangles, level: number): Triangles => moved(shape, ([x, y, z]) => [x, y, Math.max(z, level)]);

function fits(parts: Record<string, Triangles>): { part: number; fit: WheelFit | null; centre: Vector3 }[] {
  const set = bodyOf(parts);
  return fitWheels(
    surfaceMesh(set),
    set.parts.map((_, k) => k),
    axes,
  );
}
const only = (shape: Triangles): WheelFit => {
  const found = fits({ wheel: shape });
  expect(found).toHaveLength(1);
  if (found[0].fit === null) throw new Error("no wheel");
  return found[0].fit;
};
const close = (found: Vector3, truth: Vector3, tolerance: number): void =>
  found.forEach((value, k) => {
    expect(Math.abs(value - truth[k])).toBeLessThan(tolerance);
  });

describe("fitWheels", () => {
  it("finds centre, radius and width of a tyre to float32", () => {
    const wheel = only(shifted(tyre(0.33, 0.2, 90), [2.5, -0.75, 0.33]));
    close(wheel.centre, [2.5, -0.75, 0.33], 1e-6);
    close(wheel.axis, [0, 1, 0], 1e-6);
    expect(wheel.radius).toBeCloseTo(0.33, 6);
    expect(wheel.width).toBeCloseTo(0.2, 6);
    expect(wheel.fitError).toBeLessThan(1e-6);
    expect(wheel.covered).toBeCloseTo(1, 6);
  });

  it.each([0.002, 0.01, 0.03])("is not led astray by a flat %f m deep where the tyre meets the ground", (depth) => {
    const wheel = only(shifted(cutAt(tyre(0.33, 0.2, 180), -0.33 + depth), [0, 0, 0.33 - depth]));
    close(wheel.centre, [0, 0, 0.33 - depth], 2e-4);
    expect(Math.abs(wheel.radius - 0.33)).toBeLessThan(2e-4);
    expect(wheel.covered).toBeGreaterThan(0.8);
  });

  it("nor by a bulge beside the flat, or a valve", () => {
    const bulged = moved(tyre(0.33, 0.2, 180), ([x, y, z]) => [
      x * (z < -0.29 ? 1.08 : 1),
      y * (z < -0.25 ? 1.2 : 1),
      Math.max(z, -0.31),
    ]);
    const wheel = only(joined(bulged, shifted(box([-0.01, -0.01, 0], [0.01, 0.01, 0.06]), [0.1, 0.05, 0.27])));
    close([wheel.centre[0], 0, wheel.centre[2]], [0, 0, 0], 1e-3);
    expect(Math.abs(wheel.radius - 0.33)).toBeLessThan(1e-3);
  });

  it.each([
    [1, 0],
    [2.5, 0.5],
    [-4, -1.5],
  ])("finds camber of %f and toe of %f degrees", (camber, toe) => {
    const deg = Math.PI / 180;
    const tilt = (shape: Triangles): Triangles => turned(turned(shape, [1, 0, 0], camber * deg), [0, 0, 1], toe * deg);
    const wheel = only(shifted(tilt(tyre(0.33, 0.22, 120)), [1, 0.8, 0.33]));
    const [x, y, z] = tilt([0, 1, 0]) as Vector3;
    close(wheel.axis, [x, y, z], 2e-4);
    close(wheel.centre, [1, 0.8, 0.33], 1e-4);
    expect(wheel.radius).toBeCloseTo(0.33, 4);
    expect(wheel.axis[1]).toBeGreaterThan(0);
  });

  it("finds camber of a tyre that is cut flat", () => {
    const deg = Math.PI / 180;
    const wheel = only(cutAt(turned(tyre(0.33, 0.22, 180), [1, 0, 0], 2 * deg), -0.31));
    const [x, y, z] = turned([0, 1, 0], [1, 0, 0], 2 * deg) as Vector3;
    close(wheel.axis, [x, y, z], 4e-3);
    expect(Math.abs(wheel.radius - 0.33)).toBeLessThan(1e-3);
  });

  it("takes the corners of a coarse wheel, not its flats, for the radius", () => {
    const wheel = only(turned(cylinder(0.3, 0.2, 12), [1, 0, 0], Math.PI / 2));
    expect(wheel.radius).toBeCloseTo(0.3, 6);
    close(wheel.axis, [0, 1, 0], 1e-6);
  });

  it("does not make up a tilt for a balloon tyre", () => {
    close(only(turned(torus(0.28, 0.05, 24), [1, 0, 0], Math.PI / 2)).axis, [0, 1, 0], 1e-6);
  });

  it("keeps a rim inside its tyre together, and wheels in one part apart", () => {
    const wheel = joined(tyre(0.33, 0.2, 60), tyre(0.2, 0.18, 40));
    const found = fits({ wheels: joined(...[0, 2.7].flatMap((x) => [-0.8, 0.8].map((y) => shifted(wheel, [x, y, 0.33])))) });
    expect(found).toHaveLength(4);
    expect(found.map(({ fit }) => fit?.centre.map((value) => Math.round(value * 10) / 10 + 0)).sort()).toEqual([
      [0, -0.8, 0.3],
      [0, 0.8, 0.3],
      [2.7, -0.8, 0.3],
      [2.7, 0.8, 0.3],
    ]);
  });

  it("does not call a box or half a tyre a wheel", () => {
    expect(fits({ box: box([0, 0, 0], [0.6, 0.2, 0.6]) })[0].fit).toBeNull();
    expect(fits({ half: cutAt(tyre(0.33, 0.2, 60), 0) })[0].fit).toBeNull();
    expect(fits({ none: [] })).toEqual([]);
    expect(fits({ flat: [0, 0, 0, 1, 0, 0, 2, 0, 0] })[0]).toMatchObject({ fit: null, centre: [1, 0, 0] });
  });
});

describe("outerCircle", () => {
  it("finds a circle in points inside and on it, and says how much of it is there", () => {
    const next = random(2);
    const points: number[] = [];
    for (let k = 0; k < 4000; k++) {
      const angle = 1.5 * Math.PI * next();
      const r = 2 * (k % 2 === 0 ? 1 : Math.sqrt(next()));
      points.push(7 + r * Math.cos(angle), -3 + r * Math.sin(angle));
    }
    const circle = outerCircle(Float64Array.from(points));
    expect(circle?.x).toBeCloseTo(7, 2);
    expect(circle?.y).toBeCloseTo(-3, 2);
    expect(circle?.radius).toBeCloseTo(2, 2);
    expect(Math.abs((circle?.covered ?? 0) - 0.75)).toBeLessThan(0.02);
  });

  it("has none through fewer than three corners", () => {
    expect(outerCircle(Float64Array.from([0, 0, 1, 1]))).toBeNull();
    expect(outerCircle(Float64Array.from([0, 0, 1, 1, 2, 2, 3, 3]))).toBeNull();
    expect(outerCircle(new Float64Array(0))).toBeNull();
  });
});

describe("axles", () => {
  const wheel = (part: number, x: number, y: number, radius = 0.33): WheelFit => ({
    part,
    centre: [x, y, 0.33],
    axis: [0, 1, 0],
    radius,
    width: 0.2,
    fitError: 0,
    covered: 1,
    corners: 90,
  });

  it("measures from the mean front to the mean rear axle", () => {
    const axles = axlesOf([wheel(0, 2.7, -0.8), wheel(1, 0.01, 0.8), wheel(2, -0.01, -0.8), wheel(3, 2.72, 0.8)], [1, 0, 0]);
    expect(axles).toEqual([
      { position: 0, wheels: 2 },
      { position: 2.71, wheels: 2 },
    ]);
    expect(wheelbaseOf(axles)).toBeCloseTo(2.71, 12);
    expect(wheelbaseOf(axles.slice(1))).toBeNull();
  });

  it("counts along the direction of travel, and to the middle of a tandem", () => {
    const wheels = [wheel(0, 0, 1), wheel(1, -5, 1), wheel(2, -6, 1)];
    expect(wheelbaseOf(axlesOf(wheels, [-1, 0, 0]))).toBeCloseTo(5.5, 12);
  });

  it("gives rim and disc the radius and axle of their tyre, not of the wheel across", () => {
    const joinedWheels = joinWheels([
      wheel(0, 0.001, 0.8, 0.2),
      wheel(1, 0, 0.82),
      wheel(2, 0, -0.82, 0.34),
      wheel(0, 0, 0.81, 0.05),
    ]);
    expect(joinedWheels.map(({ part, radius, centre }) => [part, radius, centre[1]])).toEqual([
      [0, 0.33, 0.82],
      [1, 0.33, 0.82],
      [2, 0.34, -0.82],
    ]);
  });
});
