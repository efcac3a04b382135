import { describe, expect, it } from "vitest";
import { archedLine } from "../../sample-geometry/body/arched-line.js";
import { fillRegion, type Point } from "../../sample-geometry/body/flat-region.js";
import { roundedBox } from "../../sample-geometry/body/rounded-box.js";
import { roundedLine } from "../../sample-geometry/body/rounded-line.js";
import { plateau, ramp, throughPoints } from "../../sample-geometry/body/shapes.js";
import { Surface } from "../../sample-geometry/body/surface.js";
import type { Vector3 } from "../../src/geometry/vector.js";
import { type Triangle, unpairedEdges, volumeOf } from "./triangles.js";

const trianglesOf = ({ positions }: Surface): Triangle[] =>
  Array.from({ length: positions.length / 9 }, (_, k) =>
    [0, 3, 6].map((corner) => positions.slice(9 * k + corner, 9 * k + corner + 3) as Vector3),
  ) as Triangle[];

describe("roundedLine", () => {
  it("rounds a right angle by a circle: all points of the turn are as far from the centre", () => {
    const corners = [
      { at: [0, 0, 0], reach: 0 },
      { at: [1, 0, 0], reach: 0.3 },
      { at: [1, 1, 0], reach: 0 },
    ];
    const points = roundedLine(corners, { straight: [2, 3], turn: [6] });
    expect(points).toHaveLength(1 + 2 + 6 + 3);
    for (const [x, y] of points.slice(2, 9)) expect(Math.hypot(x - 0.7, y - 0.3)).toBeCloseTo(0.3, 12);
    expect(points.at(-1)).toEqual([1, 1, 0]);
  });

  it("keeps a corner with no pieces sharp, and shortens a reach that is longer than the side allows", () => {
    const corners = [0, 1, 2].map((x) => ({ at: [x, x === 1 ? 1 : 0, 0], reach: 50 }));
    expect(roundedLine(corners, { straight: [1, 1], turn: [0] })).toEqual([
      [0, 0, 0],
      [1, 1, 0],
      [2, 0, 0],
    ]);
    const first = roundedLine(corners, { straight: [1, 1], turn: [2] })[1];
    expect(first[0]).toBeCloseTo(0.6, 12);
  });

  it("refuses pieces that do not fit the corners", () => {
    expect(() => roundedLine([{ at: [0, 0, 0], reach: 0 }], { straight: [1], turn: [] })).toThrow("A line of 1 corners");
  });
});

describe("fillRegion", () => {
  const ring = Array.from({ length: 40 }, (_, k): Point => [Math.cos((k / 20) * Math.PI), Math.sin((k / 20) * Math.PI)]);
  // A letter U: not convex.
  const corners: Point[] = [
    [0, 0],
    [3, 0],
    [3, 2],
    [2, 2],
    [2, 1],
    [1, 1],
    [1, 2],
    [0, 2],
  ];
  const letter = corners.flatMap((from, k): Point[] => {
    const to = corners[(k + 1) % corners.length];
    return [0, 1, 2, 3].map((n) => [from[0] + (n / 4) * (to[0] - from[0]), from[1] + (n / 4) * (to[1] - from[1])]);
  });

  it.each([
    ["a circle of 40 sides", ring, 20 * Math.sin(Math.PI / 20)],
    ["a U", letter, 5],
  ])("fills %s exactly once, counter-clockwise, without needles", (_, boundary, area) => {
    const { points, triangles } = fillRegion(boundary, 0.2);
    expect(points.slice(0, boundary.length)).toEqual(boundary);
    expect(points.length).toBeGreaterThan(boundary.length + 20);
    const areas = triangles.map(([a, b, c]) => {
      const [p, q, r] = [points[a], points[b], points[c]];
      return ((q[0] - p[0]) * (r[1] - p[1]) - (r[0] - p[0]) * (q[1] - p[1])) / 2;
    });
    expect(Math.min(...areas)).toBeGreaterThan(0.001);
    expect(areas.reduce((a, b) => a + b)).toBeCloseTo(area, 9);
    // Euler: triangles = 2 x points - boundary points - 2 for a filled disc.
    expect(triangles.length).toBe(2 * points.length - boundary.length - 2);
  });
});

describe("roundedBox", () => {
  it("is closed and has the volume of a box with its edges cut round, less the facets", () => {
    const [radius, side] = [0.2, 1];
    const box = trianglesOf(roundedBox({ x: [0, 2], side, z: [0, 1], radius, spacing: 0.3 }));
    expect(unpairedEdges(box)).toBe(0);
    // Rounded box: core + six slabs + twelve quarter cylinders + one sphere.
    const [a, b, c] = [1.6, 1.6, 0.6];
    const volume =
      a * b * c +
      2 * radius * (a * b + b * c + c * a) +
      Math.PI * radius * radius * (a + b + c) +
      (4 / 3) * Math.PI * radius * radius * radius;
    expect(volumeOf(box)).toBeLessThan(volume);
    expect(volumeOf(box)).toBeGreaterThan(0.98 * volume);
  });
});

describe("archedLine", () => {
  it("keeps the number of stations, meets them at both ends, and climbs over the wheels on circles", () => {
    const xs = Array.from({ length: 101 }, (_, k) => -2.5 + 0.05 * k);
    const line = archedLine(xs, 0.5, () => 0.35);
    expect(line).toHaveLength(xs.length);
    expect([line[0].x, line[100].x]).toEqual([xs[0], xs[100]]);
    const over = line.filter((point) => point.rise > 0);
    expect(over.length).toBeGreaterThan(30);
    for (const { x, z } of over) expect(Math.hypot(Math.abs(x) - 1.6, z - 0.375)).toBeCloseTo(0.5, 12);
    for (let k = 1; k < line.length; k++) expect(line[k].x).toBeGreaterThan(line[k - 1].x - 0.001);
  });
});

describe("shapes", () => {
  it("passes through its points, level beyond them", () => {
    const points: Point[] = [
      [0, 1],
      [1, 2],
      [3, 0],
    ];
    for (const [x, y] of points) expect(throughPoints(x, points)).toBeCloseTo(y, 12);
    expect([throughPoints(-5, points), throughPoints(9, points)]).toEqual([1, 0]);
    const slope = (x: number): number => (throughPoints(x + 1e-6, points) - throughPoints(x - 1e-6, points)) / 2e-6;
    expect(slope(1 - 1e-5)).toBeCloseTo(slope(1 + 1e-5), 3);
  });

  it("rises and falls between 0 and 1", () => {
    expect([ramp(0, 1, 2), ramp(1.5, 1, 2), ramp(3, 1, 2)]).toEqual([0, 0.5, 1]);
    expect([plateau(0, 1, 2, 0.5), plateau(1.5, 1, 2, 0.5), plateau(2.25, 1, 2, 0.5)]).toEqual([0, 1, 0.5]);
  });
});

describe("Surface", () => {
  it("refuses a triangle with two equal corners, also when float32 makes them equal", () => {
    const surface = new Surface();
    expect(() => surface.triangle([0, 0, 0], [1, 0, 0], [1 + 1e-12, 0, 0])).toThrow("two equal corners");
  });

  it("cuts a quad along its shorter diagonal and mirrors without a negative zero", () => {
    const surface = new Surface();
    surface.quad([0, 0, 0], [0, 0, 1], [3, 1, 1], [1, 0, 0]);
    surface.addMirrorImage();
    expect(surface.positions).toHaveLength(36);
    expect(surface.positions.some((value) => Object.is(value, -0))).toBe(false);
    // The diagonal from (0 0 1) to (1 0 0) is the shorter one, so both belong to both triangles.
    const corners = trianglesOf(surface)
      .slice(0, 2)
      .map((triangle) => triangle.map((corner) => corner.join()));
    for (const triangle of corners) expect(triangle).toEqual(expect.arrayContaining(["0,0,1", "1,0,0"]));
  });
});
