import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { commandOf, decompositionText, divisionsOf, meshSteps, solveSteps } from "../../src/run/steps.js";

test("the way of a case, with and without feature edges, on one rank and on several", () => {
  expect(meshSteps({ features: true }).map(({ name, args }) => [name, ...args].join(" "))).toEqual([
    "blockMesh",
    "surfaceFeatureExtract",
    "snappyHexMesh -overwrite",
    "renumberMesh -overwrite -constant",
    "checkMesh",
  ]);
  expect(meshSteps({ features: false }).map(({ name }) => name)).not.toContain("surfaceFeatureExtract");
  expect(solveSteps(1).map((step) => commandOf(step, "/opt/of bin", "/usr/bin/mpirun"))).toEqual([
    { program: "/opt/of bin/simpleFoam", args: [] },
  ]);
  expect(solveSteps(3).map((step) => commandOf(step, "/bin", "/usr/bin/mpirun"))).toEqual([
    { program: "/bin/decomposePar", args: ["-force", "-latestTime", "-decomposeParDict", "system/decomposition"] },
    { program: "/usr/bin/mpirun", args: ["-np", "3", "/bin/simpleFoam", "-parallel", "-decomposeParDict", "system/decomposition"] },
    { program: "/bin/reconstructPar", args: ["-latestTime"] },
  ]);
});

describe("division over ranks", () => {
  test.each([
    { ranks: 2, size: [40, 14, 9] as const, n: [2, 1, 1] },
    { ranks: 8, size: [40, 14, 9] as const, n: [4, 2, 1] },
    { ranks: 6, size: [10, 40, 9] as const, n: [1, 6, 1] },
    { ranks: 7, size: [40, 14, 9] as const, n: [7, 1, 1] },
  ])("$ranks ranks over $size: $n", ({ ranks, size, n }) => {
    expect(divisionsOf(ranks, size)).toEqual(n);
    expect(decompositionText(ranks, size)).toContain(`numberOfSubdomains ${ranks};`);
    expect(decompositionText(ranks, size)).toContain(`n (${n.join(" ")})`);
  });

  test("the blocks are as many as the ranks (seeded)", () => {
    const side = fc.double({ min: 0.1, max: 100, noNaN: true });
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 512 }), fc.tuple(side, side, side), (ranks, size) => {
        const [x, y, z] = divisionsOf(ranks, size);
        expect(x * y * z).toBe(ranks);
      }),
      { seed: 20263 },
    );
  });
});
