import { describe, expect, it } from "vitest";
import { type Measures, measures } from "../../src/geometry/measures.js";
import { SteadySums } from "../../src/geometry/steady-sum.js";
import { surfaceMesh } from "../../src/geometry/surface-mesh.js";
import {
  bodyOf,
  box,
  capsule,
  cone,
  cylinder,
  ellipsoid,
  joined,
  random,
  shifted,
  sphere,
  type Triangles,
  torus,
  turnedOver,
} from "./shapes.js";

function of(parts: Record<string, Triangles>): { whole: Measures; groups: Measures[] } {
  const set = bodyOf(parts);
  return measures(surfaceMesh(set), set.partOf, set.parts.length);
}
const whole = (shape: Triangles): Measures => of({ shape }).whole;
const near = (value: number, truth: number, share: number): void => expect(Math.abs(value / truth - 1)).toBeLessThan(share);

describe("closed forms", () => {
  it("box: exact", () => {
    const { area, volume, volumeCentroid, areaCentroid, areaVector, bounds, triangles } = whole(box([1, 2, 3], [3, 5, 7]));
    expect({ area, volume, volumeCentroid, areaCentroid, areaVector, bounds, triangles }).toEqual({
      area: 52,
      volume: 24,
      volumeCentroid: [2, 3.5, 5],
      areaCentroid: [2, 3.5, 5],
      areaVector: [0, 0, 0],
      bounds: { min: [1, 2, 3], max: [3, 5, 7] },
      triangles: 12,
    });
  });

  // S and V of the smooth bodies; inscribed facets stay below by less than 1 %.
  it.each<[string, Triangles, number, number]>([
    ["sphere", sphere(1, 48), 4 * Math.PI, (4 / 3) * Math.PI],
    ["ellipsoid 2.25, 0.9, 0.7", ellipsoid(2.25, 0.9, 0.7, 48), 18.67701002, 5.93761012],
    ["torus 1, 0.25", torus(1, 0.25, 48), 9.8696044, 1.23370055],
    ["capsule 0.3, 1.2", capsule(0.3, 1.2, 20), 3.39292007, 0.45238934],
    ["cylinder 0.5, 2", cylinder(0.5, 2, 400), 2 * Math.PI + Math.PI / 2, Math.PI / 2],
  ])("%s", (_, shape, area, volume) => {
    near(whole(shape).area, area, 5e-3);
    near(whole(shape).volume, volume, 8e-3);
  });

  it("cone: its centroid lies a quarter of the height above the base", () => {
    const { volume, volumeCentroid } = whole(shifted(cone(1, 2, 720), [10, 0, -5]));
    near(volume, (2 / 3) * Math.PI, 2e-5);
    expect(volumeCentroid?.[0]).toBeCloseTo(10, 6);
    expect(volumeCentroid?.[2]).toBeCloseTo(-4.5, 6);
  });

  it("far from the origin the digits of the coordinates are all that is lost", () => {
    near(whole(shifted(box([0, 0, 0], [2, 1, 1]), [4096, -8192, 1024])).volume, 2, 1e-15);
  });
});

describe("parts", () => {
  it("keeps parts apart and adds them up", () => {
    const { groups, whole: all } = of({ a: box([0, 0, 0], [1, 1, 1]), b: turnedOver(box([2, 0, 0], [4, 1, 1])), none: [] });
    expect(groups.map(({ area }) => area)).toEqual([6, 10, 0]);
    expect(groups.map(({ volume }) => volume)).toEqual([1, -2, 0]);
    expect(groups[2]).toMatchObject({ triangles: 0, bounds: { min: [0, 0, 0], max: [0, 0, 0] }, volumeCentroid: null });
    expect(all).toMatchObject({ area: 16, volume: -1, triangles: 24, bounds: { min: [0, 0, 0], max: [4, 1, 1] } });
  });

  it("knows the area vector of an open part", () => {
    expect(whole(box([0, 0, 0], [1, 2, 3]).slice(0, 90)).areaVector).toEqual([0, 0, -2]);
  });

  it("has zeros for nothing", () => {
    expect(of({}).whole).toMatchObject({
      area: 0,
      volume: 0,
      triangles: 0,
      areaVector: [0, 0, 0],
      bounds: { min: [0, 0, 0], max: [0, 0, 0] },
    });
    expect(whole([1, 1, 1, 1, 1, 1, 1, 1, 1])).toMatchObject({ area: 0, volume: 0, areaCentroid: [1, 1, 1], volumeCentroid: null });
  });
});

describe("order of the triangles", () => {
  it("changes no bit of any result", () => {
    const body = joined(
      ellipsoid(2.25, 0.9, 0.7, 24),
      shifted(torus(1, 0.25, 16), [3, 0.1, -0.7]),
      turnedOver(sphere(0.3, 12, [100, 3, 3])),
    );
    const reference = whole(body);
    for (const seed of [1, 2, 3, 4]) expect(whole(reordered(body, seed))).toEqual(reference);
  });
});

/** Whole triangles change places; one that began at another corner would round anew. */
function reordered(shape: Triangles, seed: number): Triangles {
  const next = random(seed);
  return Array.from({ length: shape.length / 9 }, (_, k) => ({ key: next(), triangle: shape.slice(9 * k, 9 * k + 9) }))
    .sort((a, b) => a.key - b.key)
    .flatMap(({ triangle }) => triangle);
}

describe("SteadySums", () => {
  it("adds what a plain sum loses, in any order", () => {
    const terms = [1e8, 1, -1e8, 1e-8, 2 ** -30, -(2 ** -30)];
    const sum = (order: number[]): number => {
      const sums = new SteadySums(1, 1e8, terms.length);
      for (const k of order) sums.add(0, terms[k]);
      return sums.value(0);
    };
    expect(sum([0, 1, 2, 3, 4, 5])).toBe(1 + 1e-8);
    expect(sum([3, 5, 2, 1, 4, 0])).toBe(1 + 1e-8);
  });

  it("is as good as exact for a million terms of mixed size and sign", () => {
    const next = random(8);
    const sums = new SteadySums(2, 4, 1_000_000);
    let exact = 0n;
    for (let k = 0; k < 1_000_000; k++) {
      // Multiples of 2^-52 below 4 in magnitude: exact as integers.
      const term = Math.round((next() - 0.5) * 2 ** 53) * 2 ** -50 * (k % 3 === 0 ? 2 ** -2 : 1);
      sums.add(k % 2, term);
      exact += BigInt(term * 2 ** 52);
    }
    expect(sums.total([0, 1])).toBe(Number(exact) / 2 ** 52);
  });
});
