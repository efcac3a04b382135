import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { COPY, copiesOf } from "../../src/geometry/copies.js";
import { silhouette } from "../../src/geometry/silhouette/silhouette.js";
import { surfaceMesh } from "../../src/geometry/surface-mesh.js";
import { topologyOf } from "../../src/geometry/topology.js";
import { bodyOf, box, joined, random, type Triangles, turnedOver } from "./shapes.js";

/** The plain way: every triangle against every earlier one. */
function compared(corners: Uint32Array): number[] {
  const sense = (t: number, a: number): string => {
    const own = [...corners.subarray(3 * t, 3 * t + 3)];
    const from = own.indexOf(a);
    return [own[from], own[(from + 1) % 3], own[(from + 2) % 3]].join();
  };
  return Array.from({ length: corners.length / 3 }, (_, t) => {
    const own = [...corners.subarray(3 * t, 3 * t + 3)];
    if (new Set(own).size < 3) return COPY.none;
    let found: number = COPY.none;
    for (let other = 0; other < t; other++) {
      const theirs = [...corners.subarray(3 * other, 3 * other + 3)];
      if (new Set(theirs).size < 3 || !theirs.every((vertex) => own.includes(vertex))) continue;
      if (sense(other, own[0]) === sense(t, own[0])) found = COPY.same;
      else if (found === COPY.none) found = COPY.opposite;
    }
    return found;
  });
}

describe("copies of triangles", () => {
  it("are those that comparing each with each finds, few or many on an edge (seed 7)", () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 2 ** 31 - 1 }), fc.integer({ min: 4, max: 9 }), (seed, points) => {
        const next = random(seed);
        const soup: Triangles = [];
        for (let t = 0; t < 60; t++)
          for (let k = 0; k < 3; k++) {
            const vertex = Math.floor(points * next());
            soup.push(vertex, vertex ** 2, vertex ** 3);
          }
        const mesh = surfaceMesh(bodyOf({ soup }));
        expect([...copiesOf(mesh)]).toEqual(compared(mesh.corners));
      }),
      { seed: 7, numRuns: 60 },
    );
  });

  it("none in a box, the second skin of a doubled one, the other side of a sheet", () => {
    const one = box([0, 0, 0], [1, 1, 1]);
    const of = (shape: Triangles) => [...copiesOf(surfaceMesh(bodyOf({ shape })))];
    expect(of(one)).toEqual(new Array(12).fill(COPY.none));
    expect(of(joined(one, one)).slice(12)).toEqual(new Array(12).fill(COPY.same));
    expect(of(joined(one, turnedOver(one))).slice(12)).toEqual(new Array(12).fill(COPY.opposite));
  });

  it("and edges with 40 000 triangles are dealt with in one pass", () => {
    const fan: Triangles = [];
    for (let k = 0; k < 40_000; k++) {
      const angle = (2 * Math.PI * k) / 40_000;
      fan.push(0, 0, 0, 0, 0, 1, Math.cos(angle), Math.sin(angle), 0.5);
    }
    const mesh = surfaceMesh(bodyOf({ fan }));
    const begin = process.cpuUsage();
    const topology = topologyOf(mesh, 1);
    expect(topology).toMatchObject({ nonManifold: { count: 1 }, open: { count: 80_000 }, duplicate: { count: 0 } });
    // Square growth would take minutes.
    expect(silhouette(mesh, [0, 0, 1]).area).toBeCloseTo(0, 6);
    expect(process.cpuUsage(begin).user / 1e6).toBeLessThan(30);
  });
});
