import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { measures } from "../../../src/geometry/measures.js";
import { repair } from "../../../src/geometry/repair/repair.js";
import { surfaceMesh } from "../../../src/geometry/surface-mesh.js";
import { topologyOf } from "../../../src/geometry/topology.js";
import type { TriangleSet } from "../../../src/geometry/triangle-set.js";
import { car } from "../car.js";
import { bodyOf, box, joined, random, shifted, sphere, type Triangles, torus, turnedOver } from "../shapes.js";

const stateOf = (set: TriangleSet) => {
  const mesh = surfaceMesh(set);
  const topology = topologyOf(mesh, set.parts.length);
  const { whole } = measures(mesh, set.partOf, 0);
  return {
    open: topology.open.count,
    flipped: topology.flipped.count,
    insideOut: topology.insideOut.count,
    duplicate: topology.duplicate.count,
    volume: whole.volume,
    area: whole.area,
    triangles: set.partOf.length,
  };
};
const sound = { open: 0, flipped: 0, insideOut: 0, duplicate: 0 };
const kinds = (notes: { kind: string }[]): string[] => notes.map(({ kind }) => kind);

/** The same triangles with some of them damaged; which is drawn from a seed. */
function damaged(set: TriangleSet, seed: number): TriangleSet {
  const next = random(seed);
  const positions = set.positions.slice();
  const extra: number[] = [];
  const extraPart: number[] = [];
  const bits = new Int32Array(positions.buffer);
  for (let t = 0; t < set.partOf.length; t++) {
    const chance = next();
    if (chance < 0.1) {
      const second = positions.slice(9 * t + 3, 9 * t + 6);
      positions.copyWithin(9 * t + 3, 9 * t + 6, 9 * t + 9);
      positions.set(second, 9 * t + 6);
    } else if (chance < 0.15) {
      extra.push(...set.positions.subarray(9 * t, 9 * t + 9));
      extraPart.push(set.partOf[t]);
    } else if (chance < 0.2) {
      const corner = set.positions.subarray(9 * t, 9 * t + 3);
      extra.push(...corner, ...corner, ...set.positions.subarray(9 * t + 3, 9 * t + 6));
      extraPart.push(set.partOf[t]);
    } else if (chance < 0.25) {
      // A crack of one unit in the last place.
      const at = 9 * t + 3 * Math.floor(3 * next()) + Math.floor(3 * next());
      if (Math.abs(positions[at]) > 1e-3) bits[at] += next() < 0.5 ? 1 : -1;
    }
  }
  return {
    ...set,
    positions: Float32Array.from([...positions, ...extra]),
    partOf: Uint16Array.from([...set.partOf, ...extraPart]),
  };
}

describe("repair", () => {
  it("changes nothing about a sound body, and says so", () => {
    const { set } = car(4000);
    const { set: same, changes, left } = repair(set);
    expect(changes).toEqual([]);
    expect(left).toEqual([]);
    expect(same.positions).toEqual(set.positions);
    expect(same.partOf).toEqual(set.partOf);
    expect(same.parts).toBe(set.parts);
  });

  it("brings closed bodies back from turned, doubled and degenerate triangles and cracks of one rounding (seed 20261201)", () => {
    const bodies = [car(3000).set, bodyOf({ ball: sphere(1, 14), ring: shifted(torus(1, 0.25, 20), [4, 0, 0]) })];
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 2 ** 31 - 1 }), fc.constantFrom(...bodies), (seed, body) => {
        const whole = stateOf(body);
        const broken = damaged(body, seed);
        const mended = repair(broken);
        expect(stateOf(mended.set)).toMatchObject({ ...sound, triangles: whole.triangles });
        expect(Math.abs(stateOf(mended.set).volume / whole.volume - 1)).toBeLessThan(1e-5);
        expect(Math.abs(stateOf(mended.set).area / whole.area - 1)).toBeLessThan(1e-5);
        expect(kinds(mended.changes)).toContain("turned-over");
        expect(mended.left).toEqual([]);
        // Once is enough.
        const again = repair(mended.set);
        expect(again.changes).toEqual([]);
        expect(again.set.positions).toEqual(mended.set.positions);
      }),
      { seed: 20261201, numRuns: 25 },
    );
  });

  it("turns an inverted sphere, and a whole body that is inside out, cavity and all", () => {
    const ball = repair(bodyOf({ ball: turnedOver(sphere(1, 12)) }));
    expect(stateOf(ball.set).volume).toBeGreaterThan(4);
    expect(ball.changes).toMatchObject([{ kind: "turned-over", part: "ball", count: sphere(1, 12).length / 9 }]);

    const shell = { skin: box([0, 0, 0], [4, 4, 4]), cavity: turnedOver(box([1, 1, 1], [2, 2, 2])) };
    const right = repair(bodyOf(shell));
    expect(right.changes).toEqual([]);
    expect(right.left).toMatchObject([{ kind: "cavities-left", part: "cavity", count: 1 }]);
    expect(stateOf(right.set).volume).toBeCloseTo(63, 5);

    const onlySkin = repair(bodyOf({ ...shell, skin: turnedOver(shell.skin) }));
    expect(stateOf(onlySkin.set).volume).toBeCloseTo(63, 5);
    // A small inverted box beside the body is no cavity, nor one that reaches through its wall.
    for (const place of [
      [6, 0, 0],
      [3.5, 1, 1],
    ] as const) {
      const beside = repair(bodyOf({ skin: shell.skin, block: shifted(turnedOver(box([0, 0, 0], [1, 1, 1])), [...place]) }));
      expect(stateOf(beside.set).volume).toBeCloseTo(65, 5);
      expect(beside.left).toEqual([]);
    }
  });

  it("keeps the sense of the larger area of an open sheet", () => {
    const lidless = box([0, 0, 0], [4, 2, 1]).slice(0, 90);
    const turned = joined(lidless.slice(0, 72), turnedOver(lidless.slice(72)));
    const mended = repair(bodyOf({ tray: turned }));
    expect(mended.set.positions).toEqual(bodyOf({ tray: lidless }).positions.map((_, at) => mended.set.positions[at]));
    expect(stateOf(mended.set)).toMatchObject({ flipped: 0, open: 4 });
    expect(kinds(mended.changes)).toEqual(["turned-over"]);
    expect(mended.changes[0].count).toBe(2);
    expect(kinds(mended.left)).toEqual(["holes-left"]);
  });

  it("leaves a strip with a half twist, walls that share an edge, and flat triangles, and says so", () => {
    const strip: Triangles = [];
    const at = (k: number, side: number): number[] => {
      const angle = (2 * Math.PI * k) / 24;
      const tilt = angle / 2;
      const r = 2 + side * 0.4 * Math.cos(tilt);
      return [r * Math.cos(angle), r * Math.sin(angle), side * 0.4 * Math.sin(tilt)];
    };
    for (let k = 0; k < 24; k++) {
      const [a, b] = [at(k, -1), at(k, 1)];
      // After one turn the sides have changed places.
      const [c, d] = k === 23 ? [at(0, 1), at(0, -1)] : [at(k + 1, -1), at(k + 1, 1)];
      strip.push(...a, ...c, ...d, ...a, ...d, ...b);
    }
    const moebius = repair(bodyOf({ strip }));
    expect(moebius.changes).toEqual([]);
    expect(kinds(moebius.left)).toEqual(["holes-left", "one-sided-left"]);

    const fin = repair(bodyOf({ body: box([0, 0, 0], [1, 1, 1]), fin: [0, 0, 1, 1, 0, 1, 0.5, -1, 1] }));
    expect(kinds(fin.left)).toEqual(["holes-left", "non-manifold-left"]);
    expect(fin.changes).toEqual([]);

    const flat = joined(
      box([0, 0, 0], [1, 1, 1]).slice(18),
      [0, 0, 0, 0, 0, 1, 0, 1, 1, 0, 0, 0, 0, 1, 1, 0, 0.5, 0.5, 0, 0, 0, 0, 0.5, 0.5, 0, 1, 0],
    );
    expect(kinds(repair(bodyOf({ flat })).left)).toContain("flat-left");
  });

  it("removes second copies in the later part, and keeps a sheet's two sides", () => {
    const panel = box([0, 0, 0], [1, 1, 1]);
    const twice = repair(bodyOf({ first: panel, second: panel.slice(0, 36) }));
    expect(twice.changes).toMatchObject([{ kind: "duplicates-removed", part: "second", count: 4 }]);
    expect(twice.set.partOf.filter((part) => part === 0)).toHaveLength(12);
    expect(twice.set.parts.map(({ name }) => name)).toEqual(["first", "second"]);
    const sheet = [0, 0, 0, 1, 0, 0, 0, 1, 0];
    const both = repair(bodyOf({ sheet: joined(sheet, turnedOver(sheet)) }));
    expect(both.changes).toEqual([]);
    expect(kinds(both.left)).toEqual(["opposite-duplicates-left"]);
  });

  it("closes cracks within the tolerance that is given, never wider ones, and never spoils an edge", () => {
    const [left, right] = [box([0, 0, 0], [1, 1, 1]), box([1.001, 0, 0], [2, 1, 1])];
    const facing = (shape: Triangles, x: number): Triangles =>
      shape.filter((_, at) => ![0, 3, 6].every((k) => shape[9 * Math.floor(at / 9) + k] === x));
    const halves = bodyOf({ left: facing(left, 1), right: facing(right, 1.001) });
    expect(stateOf(halves).open).toBe(8);
    expect(repair(halves).changes).toEqual([]);
    const joinedUp = repair(halves, { tolerance: 0.002 });
    expect(stateOf(joinedUp.set)).toMatchObject({ ...sound });
    expect(joinedUp.changes[0]).toMatchObject({
      kind: "cracks-closed",
      count: 4,
      message: expect.stringContaining("8 of 8 open edges are closed"),
    });
    // So wide a tolerance would flatten the box.
    const spoiled = repair(halves, { tolerance: 1.2 });
    expect(stateOf(spoiled.set).triangles).toBe(stateOf(halves).triangles);
  });

  it("has nothing to do with no triangles", () => {
    expect(repair(bodyOf({ nothing: [] }))).toMatchObject({ changes: [], left: [] });
  });
});
