import { readFileSync } from "node:fs";
import { join } from "node:path";
import { describe, expect, test } from "vitest";
import { type MeshCheck, readCheckMesh, readMesherLog } from "../../src/openfoam/mesh-log.js";

const logs = join(import.meta.dirname, "..", "fixtures", "histories", "logs");
const recorded = (name: string): MeshCheck => readCheckMesh(readFileSync(join(logs, `${name}.gz`)), name);

describe("mesh checks", () => {
  test("a recorded good mesh", () => {
    const check = recorded("checkMesh-ok");
    expect(check).toMatchObject({
      ok: true,
      failedChecks: 0,
      blocks: 1,
      points: 339051,
      faces: 945512,
      cells: 303430,
      regions: 1,
      bounds: { min: [-2.6, 0, -2.7071258e-35], max: [7, 1.6, 1.6] },
      maxAspectRatio: 10.042963,
      minVolume: 9.3332698e-9,
      totalVolume: 24.520626,
      maxNonOrthogonality: 64.252339,
      averageNonOrthogonality: 6.3773817,
      maxSkewness: 3.1772592,
      severelyNonOrthogonal: 0,
      failures: [],
    });
    expect(check.shapes).toMatchObject({ hexahedra: 289445, prisms: 1190, "tet wedges": 0, polyhedra: 12795 });
    expect(check.patches).toHaveLength(12);
    expect(check.patches[10]).toEqual({
      name: "body_slant",
      faces: 994,
      points: 1073,
      topology: "ok (non-closed singly connected)",
    });
  });

  test("a recorded mesh with a failed check, notes and 73 patches", () => {
    const check = recorded("checkMesh-failed");
    expect(check).toMatchObject({ ok: false, failedChecks: 1, failedBlocks: 1, maxSkewness: 8.1885452, severelyNonOrthogonal: 5 });
    expect(check.failures).toEqual([
      "Max skewness = 8.1885452, 32 highly skew faces detected which may impair the quality of the results",
    ]);
    expect(check.patches).toHaveLength(73);
    expect(check.patches.find(({ name }) => name === "body_radiator%53")).toMatchObject({
      faces: 85,
      topology: "multiply connected (shared edge)",
    });
  });

  test("several time blocks: the last counts, the failed ones are counted", () => {
    const block = (cells: number, end: string): string =>
      `Time = 1\n\nMesh stats\n    points:           8\n    cells:            ${cells}\n\n${end}\n\n`;
    expect(readCheckMesh(`${block(10, "Failed 2 mesh checks.")}${block(20, "Mesh OK.")}End\n`, "log")).toMatchObject({
      ok: true,
      cells: 20,
      blocks: 2,
      failedBlocks: 1,
    });
  });

  test("a sum line of newer versions is no patch; a stop leaves the result open", () => {
    const text = `Mesh stats\n    cells:            5\n\nChecking patch topology for multiply connected surfaces...\n    Patch    Faces    Points    Surface topology\n    inlet    6    9    ok (non-closed singly connected)\n    ".*"    6    9    ok (closed singly connected)\n\n--> FOAM FATAL ERROR: \nface 3 is wrong\n\nFOAM exiting\n`;
    const check = readCheckMesh(text, "log");
    expect(check).toMatchObject({ ok: null, fatal: "face 3 is wrong" });
    expect(check.patches.map(({ name }) => name)).toEqual(["inlet"]);
  });
});

describe("mesher", () => {
  const layers = (columns: string, row: string): string =>
    `patch                faces    layers avg thickness[m]\n                                     near-wall overall\n-----                -----    ------ --------- -------\nbody_frame:016%13    103      3      0.0047    0.01\n\nLayer addition iteration 0\n\npatch                faces    layers ${columns}\n                     [m]       [%]\n-----                -----    ------   ---       ---\nbody_frame:016%13    103      ${row}    0.001     21.4    \n\n`;
  const end = "Finished meshing without any errors\nFinished meshing in = 224.37 s.\nEnd\n";

  test("phases, cells, levels and layers", () => {
    const text = `Refined mesh : cells:100  faces:300  points:200\nCells per refinement level:\n    0\t60\n    2\t40\nRefined mesh in = 1.2 s.\nSnapped mesh : cells:100  faces:290  points:190\n${layers("  overall thickness", "2.79")}Layer mesh : cells:130  faces:390  points:260 unbalance:0.1\nCells per refinement level:\n    0\t60\n    1\t0\n    2\t70\nWriting mesh to time constant\n${end}`;
    expect(readMesherLog(text, "log")).toEqual({
      finished: true,
      illegalFaces: 0,
      phase: "layers",
      cells: 130,
      faces: 390,
      points: 260,
      levels: [60, 0, 70],
      layers: [{ patch: "body_frame:016%13", faces: 103, wanted: 3, layers: 2.79, thickness: 0.001, share: 21.4 }],
      limitReached: false,
      seconds: 224.37,
      fatal: null,
    });
  });

  test("the newest versions print the target beside the layers reached", () => {
    expect(readMesherLog(layers("(mesh,target)  overall thickness", "2.5 4") + end, "log").layers).toEqual([
      { patch: "body_frame:016%13", faces: 103, wanted: 4, layers: 2.5, thickness: 0.001, share: 21.4 },
    ]);
  });

  test("faces left in error and a cell limit that stopped the refinement", () => {
    const text = `No cells marked for refinement since reached limit 100000.\nSnapped mesh : cells:100  faces:290  points:190\nFinished meshing with 12 illegal faces (concave, zero area or negative cell pyramid volume)\nFinished meshing in = 3 s.\n`;
    expect(readMesherLog(text, "log")).toMatchObject({ finished: true, illegalFaces: 12, limitReached: true, phase: "snapped" });
  });

  test("a stop", () => {
    const text =
      "Refined mesh : cells:100  faces:300  points:200\n--> FOAM FATAL ERROR: \nno room\n\n    From function x\nFOAM exiting\n";
    expect(readMesherLog(text, "log")).toMatchObject({ finished: false, illegalFaces: null, phase: "refined", fatal: "no room" });
  });
});
