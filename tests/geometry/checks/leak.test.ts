import { describe, expect, it } from "vitest";
import { findLeak, type Leak } from "../../../src/geometry/checks/leak.js";
import { wallGrid, windingNumber } from "../../../src/geometry/checks/wall-grid.js";
import { measures } from "../../../src/geometry/measures.js";
import { surfaceMesh } from "../../../src/geometry/surface-mesh.js";
import { bodyOf, box, joined, moved, random, shifted, sphere, type Triangles, turned } from "../shapes.js";

function leakOf(shape: Triangles, cut: { axis: number; plane: number } | null = null): Leak {
  const set = bodyOf({ shape });
  const mesh = surfaceMesh(set);
  return findLeak(mesh, measures(mesh, set.partOf, 1).whole.bounds, cut, 80) as Leak;
}

/** A flat sheet in the plane x = 0 from (y0, z0) to (y1, z1), facing +x. */
const sheet = (y0: number, z0: number, y1: number, z1: number): Triangles => [
  0,
  y0,
  z0,
  0,
  y1,
  z0,
  0,
  y1,
  z1,
  0,
  y0,
  z0,
  0,
  y1,
  z1,
  0,
  y0,
  z1,
];

/** A box 4 x 1.8 x 1.4 whose front (x = 4) has a window from (y0, z0) to (y1, z1). */
function shellWithWindow(y0: number, z0: number, y1: number, z1: number): Triangles {
  const whole = box([0, -0.9, 0], [4, 0.9, 1.4]);
  const rest: Triangles = [];
  for (let at = 0; at < whole.length; at += 9)
    if (![0, 3, 6].every((k) => whole[at + k] === 4)) rest.push(...whole.slice(at, at + 9));
  const front = joined(sheet(-0.9, 0, 0.9, z0), sheet(-0.9, z1, 0.9, 1.4), sheet(-0.9, z0, y0, z1), sheet(y1, z0, 0.9, z1));
  return joined(rest, shifted(front, [4, 0, 0]));
}

describe("findLeak", () => {
  it("closed bodies do not leak", () => {
    expect(leakOf(box([0, -0.9, 0], [4, 0.9, 1.4]))).toEqual({ cell: 0.05, reached: false, holes: [] });
    expect(leakOf(sphere(1, 20)).reached).toBe(false);
  });

  it.each([
    [0.2, 0.3],
    [0.5, 0.5],
    [0.16, 0.8],
  ])("a window of %f by %f is found, with its place and its narrow side", (height, width) => {
    const leak = leakOf(shellWithWindow(0.1 - width / 2, 0.7 - height / 2, 0.1 + width / 2, 0.7 + height / 2));
    expect(leak.reached).toBe(true);
    const [hole] = leak.holes;
    expect(Math.abs(hole.centre[0] - 4)).toBeLessThan(0.2);
    expect(Math.abs(hole.centre[2] - 0.7)).toBeLessThan(0.1);
    expect(Math.abs(hole.centre[1] - 0.1)).toBeLessThan(width / 2 + 0.05);
    expect(Math.abs(hole.width - Math.min(height, width))).toBeLessThan(2.5 * leak.cell);
  });

  it("a slit narrower than a cell counts as closed", () => {
    expect(leakOf(shellWithWindow(-0.5, 0.72, 0.5, 0.73))).toMatchObject({ reached: false, holes: [] });
  });

  it("two windows are two holes, the wider first", () => {
    const mirrored = moved(shellWithWindow(-0.15, 0.5, 0.15, 0.8), ([x, y, z]) => [x / 2 + 2, y, z]);
    const other = turned(shellWithWindow(-0.3, 0.4, 0.3, 1), [0, 0, 1], Math.PI);
    const half: Triangles = [];
    for (const shape of [
      mirrored,
      shifted(
        moved(other, ([x, y, z]) => [x / 2, y, z]),
        [2, 0, 0],
      ),
    ])
      for (let at = 0; at < shape.length; at += 9)
        if (![0, 3, 6].every((k) => Math.abs(shape[at + k] - 2) < 1e-9)) half.push(...shape.slice(at, at + 9));
    const { holes } = leakOf(half);
    expect(holes.map(({ centre }) => Math.round(centre[0]) + 0)).toEqual([0, 4]);
    expect(holes[0].width).toBeGreaterThan(holes[1].width);
  });

  it("a sheet beside a closed body is no leak, nor is the space under a bridge", () => {
    expect(leakOf(joined(box([0, -0.9, 0], [4, 0.9, 1.4]), shifted(sheet(-0.5, 0, 0.5, 0.3), [4.2, 0, 1]))).reached).toBe(false);
    const bridge = joined(box([0, 0, 0], [0.3, 1, 1]), box([3, 0, 0], [3.3, 1, 1]), box([0, 0, 1], [3.3, 1, 1.2]));
    expect(leakOf(bridge).reached).toBe(false);
  });

  it("the open cut of a half lets nothing in, a hole elsewhere does", () => {
    const half = (shape: Triangles): Triangles => {
      const kept: Triangles = [];
      const pressed = moved(shape, ([x, y, z]) => [x, Math.max(y, 0), z]);
      for (let at = 0; at < pressed.length; at += 9)
        if (![1, 4, 7].every((k) => pressed[at + k] === 0)) kept.push(...pressed.slice(at, at + 9));
      return kept;
    };
    const cut = { axis: 1, plane: 0 };
    expect(leakOf(half(box([0, -0.9, 0], [4, 0.9, 1.4])), cut).reached).toBe(false);
    expect(leakOf(half(shellWithWindow(0.2, 0.4, 0.6, 0.9)), cut).holes[0].centre[0]).toBeCloseTo(4, 0);
  });

  it("copes with next to nothing", () => {
    expect(leakOf([])).toEqual({ cell: 0, reached: false, holes: [] });
    expect(leakOf([1, 1, 1, 1, 1, 1, 1, 1, 1]).reached).toBe(false);
    expect(leakOf([0, 0, 0, 4, 0, 0, 4, 1, 0]).reached).toBe(false);
    const next = random(3);
    expect(leakOf(Array.from({ length: 9 * 2000 }, () => next()))).toBeNull();
  });
});

describe("windingNumber", () => {
  it("is 1 inside, 0 outside, 2 inside of both of two bodies, and the solid angle's share through a hole", () => {
    const winding = (shape: Triangles, point: [number, number, number]): number => {
      const set = bodyOf({ shape });
      const mesh = surfaceMesh(set);
      return windingNumber(wallGrid(mesh, measures(mesh, set.partOf, 1).whole.bounds, 0.03), point);
    };
    const ball = sphere(1, 30);
    expect(winding(ball, [0.2, 0.3, -0.4])).toBeCloseTo(1, 2);
    expect(winding(ball, [0.9, 0.9, 0])).toBeCloseTo(0, 2);
    expect(winding(joined(ball, sphere(0.5, 30)), [0.1, 0, 0])).toBeCloseTo(2, 2);
    // Without its upper half a ball fills half of what its middle sees.
    const bowl: Triangles = [];
    for (let at = 0; at < ball.length; at += 9)
      if ((ball[at + 2] + ball[at + 5] + ball[at + 8]) / 3 < 0) bowl.push(...ball.slice(at, at + 9));
    expect(winding(bowl, [0, 0, 0])).toBeCloseTo(0.5, 2);
  });
});
