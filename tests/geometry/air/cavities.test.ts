import { describe, expect, it } from "vitest";
import { type Cavities, enclosedCavities } from "../../../src/geometry/air/cavities.js";
import { type AirFlood, floodAir } from "../../../src/geometry/air/flood.js";
import { leakOf } from "../../../src/geometry/air/leak.js";
import { measures } from "../../../src/geometry/measures.js";
import { surfaceMesh } from "../../../src/geometry/surface-mesh.js";
import type { Vector3 } from "../../../src/geometry/vector.js";
import { cabWithHole } from "../cab.js";
import { bodyOf, box, joined, random, sphere, type Triangles, torus, turned, turnedOver } from "../shapes.js";

function cavitiesOf(shape: Triangles, cell: number, cut: { axis: number; plane: number } | null = null): Cavities {
  const set = bodyOf({ shape });
  const mesh = surfaceMesh(set);
  const flood = floodAir(mesh, measures(mesh, set.partOf, 1).whole.bounds, cut, cell) as AirFlood;
  leakOf(flood, mesh);
  return enclosedCavities(flood);
}

describe("enclosedCavities", () => {
  it("a closed body has its inside, with its volume within the doubt, however it lies (seed 8)", () => {
    const next = random(8);
    for (let n = 0; n < 12; n++) {
      const axis: Vector3 = n % 2 === 0 ? [0.6, 0.8, 0] : [0, 0.6, 0.8];
      const angle = 7 * next();
      for (const [shape, volume] of [
        [box([0, 0, 0], [1, 0.7, 0.4]), 0.28],
        [sphere(0.5, 24), (Math.PI / 6) * 0.99],
        [torus(0.5, 0.2, 40), 2 * Math.PI ** 2 * 0.5 * 0.04 * 0.99],
      ] as [Triangles, number][]) {
        const { inside, air, largest } = cavitiesOf(turned(shape, axis, angle), 0.05);
        expect([inside.count, air.count]).toEqual([1, 0]);
        expect(largest).toHaveLength(1);
        expect(Math.abs(largest[0].volume - volume)).toBeLessThan(1.3 * largest[0].doubt + 0.01 * volume);
        expect(largest[0].volume).toBe(inside.volume);
      }
    }
  });

  it("a place is inside, with its distance to the wall, and the bounds keep from the walls", () => {
    const [ball] = cavitiesOf(sphere(0.5, 24), 0.05).largest;
    expect(Math.hypot(...ball.place) + ball.clearance).toBeCloseTo(0.5, 2);
    expect(ball.clearance).toBeGreaterThan(0.3);
    for (const axis of [0, 1, 2]) {
      expect(ball.bounds.max[axis]).toBeGreaterThan(0.45);
      expect(ball.bounds.max[axis]).toBeLessThan(0.49);
      expect(ball.bounds.min[axis]).toBeLessThan(-0.45);
    }
  });

  it("air between two shells, and in a void within a solid, is told from the inside", () => {
    const hollow = joined(box([0, 0, 0], [1, 1, 1]), turnedOver(box([0.2, 0.2, 0.2], [0.8, 0.8, 0.8])));
    const { inside, air, largest } = cavitiesOf(hollow, 0.05);
    expect([inside.count, air.count]).toEqual([1, 1]);
    expect(Math.abs(air.volume - 0.216)).toBeLessThan(0.02);
    expect(Math.abs(inside.volume - (1 - 0.216))).toBeLessThan(0.05);
    expect(largest.map(({ kind }) => kind)).toEqual(["inside", "air"]);
  });

  it("a body inside out has an inside all the same", () => {
    expect(cavitiesOf(turnedOver(box([0, 0, 0], [1, 1, 1])), 0.05).inside.count).toBe(1);
  });

  it("a tunnel is air that is reached; shut by lids closer than half a cell it is enclosed", () => {
    // Four walls round a duct 0.4 x 0.4 along x, and lids a gap away from its ends.
    const duct = [
      box([0, 0, 0], [1, 0.6, 0.1]),
      box([0, 0, 0.5], [1, 0.6, 0.6]),
      box([0, 0, 0.05], [1, 0.1, 0.55]),
      box([0, 0.5, 0.05], [1, 0.6, 0.55]),
    ];
    expect(cavitiesOf(joined(...duct), 0.05).air.count).toBe(0);
    const lids = (gap: number): Triangles[] => [
      box([-0.2 - gap, 0, 0], [-gap, 0.6, 0.6]),
      box([1 + gap, 0, 0], [1.2 + gap, 0.6, 0.6]),
    ];
    const shut = cavitiesOf(joined(...duct, ...lids(0.02)), 0.05);
    expect(shut.air.count).toBe(1);
    expect(Math.abs(shut.air.volume - 0.16)).toBeLessThan(0.02);
    expect(cavitiesOf(joined(...duct, ...lids(0.07)), 0.05).air.count).toBe(0);
  });

  it("a hole narrower than a cell leaves the room closed, a wider one opens it", () => {
    const cab = cabWithHole([0, 0, 0], [0.66, 0.6, 0.72], 0.03, [0.3, 0.36]);
    expect(cavitiesOf(cab, 0.035).inside.count).toBe(1);
    expect(cavitiesOf(cab, 0.02).inside.count).toBe(0);
  });

  it("of a half body the halves of its spaces", () => {
    const { inside } = cavitiesOf(
      box([0, 0, 0], [1, 0.5, 0.4]).filter((_, at, all) => {
        const first = 9 * Math.floor(at / 9);
        return ![1, 4, 7].every((k) => all[first + k] === 0);
      }),
      0.04,
      { axis: 1, plane: 0 },
    );
    expect(inside.count).toBe(1);
    expect(Math.abs(inside.volume - 0.2)).toBeLessThan(0.02);
  });
});
