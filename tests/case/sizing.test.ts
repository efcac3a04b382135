import { describe, expect, test } from "vitest";
import { type MeshSizing, meshCost, predictCells } from "../../src/case/sizing.js";

/** The bluff body of 1.044 x 0.389 x 0.288 m, 0.05 m above the ground, that meshes were measured on with OpenFOAM v1912; half of it. */
const bluff: MeshSizing = {
  baseCell: 0.2,
  surfaceLevel: 5,
  domain: { min: [-2.6, 0, 0], max: [7, 1.6, 1.6] },
  boxes: [],
  areaAtLevel: new Map([[5, 1.5265 / 2]]),
  volume: 0.11076 / 2,
  boxSurface: 1.044 * 0.389 + 0.389 * 0.288 + 1.044 * 0.288,
  cellsBetweenLevels: 3,
  layers: 4,
};
describe("predicted cells", () => {
  // Counts of the meshes as they were made. Their layers covered 98 % of the surface, the prediction reckons with less.
  test.each([
    { name: "no boxes, no layers", mesh: { ...bluff, layers: 0 }, actual: 170_871 - 0.98 * 4 * 19_197, within: 0.07 },
    { name: "no boxes, 4 layers", mesh: bluff, actual: 170_871, within: 0.1 },
  ])("$name: within the stated share of the $actual cells that were made", ({ mesh, actual, within }) => {
    expect(Math.abs(predictCells(mesh) / actual - 1)).toBeLessThan(within);
  });

  test("without a body the domain is its background cubes", () => {
    const empty = { ...bluff, areaAtLevel: new Map([[5, 0]]), volume: 0, boxSurface: 0 };
    expect(predictCells(empty)).toBe(48 * 8 * 8);
  });

  test("a box alone costs what it holds", () => {
    const box = { name: "box", level: 1, box: { min: [0, 0, 0], max: [2, 1, 1] } } as MeshSizing["boxes"][number];
    const only = { ...bluff, areaAtLevel: new Map([[5, 0]]), volume: 0, boxSurface: 0, boxes: [box] };
    expect(predictCells(only)).toBe(Math.round(48 * 8 * 8 + (2 / 0.008) * 7));
  });

  test("finer surfaces, more layers, wider buffers and finer parts cost more", () => {
    const cells = predictCells(bluff);
    expect(predictCells({ ...bluff, surfaceLevel: 6, areaAtLevel: new Map([[6, 1.5265 / 2]]) })).toBeGreaterThan(2 * cells);
    expect(predictCells({ ...bluff, cellsBetweenLevels: 4 })).toBeGreaterThan(cells);
    expect(
      predictCells({
        ...bluff,
        areaAtLevel: new Map([
          [5, 0.7],
          [6, 1.5265 / 2 - 0.7],
        ]),
      }),
    ).toBeGreaterThan(cells);
  });
});

describe("cost of a mesh", () => {
  // Peak memory of the mesher as measured: M 586 MB, tiny 173 MB, motorcycle 919 MB.
  test.each([
    [303_430, 20_000, 6, 586],
    [41_930, 20_000, 6, 173],
    [374_434, 331_653, 67, 919],
  ])("memory for %i cells from %i triangles", (cells, triangles, parts, megabytes) => {
    expect(Math.abs(meshCost(cells, triangles, parts).memory / (megabytes * 1e6) - 1)).toBeLessThan(0.12);
  });

  test("many triangles or parts take longer, not more memory for each cell", () => {
    expect(meshCost(374_434, 331_653, 67)).toMatchObject({ busy: true, meshSeconds: 260 });
    expect(meshCost(300_000, 40_000, 12)).toMatchObject({ busy: false, iterationSeconds: 1.8 });
  });
});
