import { describe, expect, it } from "vitest";
import { findCrossings } from "../../../src/geometry/checks/crossings.js";
import { shellsOf } from "../../../src/geometry/shells.js";
import { surfaceMesh } from "../../../src/geometry/surface-mesh.js";
import { car } from "../car.js";
import { bodyOf, box, joined, random, shifted, shuffled, sphere, type Triangles, torus } from "../shapes.js";

function crossings(parts: Record<string, Triangles>) {
  const set = bodyOf(parts);
  const mesh = surfaceMesh(set);
  return findCrossings(mesh, shellsOf(mesh).shellOf, set.parts.length);
}
const counts = (parts: Record<string, Triangles>) => {
  const { within, betweenShells, betweenParts } = crossings(parts);
  return { within: within.count, between: betweenShells.count + betweenParts.count };
};
const cube = box([0, 0, 0], [1, 1, 1]);

describe("findCrossings", () => {
  it("finds none in closed bodies, apart or nested", () => {
    expect(counts({ a: sphere(1, 20), b: torus(4, 0.5, 14) })).toEqual({ within: 0, between: 0 });
    expect(counts({ a: cube, b: shifted(cube, [3, 0, 0]), c: box([0.25, 0.25, 0.25], [0.5, 0.5, 0.5]) })).toEqual({
      within: 0,
      between: 0,
    });
    // The wheels reach into the body, as they do; no shell cuts itself.
    expect(counts({ a: [...car(8000).set.positions] }).within).toBe(0);
  });

  it("does not count what touches or lies in one plane", () => {
    expect(counts({ a: cube, b: shifted(cube, [1, 0, 0]), c: shifted(cube, [0.5, 0.25, 1]), d: cube })).toEqual({
      within: 0,
      between: 0,
    });
  });

  it("counts pairs of two boxes that overlap at a corner", () => {
    // Six pairs of faces cross along a line each; how often depends on the faces' diagonals.
    const { betweenParts: between, within } = crossings({ a: cube, b: shifted(cube, [0.6, 0.55, 0.7]) });
    expect(within.count).toBe(0);
    expect(between.count).toBe(bruteForce(joined(cube, shifted(cube, [0.6, 0.55, 0.7]))));
    expect(between.count).toBeGreaterThanOrEqual(6);
    for (const [x, y, z] of between.places) {
      expect(Math.min(x - 0.6, y - 0.55, z - 0.7)).toBeGreaterThanOrEqual(-1e-6);
      expect(Math.max(x, y, z)).toBeLessThanOrEqual(1 + 1e-6);
    }
  });

  it("tells a surface that cuts itself from two that overlap", () => {
    const bent = sphere(1, 16).map((value, k) => (k % 3 === 0 && value > 0.2 ? -value - 0.9 : value));
    expect(counts({ bent }).within).toBeGreaterThan(20);
    expect(counts({ bent }).between).toBe(0);
  });

  it("counts what trying every pair counts, for triangles thrown together, in any order", () => {
    const next = random(17);
    const thrown = Array.from({ length: 150 }, () => {
      const [x, y, z] = [next(), next(), next()];
      return [0, 1, 2].flatMap(() => [x + 0.4 * next(), y + 0.4 * next(), z + 0.4 * next()]);
    }).flat();
    const truth = bruteForce(thrown);
    expect(truth).toBeGreaterThan(60);
    expect(counts({ thrown }).between).toBe(truth);
    expect(counts({ thrown: shuffled(thrown, 2) }).between).toBe(truth);
    // One very large triangle among many small ones.
    const wide = joined(thrown, [-50, 0.5, 0.3, 60, 0.4, 0.3, 0, 0.6, 70]);
    expect(counts({ wide }).between).toBe(bruteForce(wide));
  });

  it("counts per part and pair of parts, and gives places that are apart, ten at most", () => {
    const { betweenParts, partPairs } = crossings({
      a: sphere(1, 16),
      b: sphere(1, 16, [0.7, 0.1, 0.05]),
      c: sphere(0.2, 8, [1.69, 0.1, 0]),
    });
    expect(partPairs.map(({ a, b }) => [a, b])).toEqual([
      [0, 1],
      [1, 2],
    ]);
    expect(betweenParts.count).toBe(partPairs[0].count + partPairs[1].count);
    expect([...betweenParts.perPart]).toEqual([partPairs[0].count, betweenParts.count, partPairs[1].count]);
    expect(betweenParts.places).toHaveLength(10);
    for (const [x, y, z] of partPairs[0].places) expect(Math.abs(Math.hypot(x, y, z) - 1)).toBeLessThan(0.03);
    for (const p of betweenParts.places)
      for (const q of betweenParts.places)
        if (p !== q) expect(Math.hypot(p[0] - q[0], p[1] - q[1], p[2] - q[2])).toBeGreaterThan(0.02 * 2.7);
  });

  it("tells shells of one part from parts", () => {
    const other = shifted(cube, [0.6, 0.55, 0.7]);
    const { within, betweenShells, betweenParts, partPairs } = crossings({ a: joined(cube, other) });
    expect([within.count, betweenParts.count, partPairs]).toEqual([0, 0, []]);
    expect(betweenShells.count).toBe(bruteForce(joined(cube, other)));
    expect([...betweenShells.perPart]).toEqual([betweenShells.count]);
  });

  it("counts a fan that cuts itself though its triangles share a corner, and none that is merely folded", () => {
    // The edge from (1,-1,0) to (1,1,0) pierces the other triangle, whose tip is the same corner.
    const apart: Triangles = [0, 0, 0, 1, -1, 0, 1, 1, 0, 0, 0, 0, 2, 0, -1, 2, 0, 1];
    expect(counts({ apart })).toEqual({ within: 0, between: 1 });
    const fold: Triangles = [0, 0, 0, 1, 0, 0, 0, 1, 0, 0, 0, 0, 0, 1, 0, 1, 0.2, 0];
    expect(counts({ fold })).toEqual({ within: 0, between: 0 });
  });

  it("counts what trying every pair counts, for triangles on few shared corners (20 soups, seeds 1 to 20)", () => {
    let sum = 0;
    for (let seed = 1; seed <= 20; seed++) {
      const next = random(seed);
      const points = Array.from({ length: 30 }, () => [next(), next(), next()]);
      const soup = Array.from({ length: 60 }, () => {
        const first = Math.floor(30 * next());
        const second = (first + 1 + Math.floor(14 * next())) % 30;
        const third = (second + 1 + Math.floor(14 * next())) % 30;
        return [...points[first], ...points[second], ...points[third]];
      }).flat();
      const truth = bruteForce(soup);
      sum += truth;
      const found = counts({ soup });
      expect(found.within + found.between).toBe(truth);
    }
    expect(sum).toBeGreaterThan(2000);
  });

  it("ends early on triangles thrown together in heaps, and says so", () => {
    // 4500 triangles across all of a cube: 10 million pairs of boxes, more than 200 each and 5 million.
    const next = random(3);
    const heap = Array.from({ length: 4500 }, () =>
      [0, 0, 0, 1, 1, 1].map((v) => v + 1e-3 * next()).concat([next(), next(), next()]),
    ).flat();
    const found = crossings({ heap });
    expect(found.complete).toBe(false);
    expect(crossings({ few: heap.slice(0, 9 * 500) }).complete).toBe(true);
  });

  it("has none in nothing", () => {
    expect(counts({})).toEqual({ within: 0, between: 0 });
    expect(counts({ a: [1, 1, 1, 1, 1, 1, 1, 1, 1] })).toEqual({ within: 0, between: 0 });
  });
});

/**
 * Every pair of triangles without a common edge: whether an edge of one pierces the inside of the other. By the segment in which a triangle
 * meets the other's plane (Möller, 1997), with sides snapped to zero at common corners.
 */
function bruteForce(shape: Triangles): number {
  const rounded = shape.map(Math.fround);
  const corner = (t: number, k: number): number[] => rounded.slice(9 * t + 3 * k, 9 * t + 3 * k + 3);
  const minus = (a: number[], b: number[]): number[] => a.map((value, k) => value - b[k]);
  const cross = (a: number[], b: number[]): number[] => [
    a[1] * b[2] - a[2] * b[1],
    a[2] * b[0] - a[0] * b[2],
    a[0] * b[1] - a[1] * b[0],
  ];
  const dot = (a: number[], b: number[]): number => a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
  const same = (p: number[], q: number[]): boolean => p.every((value, k) => value === q[k]);
  let count = 0;
  for (let s = 0; 9 * s < shape.length; s++)
    for (let t = s + 1; 9 * t < shape.length; t++) {
      const a = [0, 1, 2].map((k) => corner(s, k));
      const b = [0, 1, 2].map((k) => corner(t, k));
      if (a.filter((p) => b.some((q) => same(p, q))).length > 1) continue;
      const na = cross(minus(a[1], a[0]), minus(a[2], a[0]));
      const nb = cross(minus(b[1], b[0]), minus(b[2], b[0]));
      const line = cross(na, nb);
      if (Math.hypot(...line) < 1e-12) continue;
      const stretch = (triangle: number[][], other: number[][], normal: number[]): [number, number] | null => {
        const sides = triangle.map((p) => (other.some((q) => same(p, q)) ? 0 : dot(normal, minus(p, other[0]))));
        const ends: number[] = [];
        for (let k = 0; k < 3; k++) {
          const [d, e] = [sides[k], sides[(k + 1) % 3]];
          if (d === 0) ends.push(dot(line, triangle[k]));
          if (d * e >= 0) continue;
          const share = d / (d - e);
          ends.push(
            dot(
              line,
              triangle[k].map((value, i) => value + share * (triangle[(k + 1) % 3][i] - value)),
            ),
          );
        }
        return sides.some((side) => side > 0) && sides.some((side) => side < 0) ? [Math.min(...ends), Math.max(...ends)] : null;
      };
      const ofA = stretch(a, b, nb);
      const ofB = stretch(b, a, na);
      const slack = 1e-9 * Math.hypot(...line);
      if (ofA !== null && ofB !== null && Math.max(ofA[0], ofB[0]) + slack < Math.min(ofA[1], ofB[1])) count++;
    }
  return count;
}
