import { describe, expect, it } from "vitest";
import { findCoincident, findOverlaps } from "../../../src/geometry/checks/coincident.js";
import { findCrossings } from "../../../src/geometry/checks/crossings.js";
import { shellsOf } from "../../../src/geometry/shells.js";
import { surfaceMesh } from "../../../src/geometry/surface-mesh.js";
import { car } from "../car.js";
import { bodyOf, box, joined, random, shifted, shuffled, sphere, type Triangles, torus, turned, turnedOver } from "../shapes.js";

const coincident = (parts: Record<string, Triangles>) => findCoincident(surfaceMesh(bodyOf(parts)));
const cube = box([0, 0, 0], [1, 1, 1]);

describe("findCoincident", () => {
  it("finds none in closed bodies, apart, overlapping or touching along an edge", () => {
    for (const parts of [
      { a: sphere(1, 24), b: torus(3, 0.5, 20) },
      { a: cube, b: shifted(cube, [0.4, 0.3, 0.2]) },
      { a: cube, b: shifted(cube, [1, 1, 0]) },
      { a: [...car(8000).set.positions] },
    ]) {
      const found = coincident(parts as unknown as Record<string, Triangles>);
      expect([found.same.count, found.opposite.count, found.pairs]).toEqual([0, 0, []]);
    }
  });

  it("leaves exact duplicates to the topology", () => {
    expect(coincident({ a: cube, b: cube }).same.area).toBe(0);
    expect(coincident({ a: cube, b: turnedOver(cube) }).opposite.area).toBe(0);
  });

  it("measures the area that two boxes touch by, facing each other", () => {
    const found = coincident({ a: cube, b: shifted(cube, [1, 0.25, 0.375]) });
    expect(found.opposite.area).toBeCloseTo(0.75 * 0.625, 9);
    expect(found.same).toEqual({ count: 0, area: 0 });
    expect(found.pairs).toHaveLength(1);
    expect(found.pairs[0]).toMatchObject({ a: 0, b: 1 });
    for (const [x, y, z] of found.places) {
      expect(x).toBe(1);
      expect(y).toBeGreaterThan(0.25);
      expect(y).toBeLessThan(1);
      expect(z).toBeGreaterThan(0.375);
    }
  });

  it("measures a skin that is there twice, whatever its triangles, at any angle", () => {
    // The same rectangle by two and by eight triangles.
    const coarse: Triangles = [0, 0, 0, 2, 0, 0, 2, 1, 0, 0, 0, 0, 2, 1, 0, 0, 1, 0];
    const fine = Array.from({ length: 4 }, (_, k): Triangles => {
      const [x0, x1] = [k / 2, (k + 1) / 2];
      return [x0, 0, 0, x1, 0, 0, x0, 1, 0, x1, 0, 0, x1, 1, 0, x0, 1, 0];
    }).flat();
    for (const angle of [0, 0.3, 1.1]) {
      const axis: [number, number, number] = [0.6, 0, 0.8];
      const found = coincident({ skin: turned(coarse, axis, angle), again: turned(fine, axis, angle) });
      expect(found.same.area).toBeCloseTo(2, 6);
      expect(found.opposite.count).toBe(0);
      const over = coincident({ skin: turned(coarse, axis, angle), again: turnedOver(turned(fine, axis, angle)) });
      expect(over.opposite.area).toBeCloseTo(2, 6);
    }
  });

  it("finds a neighbour folded onto its neighbour, not one beside it", () => {
    const flat: Triangles = [0, 0, 0, 1, 0, 0, 0, 1, 0, 0, 0, 0, 0, 1, 0, -1, 0, 0];
    expect(coincident({ flat }).pairs).toEqual([]);
    // The second one turned about the common edge: over the first, facing down.
    const folded: Triangles = [0, 0, 0, 1, 0, 0, 0, 1, 0, 0, 0, 0, 0, 1, 0, 0.5, 0, 0];
    const found = coincident({ folded });
    expect(found.opposite).toEqual({ count: 1, area: 0.25 });
  });

  it("keeps to its tolerance: a millionth of the extent", () => {
    const lifted = (by: number) =>
      coincident({ a: box([0, 0, 0], [10, 1, 1]), b: box([2, 0.25, 1 + by], [3, 0.75, 2]) }).opposite.area;
    expect(lifted(5e-6)).toBeCloseTo(0.5, 5);
    expect(lifted(2e-5)).toBe(0);
    // Tops that overlap by a strip no wider than the tolerance only touch; the sides do lie on each other.
    const strip = coincident({ a: box([0, 0, 0], [10, 1, 1]), b: box([0, 1 - 5e-6, 0], [10, 2, 1]) });
    expect(strip.same.count).toBe(0);
    expect(strip.opposite.area).toBeCloseTo(10, 9);
  });

  it("sums what sampling sums, for triangles thrown into a plane (seeds 1 to 5)", () => {
    for (let seed = 1; seed <= 5; seed++) {
      const next = random(seed);
      const triangle = (): Triangles => Array.from({ length: 3 }, () => [next(), next(), 0.5]).flat();
      const up = (t: Triangles): Triangles =>
        (t[3] - t[0]) * (t[7] - t[1]) - (t[4] - t[1]) * (t[6] - t[0]) > 0 ? t : turnedOver(t);
      const thrown = Array.from({ length: 12 }, () => up(triangle()));
      // Pairs over each point of a fine grid.
      const n = 300;
      let pairs = 0;
      for (let i = 0; i < n; i++)
        for (let j = 0; j < n; j++) {
          const [x, y] = [(i + 0.5) / n, (j + 0.5) / n];
          const over = thrown.filter((t) => inside(t, x, y)).length;
          pairs += (over * (over - 1)) / 2;
        }
      const { same, opposite } = coincident({ thrown: shuffled(thrown.flat(), seed) });
      expect(same.area).toBeGreaterThan(0.1);
      expect(Math.abs(same.area - pairs / n ** 2)).toBeLessThan(0.005 + 0.01 * same.area);
      expect(opposite.count).toBe(0);
    }
  });

  it("has none in nothing and in what has no area", () => {
    expect(coincident({}).pairs).toEqual([]);
    expect(coincident({ a: [1, 1, 1, 1, 1, 1, 1, 1, 1], b: [0, 0, 0, 1, 0, 0, 2, 0, 0] }).pairs).toEqual([]);
  });
});

describe("findOverlaps", () => {
  it("gives what the two searches give", () => {
    const mesh = surfaceMesh(
      bodyOf({ a: joined(cube, sphere(0.4, 12, [1, 1, 1])), b: shifted(cube, [1, 0.25, 0]), c: sphere(0.7, 14) }),
    );
    const { shellOf } = shellsOf(mesh);
    const both = findOverlaps(mesh, shellOf, 3);
    expect(both.crossings).toEqual(findCrossings(mesh, shellOf, 3));
    expect(both.coincident).toEqual(findCoincident(mesh));
    expect(both.crossings.betweenParts.count).toBeGreaterThan(0);
    expect(both.coincident.opposite.count).toBeGreaterThan(0);
  });
});

function inside(t: Triangles, x: number, y: number): boolean {
  return [0, 3, 6].every((a) => {
    const b = (a + 3) % 9;
    return (t[b] - t[a]) * (y - t[a + 1]) - (t[b + 1] - t[a + 1]) * (x - t[a]) > 0;
  });
}
