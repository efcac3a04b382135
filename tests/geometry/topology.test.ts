import { describe, expect, it } from "vitest";
import { edgeRings, NO_EDGE } from "../../src/geometry/edges.js";
import { surfaceMesh } from "../../src/geometry/surface-mesh.js";
import { topologyByPart, topologyOf } from "../../src/geometry/topology.js";
import { weld } from "../../src/geometry/weld.js";
import { bodyOf, box, joined, random, shifted, shuffled, sphere, type Triangles, torus, turnedOver } from "./shapes.js";

const topology = (parts: Record<string, Triangles>) => topologyOf(surfaceMesh(bodyOf(parts)), Object.keys(parts).length);
const counts = (shape: Triangles) => {
  const t = topology({ shape });
  return {
    open: t.open.count,
    nonManifold: t.nonManifold.count,
    flipped: t.flipped.count,
    degenerate: t.degenerate.count,
    duplicate: t.duplicate.count,
    shells: t.shells.count,
    insideOut: t.insideOut.count,
  };
};
const clean = { open: 0, nonManifold: 0, flipped: 0, degenerate: 0, duplicate: 0, shells: 1, insideOut: 0 };
const cube = box([0, 0, 0], [1, 1, 1]);

describe("weld", () => {
  it("joins equal corners, zero with minus zero, and nothing else", () => {
    const nextAfterOne = 1 + 2 ** -23;
    const { vertices, corners } = weld(Float32Array.from([0, 1, 2, -0, 1, 2, 0, nextAfterOne, 2, 0, 1, 2, -0, -0, -0, 0, 0, 0]));
    expect([...corners]).toEqual([0, 0, 1, 0, 2, 2]);
    expect([...vertices]).toEqual([0, 1, 2, 0, Math.fround(nextAfterOne), 2, 0, 0, 0]);
  });

  it("gives what a map of texts gives, for many corners in any order", () => {
    const positions = bodyOf({ shape: shuffled(joined(sphere(1, 14), torus(2, 0.5, 12)), 3) }).positions;
    const known = new Map<string, number>();
    const expected = Array.from({ length: positions.length / 3 }, (_, k) => {
      const key = positions
        .slice(3 * k, 3 * k + 3)
        .map((value) => value + 0)
        .join(" ");
      const vertex = known.get(key) ?? known.size;
      known.set(key, vertex);
      return vertex;
    });
    const { vertices, corners } = weld(positions);
    expect([...corners]).toEqual(expected);
    expect(vertices.length).toBe(3 * known.size);
  });

  it("leaves its input alone and takes a view into a larger array", () => {
    const wide = new Float32Array(30).fill(-0);
    const view = wide.subarray(3, 12);
    expect([...weld(view).corners]).toEqual([0, 0, 0]);
    expect(Object.is(wide[5], -0)).toBe(true);
  });
});

describe("edgeRings", () => {
  it("links what a map of texts links, also about the hub of a large fan", () => {
    const next = random(9);
    const fan = Array.from({ length: 200 }, (_, k) => [0, k + 1, k + 2]).flat();
    const thrown = Array.from({ length: 900 }, () => Math.floor(next() * 40));
    for (const corners of [fan, thrown]) {
      const expected = new Map<string, number[]>();
      for (let h = 0; h < corners.length; h++) {
        const t = h - (h % 3);
        const [a, b, c] = corners.slice(t, t + 3);
        if (a === b || b === c || c === a) continue;
        const ends = [corners[h], corners[t + ((h + 1) % 3)]].sort((p, q) => p - q).join(" ");
        expected.set(ends, [...(expected.get(ends) ?? []), h]);
      }
      const ring = edgeRings(Uint32Array.from(corners), 300);
      const listed = [...expected.values()];
      for (const edge of listed) for (const [k, h] of edge.entries()) expect(ring[h]).toBe(edge[(k + 1) % edge.length]);
      expect(ring.filter((h) => h !== NO_EDGE)).toHaveLength(listed.flat().length);
    }
  });
});

describe("topologyOf", () => {
  it("finds nothing wrong with closed bodies; Euler gives their genus", () => {
    for (const [shape, euler] of [
      [cube, 2],
      [sphere(1, 16), 2],
      [torus(1, 0.25, 12), 0],
    ] as const) {
      expect(counts(shape)).toEqual(clean);
      const mesh = surfaceMesh(bodyOf({ shape }));
      expect(mesh.vertices.length / 3 - mesh.corners.length / 2 + mesh.corners.length / 3).toBe(euler);
    }
  });

  it("counts open edges and measures their borders", () => {
    const found = topology({ box: cube.slice(0, 90), sheet: [5, 0, 0, 8, 4, 0, 8, 0, 0] });
    expect(found.open.count).toBe(4 + 3);
    expect([...found.open.perPart]).toEqual([4, 3]);
    expect(found.borderCount).toBe(2);
    expect(found.borders[0]).toEqual({ edges: 3, length: 12, centre: [6.5, 2, 0], span: 5, closed: true, parts: [1] });
    expect(found.borders[1]).toMatchObject({ edges: 4, length: 4, closed: true, parts: [0] });
    expect(found.borders[1].span).toBeCloseTo(Math.SQRT2, 12);
    expect([...found.bordersPerPart]).toEqual([1, 1]);
    expect(found.closedShells).toBe(0);
  });

  it("keeps the hundred longest borders and counts all", () => {
    const found = topology({
      strip: Array.from({ length: 130 }, (_, k) => [3 * k, 0, 0, 3 * k + 1 + k / 200, 0, 0, 3 * k, 1, 0]).flat(),
    });
    expect(found.borderCount).toBe(130);
    expect(found.borders).toHaveLength(100);
    const lengths = found.borders.map(({ length }) => length);
    expect(lengths).toEqual([...lengths].sort((a, b) => b - a));
    expect(found.borders[0].centre[0]).toBeCloseTo(3 * 129 + (1 + 129 / 200) / 2, 4);
  });

  it("joins borders that touch in a vertex, and tells one that ends at an edge of three triangles", () => {
    const bow: Triangles = [0, 0, 0, 1, 0, 0, 0, 1, 0, 0, 0, 0, -1, 0, 0, 0, -1, 0];
    expect(topology({ bow }).borders).toMatchObject([{ edges: 6, closed: true }]);
    const wall = (x: number, y: number): Triangles => [0, 0, 0, x, y, 0, 0, 0, 1];
    expect(topology({ fan: joined(wall(1, 0), wall(0, 1), wall(-1, -1)) }).borders).toMatchObject([{ edges: 6, closed: false }]);
  });

  it("counts part by part, with what would be open if a part were alone", () => {
    // Two triangles of the cube's top in a part of their own, and a fin of a third part on the edge of a second cube.
    const fin: Triangles = [5, 0, 0, 5, 0, 1, 4, -1, 0];
    const found = topologyByPart(
      topology({ sides: joined(cube.slice(0, 90), shifted(cube, [5, 0, 0])), lid: cube.slice(90), fin }),
    );
    expect(
      found.map(({ openEdges, openAlone, borders, nonManifoldEdges }) => [openEdges, openAlone, borders, nonManifoldEdges]),
    ).toEqual([
      [0, 4, 0, 1],
      [0, 4, 0, 0],
      [2, 3, 1, 0],
    ]);
    const alone = topologyByPart(topology({ cube: joined(cube, cube.slice(0, 9)), line: [1, 2, 3, 1, 2, 3, 4, 5, 6] }));
    expect(alone).toEqual([
      { openEdges: 0, openAlone: 0, borders: 0, nonManifoldEdges: 3, flippedEdges: 0, degenerate: 0, duplicate: 1, insideOut: 0 },
      { openEdges: 0, openAlone: 0, borders: 0, nonManifoldEdges: 0, flippedEdges: 0, degenerate: 1, duplicate: 0, insideOut: 0 },
    ]);
  });

  it("counts edges of three and four triangles once each", () => {
    expect(counts(joined(cube, box([1, 1, 0], [2, 2, 1])))).toEqual({ ...clean, nonManifold: 1, shells: 1 });
    const wall = (x: number, y: number): Triangles => [0, 0, 0, x, y, 0, 0, 0, 1];
    expect(counts(joined(wall(1, 0), wall(0, 1), wall(-1, -1)))).toMatchObject({ nonManifold: 1, open: 6, shells: 1 });
  });

  it("counts flipped neighbours", () => {
    const flippedOne = joined(cube.slice(0, 99), turnedOver(cube.slice(99)));
    expect(counts(flippedOne)).toEqual({ ...clean, flipped: 3 });
  });

  it("tells shells that face inwards", () => {
    const found = topology({ outer: box([-2, -2, -2], [2, 2, 2]), cavity: turnedOver(cube) });
    expect(found.insideOut.count).toBe(1);
    expect(found.insideOut.places).toEqual([[0.5, 0.5, 0.5]]);
    expect([...found.insideOut.perPart]).toEqual([0, 1]);
    expect(found.closedShells).toBe(2);
    expect(counts(turnedOver(torus(1, 0.25, 12)))).toEqual({ ...clean, insideOut: 1 });
  });

  it("counts triangles that are there twice, either way round", () => {
    expect(counts(joined(cube, cube.slice(0, 9)))).toMatchObject({ duplicate: 1, nonManifold: 3, open: 0 });
    expect(counts(joined(cube.slice(0, 9), turnedOver(cube.slice(0, 9))))).toMatchObject({ duplicate: 1, flipped: 0, open: 0 });
    expect(counts(joined(cube, cube)).duplicate).toBe(12);
  });

  it("counts triangles without area: a vertex twice, three in a line, lower than float32 can tell", () => {
    expect(counts([1, 2, 3, 1, 2, 3, 4, 5, 6]).degenerate).toBe(1);
    expect(counts([0.1, 0.1, 0.1, 0.2, 0.2, 0.2, 0.4, 0.4, 0.4]).degenerate).toBe(1);
    expect(counts([1000, 0, 0, 1001, 0, 0, 1002, 2e-5, 0]).degenerate).toBe(1);
    expect(counts([0, 0, 0, 1, 0, 0, 2, 2e-5, 0]).degenerate).toBe(0);
    // A vertex twice is no edge of its neighbours.
    expect(counts(joined(cube, [0, 0, 0, 0, 0, 0, 1, 0, 0]))).toEqual({ ...clean, degenerate: 1 });
  });

  it("counts shells by shared edges, not vertices", () => {
    expect(counts(joined(cube, shifted(cube, [1, 1, 1])))).toEqual({ ...clean, shells: 2 });
    expect(counts(joined(cube, shifted(cube, [3, 0, 0]), sphere(0.25, 8, [9, 0, 0]))).shells).toBe(3);
  });

  it("gives ten places at most, at the middle of the edge", () => {
    const found = topology({ strip: Array.from({ length: 20 }, (_, k) => [3 * k, 0, 0, 3 * k + 2, 0, 0, 3 * k, 1, 0]).flat() });
    expect(found.open.count).toBe(60);
    expect(found.open.places).toHaveLength(10);
    expect(found.open.places[0]).toEqual([1, 0, 0]);
    expect(found.borders).toHaveLength(20);
    expect(found.borderCount).toBe(20);
  });

  it("does not depend on the order of the triangles", () => {
    const mess = joined(cube.slice(0, 90), turnedOver(shifted(cube, [1, 1, 0])), torus(3, 0.5, 9), cube.slice(9, 27));
    const reference = counts(mess);
    for (const seed of [1, 2, 3]) expect(counts(shuffled(mess, seed))).toEqual(reference);
  });
});
