import { existsSync, readdirSync, readFileSync } from "node:fs";
import { join, relative, resolve } from "node:path";
import { describe, expect, test } from "vitest";
import { readHistoryFile } from "../../src/history/read-file.js";
import { parseDictionary } from "../../src/openfoam/dictionary.js";
import { readMesherLog } from "../../src/openfoam/mesh-log.js";
import { readTables } from "../../src/openfoam/read-table.js";
import { readSolverLog } from "../../src/openfoam/solver-log.js";

/** Outputs of other people's runs, which may not be part of the project: they lie beside the checkout where they were collected. */
const corpus = resolve(import.meta.dirname, "..", "..", "..", "shared", "corpus");
const present = existsSync(corpus);

function files(folder: string): string[] {
  return readdirSync(folder, { withFileTypes: true }).flatMap((entry) => {
    const path = join(folder, entry.name);
    return entry.isDirectory() ? files(path) : [relative(corpus, path)];
  });
}

/** file, layout, dialect, rows, one column and its last value as it stands in the file */
const tables: [file: string, layout: string, dialect: string, rows: number, column: string, last: number][] = [
  ["esi-v2012/airfoil2d-transition/postProcessing/forceCoeffs/0/coefficient.dat", "coefficients", "C6", 853, "Cd", 4.429983e-2],
  [
    "esi-v2012/airfoil2d-transition/postProcessing/residuals/0/solverInfo.dat",
    "solver-information",
    "",
    853,
    "Uy_initial",
    9.996e-6,
  ],
  ["esi-v2012/airfoil2d-transition/postProcessing/yPlus/0/yPlus.dat", "y-plus", "", 3, "average", 1.400094],
  ["esi-v2012/overset-two-airfoils/postProcessing/forces_airfoilLeft/0/force.dat", "forces", "F5", 3, "Time", 0.00036758],
  ["esi-v2012/overset-two-airfoils/postProcessing/forces_airfoilLeft/0/force_0.dat", "forces", "F5", 7, "total_x", 0],
  ["esi-v2012/overset-two-airfoils/postProcessing/forces_airfoilLeft/0/moment.dat", "moments", "F5", 3, "total_x", 0],
  ["esi-v2012/overset-two-airfoils/postProcessing/forces_airfoilLeft/0/moment_0.dat", "moments", "F5", 7, "total_x", 0],
  ["esi-v2012/overset-two-airfoils/postProcessing/yPlus/0/yPlus_0.dat", "y-plus", "", 1, "min", 13.434245593],
  ["esi-v2412/car-four-wheels/postProcessing/forceCoeffs1/0/coefficient.dat", "coefficients", "C7", 430, "Cs(r)", 2.260641e-5],
  ["esi-v2412/car-four-wheels/postProcessing/forceCoeffs1/0/coefficient_0.dat", "coefficients", "C7", 500, "Cl", 8.9478e-4],
  [
    "esi-v2412/car-four-wheels/postProcessing/forceCoeffs1/0/coefficient_0.dat.other-commit",
    "coefficients",
    "C7",
    500,
    "Cl",
    6.228396e-4,
  ],
  ["esi-v2412/car-four-wheels/postProcessing/solverInfo1/0/solverInfo.dat", "solver-information", "", 430, "p_iters", 3],
  ["esi-v2412/car-four-wheels/postProcessing/solverInfo1/0/solverInfo_0.dat", "solver-information", "", 500, "p_iters", 3],
  ["esi-v2412/backstep/postProcessing/solverInfo/0/solverInfo.dat", "solver-information", "", 2000, "p_final", 1.88906e-6],
  ["esi-v2412/backstep/postProcessing/yPlus/0/yPlus.dat", "y-plus", "", 100, "max", 0.8033794],
  ["extend-3.2/quad-in-fluid/forces/0/forces.dat", "forces", "F1", 80, "Time", 0.8],
  ["foundation-13/airfoil-diverging/postProcessing/forceCoeffs/0/forceCoeffs.dat", "coefficients", "C4", 41, "Cl", -39.6234479],
  ["foundation-13/airfoil-diverging/postProcessing/residuals/0/residuals.dat", "residuals", "", 41, "Uy", 1.59501665e-3],
  ["foundation-13/airfoil-diverging/postProcessing/yPlus/0/yPlus.dat", "y-plus", "", 41, "max", 0.0967539354],
  ["foundation-13/baja-car/postProcessing/forces/0/forceCoeffs.dat", "coefficients", "C4", 1001, "Cd", 1.464456],
  ["foundation-13/baja-car/postProcessing/forces/1/forceCoeffs.dat", "coefficients", "C4", 1000, "Cd", 1.452868],
  [
    "foundation-13/flat-plate/studies/Tu1/postProcessing/wallShearStress/0/wallShearStress.dat",
    "wall-shear",
    "",
    2,
    "max_x",
    5.104684e-2,
  ],
  ["foundation-2.3-2.4/airfoil2d-restart/postProcessing/airfoil/0/forces.dat", "forces", "F3", 49, "pressure_x", -95.17755],
  ["foundation-2.3-2.4/airfoil2d-restart/postProcessing/airfoil/0/forces_5.dat", "forces", "F3", 42, "pressure_x", -94.67038],
  ["foundation-2.3-2.4/airfoil2d/postProcessing/airfoil/0/forces.dat", "forces", "F3", 70, "viscous_x", 3.097039],
  ["foundation-2.3-2.4/cloud-test/postProcessing/forceCoeffs1/0/forces.dat", "forces", "F3", 5, "pressure_z", 36.10831314],
  ["foundation-2.3-2.4/multielement-start-1/postProcessing/wings/1/forces.dat", "forces", "F3", 1123, "Time", 1.477565],
  ["foundation-2.3-2.4/te-round/postProcessing/airfoil/0/forces.dat", "forces", "F3", 1115, "pressure_y", 0.4128779],
  ["foundation-2.3-2.4/vortex-shedding/postProcessing/forceCoeffs/0/forceCoeffs.dat", "coefficients", "C3", 1600, "Cl", -0.3407556],
  ["foundation-2.3-2.4/vortex-shedding/postProcessing/forces/0/forces.dat", "forces", "F3", 1114, "viscous_x", 0.439593],
  ["foundation-9/motorbike/postProcessing/forceCoeffs1/0/forceCoeffs.dat", "coefficients", "C4", 501, "Cd", 0.4138655],
  ["foundation-9/airfoil2d/postProcessing/airfoil/0/forces.dat", "forces", "F4", 121, "pressure_y", 92.40916],
  [
    "foundation-9/hydrofoil-vof/aerofoilNACA0012-c/postProcessing/aerofoil/0/forces.dat",
    "forces",
    "F4",
    1519,
    "pressure_z",
    634.5943,
  ],
  [
    "foundation-9/hydrofoil-vof/aerofoilNACA0012-c/postProcessing/forces/0/forceCoeffs.dat",
    "coefficients",
    "C4",
    51,
    "Cm",
    -0.01192618,
  ],
  ["foundation-9/hydrofoil-vof/postProcessing/residuals/0/residuals.dat", "residuals", "", 1763, "omega", 3.9634e-5],
  ["local-v1912/derived/crlf__foundation-4-forceCoeffs.dat", "coefficients", "C4 or C5", 500, "Cl(r)", -0.1243842],
  // One row less than begun: the last line is cut.
  ["local-v1912/derived/truncated-mid-number__esi-v2512-coefficient.dat", "coefficients", "C7", 499, "Cd", 0.4170213],
  ["local-v1912/derived/truncated-mid-vector__foundation-9-forces.dat", "forces", "F4", 120, "pressure_x", 3.843765],
];

const refused: Record<string, string> = {
  "local-v1912/derived/nul-padded-tail__esi-v2512-coefficient.dat": "nul-bytes",
  "local-v1912/airfoil-restarts/postProcessing/resid/10/solverInfo.dat": "no-table",
};

const logs: [file: string, end: string, lastTime: number | null, reason: RegExp][] = [
  ["esi-v2012/fatal-io/log.pimpleFoam", "failed", null, /^fatal error before the first step: Entry 'logStdMax' not found/],
  [
    "esi-v2012/mpi-abort/log.pimpleFoam",
    "failed",
    1e-5,
    /^fatal error at time 0.00001: Unknown asymmetric matrix solver type smmothSolver/,
  ],
  ["esi-v2012/overset-two-airfoils/pimpleFoam.log", "stopped", 0.00507846, /without an error/],
  [
    "esi-v2012/pitching-foil-crash/log.pimpleFoam",
    "failed",
    0.0019,
    /^floating-point trap at time 0.0019 in Foam::symGaussSeidelSmoother/,
  ],
  ["esi-v2012/pitching-foil-crash/log.pimpleFoam.other-commit", "failed", 0.0019, /^floating-point trap/],
  ["esi-v2012/rotor-transient/pimpleFoam.log", "failed", 1.27, /^floating-point trap/],
  ["esi-v2412/backstep/log.txt", "ended", 2000, /ended at time 2000, at its limit/],
  ["foundation-13/baja-car/log.simpleFoam", "ended", 1000, /at its limit/],
  ["foundation-13/flat-plate/log.foamRun", "ended", 268, /criterion was met after 268 iterations/],
  ["foundation-2.3-2.4/airfoil2d/log.simpleFoam", "ended", 350, /criterion was met after 350 iterations/],
  ["foundation-9/motorbike/log.simpleFoam", "ended", 500, /at its limit/],
  ["foundation-9/motorbike-2proc-crash/log.simpleFoam", "failed", null, /attempt to run parallel on 1 processor/],
  ["foundation-9/airfoil2d/log.simpleFoam", "ended", 600, /at its limit/],
  ["foundation-9/airfoil2d-converged/log.simpleFoam", "ended", 313, /criterion was met after 313 iterations/],
  ["local-v1912/airfoil-nan/log.fpe", "failed", 100, /^floating-point trap at time 100/],
  ["local-v1912/airfoil-nan/log.nan", "failed", 100, /the run diverged\): Wrong token type/],
  ["local-v1912/airfoil-nan/log.nan2", "ended", 420, /the run diverged$/],
];

describe.skipIf(!present)("outputs of other people's runs (only where the corpus lies beside the checkout)", () => {
  const bytesOf = (file: string): Buffer => readFileSync(join(corpus, file));

  test.each(tables)("%s is a table of %s %s with %i rows", (file, layout, dialect, rows, column, last) => {
    const [table] = readTables(bytesOf(file), file);
    expect([table!.layout, table!.dialect, table!.rows]).toEqual([layout, dialect, rows]);
    expect(table!.columns.find(({ name }) => name === column)?.values[rows - 1]).toBe(last);
  });

  test("every table of the corpus is read or refused with the right reason", async () => {
    const all = files(corpus).filter((file) => /\.dat(?:\.|$)/.test(file));
    expect(all.length).toBeGreaterThan(100);
    for (const file of all) {
      const reason = refused[file];
      if (reason !== undefined) {
        await expect(readHistoryFile(join(corpus, file)), file).rejects.toMatchObject({ kind: "input", code: reason });
        continue;
      }
      for (const history of await readHistoryFile(join(corpus, file))) {
        expect(history.layout, file).not.toBe("unknown");
        for (const { values } of history.columns) expect(values.length, file).toBe(history.rows);
      }
    }
  });

  test("all-zero and diverged histories are named as errors", async () => {
    const codes = async (file: string): Promise<string[]> =>
      (await readHistoryFile(join(corpus, file))).flatMap(({ findings }) =>
        findings.filter(({ severity }) => severity === "error").map(({ code }) => code),
      );
    expect(await codes("extend-3.2/quad-in-fluid/forces/0/forces.dat")).toEqual(["all-zero", "all-zero"]);
    expect(await codes("local-v1912/airfoil-nan/postProcessing/coeffsNone/0/coefficient.dat")).toEqual(["all-zero"]);
    expect(await codes("local-v1912/airfoil-nan/postProcessing/forcesWing/0/force.dat")).toEqual(["not-finite"]);
    expect(await codes("foundation-9/motorbike/postProcessing/forceCoeffs1/0/forceCoeffs.dat")).toEqual([]);
  });

  test.each(logs)("%s: %s at %d", (file, end, lastTime, reason) => {
    const log = readSolverLog(bytesOf(file), file);
    expect([log.end, log.lastTime]).toEqual([end, lastTime]);
    expect(log.reason).toMatch(reason);
  });

  test.each([
    [
      "esi-v2012/mpi-abort/log.snappyHexMesh",
      { finished: true, illegalFaces: 0, phase: "snapped", cells: 171728, seconds: 17.92, fatal: null },
    ],
    [
      "foundation-9/motorbike/log.snappyHexMesh",
      { finished: true, phase: "layers", cells: 352499, levels: [1018, 1867, 5356, 9824, 134898, 23832, 175704] },
    ],
    ["foundation-9/motorbike-2proc-crash/log.snappyHexMesh", { finished: false, cells: null, illegalFaces: null }],
  ])("%s", (file, expected) => {
    expect(readMesherLog(bytesOf(file), file)).toMatchObject(expected);
  });

  test("layers that a mesh reached, patch by patch", () => {
    const file = "foundation-9/motorbike/log.snappyHexMesh";
    const { layers } = readMesherLog(bytesOf(file), file);
    expect(layers).toHaveLength(68);
    expect(layers[0]).toEqual({ patch: "lowerWall", faces: 5349, wanted: 1, layers: 0.987, thickness: 0.0244, share: 92.7 });
  });

  test("state dictionaries", () => {
    for (const file of files(corpus).filter((name) => name.endsWith("functionObjectProperties"))) {
      expect(parseDictionary(bytesOf(file).toString(), file).entries.size).toBeGreaterThan(0);
    }
  });
});
