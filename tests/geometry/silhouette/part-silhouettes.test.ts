import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { partSilhouettes, silhouette } from "../../../src/geometry/silhouette/silhouette.js";
import { surfaceMesh } from "../../../src/geometry/surface-mesh.js";
import type { Vector3 } from "../../../src/geometry/vector.js";
import { bodyOf, box, cylinder, directions, joined, random, sphere, type Triangles } from "../shapes.js";

const alone = (shape: Triangles, direction: Vector3): number => silhouette(surfaceMesh(bodyOf({ shape })), direction).area;

function expectAlone(parts: Record<string, Triangles>, direction: Vector3): void {
  const names = Object.keys(parts);
  const found = partSilhouettes(surfaceMesh(bodyOf(parts)), names.length, direction);
  expect(found).toHaveLength(names.length);
  names.forEach((name, k) => {
    expect(found[k].area, name).toBeCloseTo(alone(parts[name], direction), 9);
  });
}

describe("each part's silhouette is that of its triangles alone", () => {
  it("a sphere hidden behind a larger one keeps pi r^2; together they show the larger only", () => {
    const parts = { near: sphere(1, 48), far: sphere(0.5, 48, [3, 0, 0]) };
    const mesh = surfaceMesh(bodyOf(parts));
    const [near, far] = partSilhouettes(mesh, 2, [1, 0, 0]);
    expect(Math.abs(near.area / Math.PI - 1)).toBeLessThan(2e-3);
    expect(Math.abs(far.area / (Math.PI / 4) - 1)).toBeLessThan(2e-3);
    expect(silhouette(mesh, [1, 0, 0]).area).toBeCloseTo(near.area, 12);
    expectAlone(parts, [1, 0, 0]);
  });

  it("parts that share edges: the two halves of a cylinder's wall and its ends", () => {
    const shape = cylinder(1, 2, 24);
    const ends: Triangles = [];
    const walls: [Triangles, Triangles] = [[], []];
    for (let at = 0; at < shape.length; at += 9) {
      const triangle = shape.slice(at, at + 9);
      const flat = triangle[2] === triangle[5] && triangle[5] === triangle[8];
      if (flat) ends.push(...triangle);
      else walls[triangle[0] + triangle[3] + triangle[6] > 0 ? 0 : 1].push(...triangle);
    }
    for (const direction of directions(7)) expectAlone({ right: walls[0], left: walls[1], ends }, direction);
  });

  it("boxes that share an edge with four triangles of two parts", () => {
    const parts = { a: box([0, 0, 0], [1, 1, 1]), b: box([1, 1, 0], [2, 2, 1]) };
    for (const direction of directions(9)) expectAlone(parts, direction);
  });

  it("random soups dealt out to four parts at random (seed 20261201)", () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 2 ** 31 - 1 }), (seed) => {
        const next = random(seed);
        const shape = joined(sphere(1, 6), box([-0.5, -0.5, -0.5], [1.5, 0.4, 0.3]));
        const parts: Record<string, Triangles> = { a: [], b: [], c: [], d: [] };
        for (let at = 0; at < shape.length; at += 9) parts["abcd"[Math.floor(4 * next())]].push(...shape.slice(at, at + 9));
        const [direction] = directions(50).slice(Math.floor(50 * next()));
        expectAlone(parts, direction);
      }),
      { seed: 20261201, numRuns: 40 },
    );
  });

  it("a part without triangles has none", () => {
    const [, empty] = partSilhouettes(surfaceMesh(bodyOf({ a: sphere(1, 8), b: [] })), 2, [0, 0, 1]);
    expect(empty).toEqual({ area: 0, error: 0, outline: 0, edges: 0, crossings: 0 });
  });
});
