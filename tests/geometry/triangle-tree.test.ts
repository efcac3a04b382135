import { describe, expect, it } from "vitest";
import { RayCaster } from "../../src/geometry/ray-hits.js";
import { surfaceMesh } from "../../src/geometry/surface-mesh.js";
import { eachMeetingPair, triangleTree } from "../../src/geometry/triangle-tree.js";
import { bodyOf, box, directions, joined, random, shifted, shuffled, sphere, type Triangles, torus } from "./shapes.js";

const meshOf = (shape: Triangles) => surfaceMesh(bodyOf({ shape }));

function soup(count: number, size: number, seed: number): Triangles {
  const next = random(seed);
  return Array.from({ length: count }, () => {
    const [x, y, z] = [next(), next(), next()];
    return [0, 1, 2].flatMap(() => [x + size * next(), y + size * next(), z + size * next()]);
  }).flat();
}

describe("triangleTree", () => {
  it("holds every triangle once, under boxes that hold it", () => {
    for (const shape of [soup(301, 0.1, 1), sphere(1, 20), box([0, 0, 0], [1, 1, 1]), [1, 2, 3, 1, 2, 3, 1, 2, 3], []]) {
      const mesh = meshOf(shape);
      const tree = triangleTree(mesh);
      expect([...tree.order].sort((a, b) => a - b)).toEqual(Array.from({ length: shape.length / 9 }, (_, k) => k));
      let outside = 0;
      tree.order.forEach((t, k) => {
        for (let node = tree.leaves + (k >> 2); node >= 1; node >>= 1)
          for (let h = 3 * t; h < 3 * t + 3; h++)
            for (let axis = 0; axis < 3; axis++) {
              const value = mesh.vertices[3 * mesh.corners[h] + axis];
              if (!(value >= tree.nodes[6 * node + axis] && value <= tree.nodes[6 * node + 3 + axis])) outside++;
            }
      });
      expect(outside).toBe(0);
    }
  });

  it("orders a dense cluster in a large body by a finer grid", () => {
    // 500 triangles within a millionth of the extent: one cell of the first grid.
    const cluster = soup(500, 0.05, 4).map((value) => value * 1e-6 + 1);
    const mesh = meshOf(joined(cluster, [0, 0, 0, 5, 0, 0, 0, 5, 5]));
    let pairs = 0;
    eachMeetingPair(triangleTree(mesh), 0, () => pairs++);
    expect(pairs).toBe(bruteForcePairs(mesh, 0).length);
  });
});

describe("eachMeetingPair", () => {
  it("gives each pair of boxes that meet, within the margin, once (seeds 1 to 3)", () => {
    for (let seed = 1; seed <= 3; seed++)
      for (const margin of [0, 0.05]) {
        const mesh = meshOf(joined(soup(150, 0.15, seed), [-3, 0.5, 0.5, 4, 0.5, 0.6, 0.5, 3, 0.4]));
        const pairs: string[] = [];
        eachMeetingPair(triangleTree(mesh), margin, (s, t) => pairs.push(`${Math.min(s, t)} ${Math.max(s, t)}`));
        expect(pairs.sort()).toEqual(bruteForcePairs(mesh, margin).sort());
      }
  });

  it("has none in nothing or in one triangle", () => {
    for (const shape of [[], [0, 0, 0, 1, 0, 0, 0, 1, 0]]) eachMeetingPair(triangleTree(meshOf(shape)), 1, () => expect(1).toBe(0));
  });
});

describe("RayCaster", () => {
  it("meets what trying every triangle meets, in order of distance (seed 5)", () => {
    const mesh = meshOf(soup(400, 0.3, 5));
    const caster = new RayCaster(mesh, triangleTree(mesh));
    const next = random(6);
    let met = 0;
    for (const [dx, dy, dz] of directions(60)) {
      const from = [next(), next(), next()] as const;
      const count = caster.hits(...from, dx, dy, dz, -0.4, 0.8);
      const expected = everyHit(mesh, from, [dx, dy, dz]).filter(({ at }) => at >= -0.4 && at <= 0.8);
      met += count;
      expect(caster.of).toEqual(expected.map(({ t }) => t));
      caster.at.forEach((at, k) => {
        expect(at).toBeCloseTo(expected[k].at, 9);
      });
    }
    expect(met).toBeGreaterThan(100);
  });

  it("measures a sphere and a torus through along the axes, in planes of their boxes too", () => {
    const ball = meshOf(sphere(1, 24));
    const caster = new RayCaster(ball, triangleTree(ball));
    expect(caster.hits(0.013, -5, 0.021, 0, 1, 0, 0, Infinity)).toBe(2);
    expect(caster.at[1] - caster.at[0]).toBeCloseTo(2, 1);
    const ring = meshOf(torus(1, 0.25, 24));
    expect(new RayCaster(ring, triangleTree(ring)).hits(-5, 0.011, 0.013, 1, 0, 0, 0, Infinity)).toBe(4);
    // In the plane of the cube's top: along the triangles, which it does not meet.
    const cube = meshOf(box([0, 0, 0], [1, 1, 1]));
    const along = new RayCaster(cube, triangleTree(cube));
    expect(along.hits(-1, 0.3, 1, 1, 0, 0, 0, Infinity)).toBe(2);
    expect(along.hits(-1, 0.3, 1.0001, 1, 0, 0, 0, Infinity)).toBe(0);
  });

  it("meets both triangles of a common edge, and leaves out the one it is told to", () => {
    const cube = meshOf(box([0, 0, 0], [1, 1, 1]));
    const caster = new RayCaster(cube, triangleTree(cube));
    expect(caster.hits(0.25, 0.25, -1, 0, 0, 1, 0, 1.5)).toBe(2);
    const [first] = caster.of;
    expect(caster.hits(0.25, 0.25, -1, 0, 0, 1, 0, 1.5, first)).toBe(1);
    expect(caster.of[0]).not.toBe(first);
  });

  it("does not depend on the order of the triangles", () => {
    const shape = joined(sphere(1, 12), shifted(sphere(1, 12), [0.5, 0.2, 0.1]));
    const at = (s: Triangles): number[] => {
      const mesh = meshOf(s);
      const caster = new RayCaster(mesh, triangleTree(mesh));
      caster.hits(-3, 0.05, 0.07, 1, 0, 0, 0, Infinity);
      return caster.at.map((value) => Number(value.toFixed(9)));
    };
    expect(at(shuffled(shape, 8))).toEqual(at(shape));
  });
});

type Mesh = ReturnType<typeof meshOf>;

function bruteForcePairs({ vertices, corners }: Mesh, margin: number): string[] {
  const limits = (t: number, axis: number): [number, number] => {
    const values = [0, 1, 2].map((k) => vertices[3 * corners[3 * t + k] + axis]);
    return [Math.min(...values), Math.max(...values)];
  };
  const pairs: string[] = [];
  for (let s = 0; 3 * s < corners.length; s++)
    for (let t = s + 1; 3 * t < corners.length; t++)
      if (
        [0, 1, 2].every((axis) => {
          const [a, b] = limits(s, axis);
          const [c, d] = limits(t, axis);
          return a - margin <= d && c <= b + margin;
        })
      )
        pairs.push(`${s} ${t}`);
  return pairs;
}

/** By the plane of each triangle, and the sides of its edges seen along the ray. */
function everyHit({ vertices, corners }: Mesh, o: readonly number[], d: readonly number[]): { t: number; at: number }[] {
  const hits: { t: number; at: number }[] = [];
  for (let t = 0; 3 * t < corners.length; t++) {
    const [a, b, c] = [0, 1, 2].map((k) => [0, 1, 2].map((axis) => vertices[3 * corners[3 * t + k] + axis] - o[axis]));
    const cross = (p: number[], q: number[]): number[] => [
      p[1] * q[2] - p[2] * q[1],
      p[2] * q[0] - p[0] * q[2],
      p[0] * q[1] - p[1] * q[0],
    ];
    const dot = (p: readonly number[], q: readonly number[]): number => p[0] * q[0] + p[1] * q[1] + p[2] * q[2];
    const sides = [dot(cross(a, b), d), dot(cross(b, c), d), dot(cross(c, a), d)];
    if (!(sides.every((side) => side > 0) || sides.every((side) => side < 0))) continue;
    const normal = cross(
      b.map((value, k) => value - a[k]),
      c.map((value, k) => value - a[k]),
    );
    hits.push({ t, at: dot(normal, a) / dot(normal, d) });
  }
  return hits.sort((p, q) => p.at - q.at);
}
