import { describe, expect, it } from "vitest";
import { cellFitOf } from "../../../src/geometry/checks/cell-fit.js";
import { gapsOf } from "../../../src/geometry/checks/gaps.js";
import { findSheets } from "../../../src/geometry/checks/sheets.js";
import { surfaceSamples } from "../../../src/geometry/checks/surface-samples.js";
import { thicknessOf } from "../../../src/geometry/checks/thickness.js";
import { surfaceMesh } from "../../../src/geometry/surface-mesh.js";
import { topologyOf } from "../../../src/geometry/topology.js";
import { car } from "../car.js";
import { bodyOf, box, shifted, shuffled, sphere, type Triangles, turned, turnedOver } from "../shapes.js";

const thin = (parts: Record<string, Triangles>, cell: number) =>
  thicknessOf(surfaceMesh(bodyOf(parts)), new Float64Array(Object.keys(parts).length).fill(cell)).thin;
const narrow = (parts: Record<string, Triangles>, cell: number) =>
  gapsOf(surfaceMesh(bodyOf(parts)), new Float64Array(Object.keys(parts).length).fill(cell)).narrow;
const fitted = (set: ReturnType<typeof bodyOf>, cell: number | number[], cut: { axis: number; plane: number } | null = null) => {
  const mesh = surfaceMesh(set);
  const cells = set.parts.map((_, k) => (typeof cell === "number" ? cell : cell[k]));
  return cellFitOf(mesh, topologyOf(mesh, cells.length).open.perPart, cells, cut);
};

/** Extruded along z from 0 to `height`: a profile, counter-clockwise, and its caps by the given triangles. */
function prism(profile: [number, number][], caps: [number, number, number][], height: number): Triangles {
  const at = (k: number, z: number): number[] => [...profile[k], z];
  const sides = profile.flatMap((_, k) => {
    const next = (k + 1) % profile.length;
    return [at(k, 0), at(next, 0), at(next, height), at(k, 0), at(next, height), at(k, height)].flat();
  });
  return [
    ...sides,
    ...caps.flatMap(([a, b, c]) => [...at(a, height), ...at(b, height), ...at(c, height)]),
    ...caps.flatMap(([a, b, c]) => [...at(a, 0), ...at(c, 0), ...at(b, 0)]),
  ];
}

/** A block 3 by 2 by 4 with a slot of width w and depth 1 from above, its middle at x = 1.5. */
const slotted = (w: number): Triangles => {
  const [l, r] = [1.5 - w / 2, 1.5 + w / 2];
  return prism(
    [
      [0, 0],
      [l, 0],
      [r, 0],
      [3, 0],
      [3, 2],
      [r, 2],
      [r, 1],
      [l, 1],
      [l, 2],
      [0, 2],
    ],
    [
      [0, 1, 8],
      [0, 8, 9],
      [1, 7, 8],
      [1, 2, 6],
      [1, 6, 7],
      [2, 3, 5],
      [2, 5, 6],
      [3, 4, 5],
    ],
    4,
  );
};

describe("surfaceSamples", () => {
  it("stands for the area of each part, whether all triangles are sampled or some", () => {
    const mesh = surfaceMesh(bodyOf({ ball: sphere(1, 40), block: box([3, 0, 0], [4, 2, 3]) }));
    for (const most of [200_000, 500]) {
      const { areas, triangles, areaOfPart, sampledTriangles, triangleCount } = surfaceSamples(mesh, 2, [0.1, 0.1], most);
      const sums = [0, 0];
      triangles.forEach((t, k) => {
        sums[mesh.partOf[t]] += areas[k];
      });
      expect(sums[0]).toBeCloseTo(areaOfPart[0], 9);
      expect(sums[1]).toBeCloseTo(22, 9);
      expect(areaOfPart[0]).toBeCloseTo(4 * Math.PI, 1);
      expect(sampledTriangles <= 1.2 * most).toBe(true);
      expect(sampledTriangles === triangleCount).toBe(most === 200_000);
    }
  });

  it("puts points on large triangles about a cell apart, inside them, with their middle in the middle", () => {
    const mesh = surfaceMesh(bodyOf({ sheet: [0, 0, 0, 4, 0, 0, 0, 3, 0] }));
    const { points, areas } = surfaceSamples(mesh, 1, [0.5]);
    expect(areas).toHaveLength(25);
    let [x, y] = [0, 0];
    for (let k = 0; k < 25; k++) {
      expect(areas[k]).toBeCloseTo(6 / 25, 12);
      expect(points[3 * k] > 0 && points[3 * k + 1] > 0 && points[3 * k] / 4 + points[3 * k + 1] / 3 < 1).toBe(true);
      x += points[3 * k] / 25;
      y += points[3 * k + 1] / 25;
    }
    expect([x, y].map((value) => Number(value.toFixed(9)))).toEqual([1.333333333, 1]);
  });

  it("chooses the same triangles in any order", () => {
    const chosen = (shape: Triangles): string[] => {
      const mesh = surfaceMesh(bodyOf({ shape }));
      const { points } = surfaceSamples(mesh, 1, [1], 400);
      return Array.from({ length: points.length / 3 }, (_, k) =>
        [...points.slice(3 * k, 3 * k + 3)].map((value) => value.toFixed(6)).join(" "),
      ).sort();
    };
    const shape = sphere(1, 30);
    expect(chosen(shuffled(shape, 3))).toEqual(chosen(shape));
  });
});

describe("thicknessOf", () => {
  it("measures a plate exactly, at any angle", () => {
    const plate = box([0, 0, 0], [2, 1, 0.03125]);
    for (const angle of [0, 0.4]) {
      const found = thin({ plate: turned(plate, [0.6, 0.8, 0], angle), block: box([5, 5, 5], [6, 6, 6]) }, 0.02);
      expect(found).toHaveLength(1);
      expect(found[0].part).toBe(0);
      expect(found[0].least).toBeCloseTo(0.03125, 6);
      expect(found[0].median).toBeCloseTo(0.03125, 6);
      // All but the rim.
      expect(found[0].share).toBeCloseTo(4 / (4 + 6 * 0.03125), 6);
    }
    expect(thin({ plate }, 0.0156)).toEqual([]);
    expect(thin({ plate }, 0.0157)).toHaveLength(1);
  });

  it("measures how much of a wedge is thin", () => {
    // 10° at the tip, 1 long: thinner than 0.1 over the last tenth over the tangent.
    const tangent = Math.tan(Math.PI / 18);
    const wedge = prism(
      [
        [0, 0],
        [1, 0],
        [1, tangent],
      ],
      [[0, 1, 2]],
      1,
    );
    const fine = refined(wedge, 5);
    const [found] = thin({ fine }, 0.05);
    // From the base across to the slope the ray is tangent · x long; from the slope, at 10°, to the base tangent · the way along the slope.
    const slope = Math.hypot(1, tangent);
    const area = 0.1 / tangent + 0.1 / tangent;
    const whole = 1 + slope + tangent + tangent;
    expect(Math.abs(found.share - area / whole)).toBeLessThan(0.03);
    expect(found.least).toBeLessThan(0.02);
  });

  it("takes the thickness of solids that overlap together, and what is inside them for nothing", () => {
    // A plate sunk into a block: what shows of it is no thinner than the block below.
    const block = box([0, 0, 0], [1, 1, 1]);
    const sunk = box([0.2, 0.2, 0.95], [0.8, 0.8, 1.01]);
    expect(thin({ block, sunk }, 0.05)).toEqual([]);
    expect(thin({ block, inner: box([0.2, 0.2, 0.4], [0.8, 0.8, 0.42]) }, 0.05)).toEqual([]);
    expect(thin({ block, apart: shifted(sunk, [0, 0, 1]) }, 0.05)).toHaveLength(1);
  });

  it("does not call thick bodies thin, nor right-angled edges, nor the gap beside them", () => {
    expect(thin({ a: sphere(1, 24), b: box([2, 0, 0], [3, 1, 1]), c: box([2, 0, 1.01], [3, 1, 2]) }, 0.05)).toEqual([]);
    expect(thin({ closed: [...car(8000).set.positions] }, 0.02)).toEqual([]);
  });
});

describe("gapsOf", () => {
  it("measures a slot in a block exactly, and its walls' area", () => {
    for (const w of [0.0625, 0.03125]) {
      const [gap, ...others] = narrow({ block: slotted(w) }, 0.04);
      expect(others).toEqual([]);
      expect([gap.a, gap.b]).toEqual([0, 0]);
      expect(gap.least).toBeCloseTo(w, 7);
      expect(gap.median).toBeCloseTo(w, 7);
      // Two walls of 1 by 4; the floor sees the sky.
      expect(gap.area).toBeCloseTo(8, 1);
      expect(gap.place[1]).toBeGreaterThan(1);
    }
    expect(narrow({ block: slotted(0.0625) }, 0.03)).toEqual([]);
  });

  it("measures the gap between parts, where they face each other", () => {
    // Half of the second one's face is opposite the first.
    const [gap, ...others] = narrow({ a: box([0, 0, 0], [1, 1, 1]), b: box([1.03125, 0.5, 0], [2, 1.5, 1]) }, 0.02);
    expect(others).toEqual([]);
    expect([gap.a, gap.b]).toEqual([0, 1]);
    expect(gap.least).toBeCloseTo(0.03125, 7);
    expect(gap.shareOfA).toBeCloseTo(0.5 / 6, 2);
    expect(gap.area).toBeCloseTo(1, 1);
  });

  it("keeps to the finer of two cells", () => {
    const set = bodyOf({ a: box([0, 0, 0], [1, 1, 1]), b: box([1.03, 0, 0], [2, 1, 1]) });
    expect(fitted(set, [0.02, 0.02]).gaps.narrow).toHaveLength(1);
    expect(fitted(set, [0.02, 0.01]).gaps.narrow).toEqual([]);
    expect(fitted(set, [0.01, 0.02]).gaps.narrow).toEqual([]);
  });

  it("finds none in corners, between touching or overlapping solids, inside solids, or in walls inside out", () => {
    const cube = box([0, 0, 0], [1, 1, 1]);
    expect(narrow({ a: cube, b: box([0.2, 0.2, 0.5], [0.8, 0.8, 1.5]) }, 0.1)).toEqual([]);
    expect(narrow({ a: cube, b: shifted(cube, [1, 0.3, 0.2]) }, 0.1)).toEqual([]);
    // Two blocks inside a third, a gap apart.
    expect(narrow({ a: cube, b: box([0.2, 0.2, 0.2], [0.8, 0.8, 0.45]), c: box([0.2, 0.2, 0.5], [0.8, 0.8, 0.8]) }, 0.1)).toEqual(
      [],
    );
    expect(narrow({ a: turnedOver(box([0, 0, 0], [1, 1, 0.1])) }, 0.1)).toEqual([]);
    expect(narrow({ a: sphere(1, 24) }, 0.1)).toEqual([]);
  });

  it("sees wheels and mirrors of a car beside its body only where they are near", () => {
    const { set } = car(20_000);
    const { gaps, open, thickness } = fitted(set, 0.02);
    expect(open).toEqual({ sheets: [], inward: [] });
    expect(thickness.thin.filter(({ share }) => share > 0.01)).toEqual([]);
    for (const { a, b } of gaps.narrow) expect(`${set.parts[a].name} ${set.parts[b].name}`).toMatch(/mirror|wheel/);
    expect(fitted(set, 0.002).gaps.narrow).toEqual([]);
  });
});

describe("findSheets", () => {
  const sheets = (set: ReturnType<typeof bodyOf>, cut: { axis: number; plane: number } | null = null) => {
    const mesh = surfaceMesh(set);
    const cells = set.parts.map(() => 0.1);
    return findSheets(mesh, topologyOf(mesh, cells.length).open.perPart, surfaceSamples(mesh, cells.length, cells), cut).sheets;
  };
  const plate: Triangles = [0, 0, 2, 1, 0, 2, 1, 1, 2, 0, 0, 2, 1, 1, 2, 0, 1, 2];
  const cube = box([0, 0, 0], [1, 1, 1]);

  it("tells a plate from a box with a hole and from a skin that needs its other parts", () => {
    const found = sheets(
      bodyOf({
        plate: shifted(plate, [9, 0, 0]),
        open: cube.slice(0, 99),
        lid: [3, 0, 1, 4, 0, 1, 4, 1, 1],
        tray: shifted(cube.slice(0, 90), [3, 0, 0]),
      }),
    );
    expect(found.map(({ part }) => part)).toEqual([0]);
    expect(found[0]).toMatchObject({ openEdges: 4, exposed: 1 });
  });

  it("sees a plate above a body as a sheet, whichever way it faces", () => {
    expect(sheets(bodyOf({ plate, cube })).map(({ part }) => part)).toEqual([0]);
    expect(sheets(bodyOf({ plate: turnedOver(plate), cube })).map(({ part }) => part)).toEqual([0]);
  });

  it("goes on in the mirrored half behind a cut", () => {
    // The right half of a box: open at y = 0.
    const half = cube.filter((_, k) => !allAt(cube, Math.floor(k / 9), 1, 0));
    expect(half).toHaveLength(90);
    expect(sheets(bodyOf({ half }), { axis: 1, plane: 0 })).toEqual([]);
    // A side alone has nothing behind it but its mirror image, whose outside it does not see.
    const side = cube.filter((_, k) => allAt(cube, Math.floor(k / 9), 1, 1));
    expect(sheets(bodyOf({ side }), null)).toHaveLength(1);
    expect(sheets(bodyOf({ side }), { axis: 1, plane: 0 })).toEqual([]);
  });

  it("does not take a hollow part for a sheet because of what is inside it", () => {
    const shell = box([0, 0, 0], [4, 1, 1]).slice(18);
    const found = sheets(bodyOf({ shell, rim: box([0.25, 0.25, 0.25], [3.75, 0.75, 0.75]) }));
    expect(found).toEqual([]);
  });

  it("tells a hollow part that is inside out from a sheet, and looks at its gaps from the outside", () => {
    const tube = turnedOver(box([0, 0, 0], [4, 0.05, 1]).slice(18));
    const set = bodyOf({ tube, other: box([0, 0.08, 0], [4, 1, 1]) });
    const found = fitted(set, 0.03);
    expect(found.open.sheets).toEqual([]);
    expect(found.open.inward.map(({ part, openEdges }) => [part, openEdges])).toEqual([[0, 4]]);
    expect(found.thickness.thin).toEqual([]);
    expect(found.gaps.narrow.map(({ a, b, least }) => [a, b, Number(least.toFixed(5))])).toEqual([[0, 1, 0.03]]);
  });

  it("has no thickness, and both its sides have gaps", () => {
    const set = bodyOf({ plate, above: shifted(cube, [0, 0, 2.02]), below: shifted(cube, [0, 0, 0.97]) });
    const found = fitted(set, 0.02);
    expect(found.open.sheets.map(({ part }) => part)).toEqual([0]);
    expect(found.thickness.thin).toEqual([]);
    expect(found.gaps.narrow.map(({ a, b, least }) => [a, b, Number(least.toFixed(5))])).toEqual([
      [0, 1, 0.02],
      [0, 2, 0.03],
    ]);
  });
});

describe("cellFitOf", () => {
  it("gives what the checks give one by one, in any order of the triangles", () => {
    const parts = {
      block: slotted(0.0625),
      plate: box([0, 2.03, 0], [3, 2.08, 4]),
      ball: sphere(0.4, 10, [6, 1, 1]),
    };
    const cells = [0.04, 0.04, 0.04];
    const mesh = surfaceMesh(bodyOf(parts));
    const whole = fitted(bodyOf(parts), cells);
    expect(whole.thickness).toEqual(thicknessOf(mesh, cells));
    expect(whole.gaps).toEqual(gapsOf(mesh, cells));
    expect(whole.thickness.thin.map(({ part }) => part)).toEqual([1]);
    expect(whole.gaps.narrow.map(({ a, b }) => [a, b])).toEqual([
      [0, 1],
      [0, 0],
    ]);
    const other = fitted(bodyOf({ ...parts, block: shuffled(parts.block, 3) }), cells);
    expect(other.gaps.narrow.map(({ area }) => Number(area.toFixed(6)))).toEqual(
      whole.gaps.narrow.map(({ area }) => Number(area.toFixed(6))),
    );
  });

  it("has nothing to say of nothing", () => {
    const found = fitted(bodyOf({}), 1);
    expect([found.open.sheets, found.thickness.thin, found.gaps.narrow]).toEqual([[], [], []]);
  });
});

/** Each triangle cut into four, `times` times. */
function refined(shape: Triangles, times: number): Triangles {
  if (times === 0) return shape;
  const result: Triangles = [];
  for (let at = 0; at < shape.length; at += 9) {
    const [a, b, c] = [0, 3, 6].map((k) => shape.slice(at + k, at + k + 3));
    const middle = (p: number[], q: number[]): number[] => p.map((value, k) => (value + q[k]) / 2);
    const [ab, bc, ca] = [middle(a, b), middle(b, c), middle(c, a)];
    result.push(...a, ...ab, ...ca, ...ab, ...b, ...bc, ...ca, ...bc, ...c, ...ab, ...bc, ...ca);
  }
  return refined(result, times - 1);
}

const allAt = (shape: Triangles, t: number, axis: number, value: number): boolean =>
  [0, 1, 2].every((k) => shape[9 * t + 3 * k + axis] === value);
