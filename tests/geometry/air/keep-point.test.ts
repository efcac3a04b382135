import { describe, expect, it } from "vitest";
import { type AirFlood, floodAir } from "../../../src/geometry/air/flood.js";
import { findKeepPoint, provesKeepPoint } from "../../../src/geometry/air/keep-point.js";
import { leakOf } from "../../../src/geometry/air/leak.js";
import { measures } from "../../../src/geometry/measures.js";
import { surfaceMesh } from "../../../src/geometry/surface-mesh.js";
import type { Vector3 } from "../../../src/geometry/vector.js";
import { cabWithHole } from "../cab.js";
import { bodyOf, box, joined, random, type Triangles, turnedOver } from "../shapes.js";

function floodOf(shape: Triangles, cell: number, cut: { axis: number; plane: number } | null = null): AirFlood {
  const set = bodyOf({ shape });
  const mesh = surfaceMesh(set);
  const flood = floodAir(mesh, measures(mesh, set.partOf, 1).whole.bounds, cut, cell) as AirFlood;
  leakOf(flood, mesh);
  return flood;
}

describe("provesKeepPoint", () => {
  const flood = floodOf(joined(box([0, 0, 0], [2, 1, 1]), turnedOver(box([0.2, 0.2, 0.2], [1.8, 0.8, 0.8]))), 0.05);

  it("outside, inside, and in a void, against the closed form (seed 9)", () => {
    const next = random(9);
    for (let n = 0; n < 400; n++) {
      const point: Vector3 = [-0.5 + 3 * next(), -0.5 + 2 * next(), -0.5 + 2 * next()];
      const beyond = [point[0] - 2, point[1] - 1, point[2] - 1].map((value, axis) => Math.max(value, -point[axis]));
      const outside = Math.max(...beyond) > 0;
      const proof = provesKeepPoint(flood, point);
      // The flood keeps three quarters of a cell away in the worst corner; nearer points may stay unproven, never wrongly proven.
      if (!outside || proof.cells > 0.9) expect(proof.outside).toBe(outside);
      if (outside) expect(proof.clearance).toBeCloseTo(Math.hypot(...beyond.map((value) => Math.max(0, value))), 5);
      expect(proof.cells).toBeCloseTo(proof.clearance / 0.05, 9);
      expect(proof.proven).toBe(proof.outside && proof.cells >= 2);
    }
  });

  it("far away is outside; what is no point is not", () => {
    expect(provesKeepPoint(flood, [-40, 3, 12])).toMatchObject({ outside: true, proven: true });
    expect(provesKeepPoint(flood, [Number.NaN, 0, 0]).proven).toBe(false);
  });

  it("two cells clear are wanted, and a twentieth of a cell to every face", () => {
    expect(provesKeepPoint(flood, [-0.09, 0.5, 0.5])).toMatchObject({ outside: true, proven: false });
    expect(provesKeepPoint(flood, [-0.11, 0.5, 0.5]).proven).toBe(true);
    const grid = { origin: [-4, -4, 0] as Vector3, cell: 0.8, levels: 3 };
    expect(provesKeepPoint(flood, [-3.5, -3.47, 0.53], grid)).toMatchObject({ offFaces: 0, proven: false });
    const off = provesKeepPoint(flood, [-3.44, -3.47, 0.53], grid);
    expect(off.offFaces).toBeCloseTo(0.3, 9);
    expect(off.proven).toBe(true);
  });

  it("a room that is reached through a hole hangs together with the outside, one behind a narrow hole does not", () => {
    const cab = cabWithHole([0, 0, 0], [0.66, 0.6, 0.72], 0.03, [0.3, 0.36]);
    expect(provesKeepPoint(floodOf(cab, 0.02), [0.3, 0.3, 0.3]).outside).toBe(true);
    expect(provesKeepPoint(floodOf(cab, 0.04), [0.3, 0.3, 0.3]).outside).toBe(false);
  });

  it("beyond the cut of a half nothing is proven", () => {
    const half = floodOf(box([0, 0, 0], [2, 1, 1]), 0.05, { axis: 1, plane: 0 });
    expect(provesKeepPoint(half, [-2, -1, 0.5]).proven).toBe(false);
    expect(provesKeepPoint(half, [-2, 1, 0.5]).proven).toBe(true);
  });
});

describe("findKeepPoint", () => {
  const domain = { min: [-4, -3.2, 0] as Vector3, max: [8, 3.2, 4] as Vector3 };

  it("upstream and high up, off every face down to six levels", () => {
    const grid = { origin: domain.min, cell: 0.8, levels: 6 };
    const found = findKeepPoint(floodOf(box([0, -0.9, 0.2], [4, 0.9, 1.4]), 0.05), domain, grid);
    expect(found?.proof.proven).toBe(true);
    expect(found?.proof.offFaces).toBeGreaterThan(0.05);
    expect(found?.point[0]).toBeCloseTo(-4 + 0.8 * 0.618034, 5);
    expect(found?.point[2]).toBeCloseTo(3.2 + 0.8 * 0.618034, 5);
  });

  it("moves on where the first place is taken, and gives up where all are", () => {
    const grid = { origin: domain.min, cell: 0.8, levels: 3 };
    const taken = findKeepPoint(floodOf(box([-4.5, -3.5, -1], [3, 3.5, 4.5]), 0.1), domain, grid);
    expect(taken?.point[0]).toBeGreaterThan(3.2);
    expect(taken?.proof.proven).toBe(true);
    expect(findKeepPoint(floodOf(box([-5, -4, -1], [9, 4, 5]), 0.2), domain, grid)).toBeNull();
    expect(findKeepPoint(floodOf(box([0, 0, 0], [1, 1, 1]), 0.2), { min: [0, 0, 0], max: [0.1, 9, 9] }, grid)).toBeNull();
  });
});
