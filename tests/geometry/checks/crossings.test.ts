import { describe, expect, it } from "vitest";
import { findCrossings } from "../../../src/geometry/checks/crossings.js";
import { shellsOf } from "../../../src/geometry/shells.js";
import { surfaceMesh } from "../../../src/geometry/surface-mesh.js";
import { car } from "../car.js";
import { bodyOf, box, joined, random, shifted, shuffled, sphere, type Triangles, torus } from "../shapes.js";

function crossings(parts: Record<string, Triangles>) {
  const set = bodyOf(parts);
  const mesh = surfaceMesh(set);
  const found = findCrossings(mesh, shellsOf(mesh).shellOf, set.parts.length);
  if (found === null) throw new Error("too large");
  return found;
}
const counts = (parts: Record<string, Triangles>) => {
  const { within, between } = crossings(parts);
  return { within: within.count, between: between.count };
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
    const { between, within } = crossings({ a: cube, b: shifted(cube, [0.6, 0.55, 0.7]) });
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

  it("counts per part, and gives ten places at most", () => {
    const { between } = crossings({ a: sphere(1, 16), b: sphere(1, 16, [0.7, 0.1, 0.05]) });
    expect(between.perPart[0] + between.perPart[1]).toBe(between.count);
    expect(between.places).toHaveLength(10);
    for (const [x, y, z] of between.places) expect(Math.abs(Math.hypot(x, y, z) - 1)).toBeLessThan(0.03);
  });

  it("has none in nothing", () => {
    expect(counts({})).toEqual({ within: 0, between: 0 });
    expect(counts({ a: [1, 1, 1, 1, 1, 1, 1, 1, 1] })).toEqual({ within: 0, between: 0 });
  });
});

/** Every pair of triangles without a common corner: whether the segment in which their planes meet lies in both (Möller, 1997). */
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
  let count = 0;
  for (let s = 0; 9 * s < shape.length; s++)
    for (let t = s + 1; 9 * t < shape.length; t++) {
      const a = [0, 1, 2].map((k) => corner(s, k));
      const b = [0, 1, 2].map((k) => corner(t, k));
      if (a.some((p) => b.some((q) => p.every((value, k) => value === q[k])))) continue;
      const na = cross(minus(a[1], a[0]), minus(a[2], a[0]));
      const nb = cross(minus(b[1], b[0]), minus(b[2], b[0]));
      const line = cross(na, nb);
      if (Math.hypot(...line) < 1e-12) continue;
      const stretch = (triangle: number[][], normal: number[], origin: number[]): [number, number] | null => {
        const sides = triangle.map((p) => dot(normal, minus(p, origin)));
        const ends: number[] = [];
        for (let k = 0; k < 3; k++) {
          const [d, e] = [sides[k], sides[(k + 1) % 3]];
          if (d * e >= 0) continue;
          const share = d / (d - e);
          ends.push(
            dot(
              line,
              triangle[k].map((value, i) => value + share * (triangle[(k + 1) % 3][i] - value)),
            ),
          );
        }
        return ends.length === 2 ? [Math.min(...ends), Math.max(...ends)] : null;
      };
      const ofA = stretch(a, nb, b[0]);
      const ofB = stretch(b, na, a[0]);
      if (ofA !== null && ofB !== null && Math.max(ofA[0], ofB[0]) < Math.min(ofA[1], ofB[1])) count++;
    }
  return count;
}
