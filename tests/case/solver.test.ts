import { readdir, readFile } from "node:fs/promises";
import { join } from "node:path";
import { execa } from "execa";
import { describe, expect, test } from "vitest";
import { prepareStudy } from "../../src/case/prepare.js";
import { readRunCard } from "../../src/case/read-run-card.js";
import { buildLedger } from "../../src/ledger/build.js";
import { readCaseRecord } from "../../src/ledger/case-record.js";
import { boundaryPatches } from "../../src/openfoam/boundary.js";
import { parseDictionary } from "../../src/openfoam/dictionary.js";
import { findSolver } from "../../src/openfoam/environment.js";
import { readCheckMesh } from "../../src/openfoam/mesh-log.js";
import { readTable } from "../../src/openfoam/read-table.js";
import { cartParts, cartStudy } from "./cart.js";

// The real solver on a prepared case: a cart in about 6 000 cells, ten iterations.
const solver = await findSolver();

async function rowsOf(path: string, object: string): Promise<number[][]> {
  const name = `postProcessing/${object}/0/force.dat`;
  const table = readTable(await readFile(join(path, name)), name);
  const column = (label: string) => table.columns.find((each) => each.name === label)!.values;
  return ["total_x", "total_y", "total_z", "pressure_x", "viscous_x"].map((label) => [...column(label)]);
}

describe("a prepared case in the real solver", () => {
  test("every dictionary is read; Allrun meshes and solves; every part has its patch and its entry; the parts add up", async (context) => {
    if (solver === null) return context.skip("OpenFOAM is not installed");
    const study = await cartStudy({
      variants: { plain: cartParts },
      keys: { mesh: "{ cells: 6 thousand, y-plus: 300, layers: 2 }", solver: "{ start: cold, most-iterations: 10 }" },
    });
    const [{ path, plan }] = (await prepareStudy(study)) as [Awaited<ReturnType<typeof prepareStudy>>[number]];
    const card = (await readRunCard(path))!;
    const run = { cwd: path, env: { ...solver.env, PWD: path }, extendEnv: false };
    const dictionaries = Object.keys(card.hashes.files).filter(
      (file) => /^(0|constant|system)\//.test(file) && !file.endsWith(".stl"),
    );
    expect(dictionaries).toHaveLength(15);
    for (const file of dictionaries) {
      const { stdout } = await execa(join(solver.path, "foamDictionary"), ["-keywords", file], run);
      expect([file, stdout]).toEqual([file, expect.stringContaining("FoamFile")]);
    }

    await execa("/bin/sh", ["./Allrun"], { ...run, env: { ...run.env, PATH: `${solver.path}:${run.env.PATH ?? ""}` } });
    const boundary = join(path, "constant", "polyMesh", "boundary");
    const patches = boundaryPatches(parseDictionary(await readFile(boundary, "latin1"), boundary), boundary);
    expect(patches.filter(({ faces }) => faces > 0).map(({ name }) => name)).toEqual([
      "inlet",
      "outlet",
      "ground",
      "sky",
      "symmetry",
      "side",
      ...plan.parts.map(({ patch }) => patch),
    ]);
    const mesh = readCheckMesh(await readFile(join(path, "log.checkMesh")), "log.checkMesh");
    expect(mesh.failedChecks).toBe(0);
    expect(Math.abs(mesh.cells! / plan.mesh.predictedCells.value - 1)).toBeLessThan(0.25);

    const whole = await rowsOf(path, "whole");
    const parts = await Promise.all(plan.parts.map(({ patch }) => rowsOf(path, `part-${patch}`)));
    expect(whole[0]).toHaveLength(10);
    whole.forEach((column, k) => {
      column.forEach((value, row) => {
        const scale = Math.hypot(...whole.slice(0, 3).map((each) => each[row]!));
        expect(Math.abs(parts.reduce((sum, part) => sum + part[k]![row]!, 0) - value) / scale).toBeLessThan(1e-8);
      });
    });
    const coefficients = readTable(
      await readFile(join(path, "postProcessing/coefficients/0/coefficient.dat")),
      "postProcessing/coefficients/0/coefficient.dat",
    );
    // Half a body on half of the area: the coefficient is the vehicle's.
    const pressure = 0.5 * card.reference.density * card.reference.speed ** 2;
    const cd = (2 * whole[0]!.at(-1)!) / (pressure * card.reference.area);
    expect(coefficients.columns.find(({ name }) => name === "Cd")!.values.at(-1)! / cd).toBeCloseTo(1, 8);
    // Written when the run ends: y+ and the body's surface.
    expect(await readFile(join(path, "postProcessing/wall-distance/0/yPlus.dat"), "utf8")).toContain("hull");
    const surface = await readFile(join(path, "postProcessing/surface/10/body.vtk"), "utf8");
    expect(surface).toMatch(/^POLYGONS \d+ /m);
    expect(surface).toMatch(/^wallShearStress 3 /m);
  }, 120_000);

  test("Allrun eases a grid that is too coarse for a ladder into second order", async (context) => {
    if (solver === null) return context.skip("OpenFOAM is not installed");
    const study = await cartStudy({
      variants: { plain: cartParts },
      keys: { mesh: "{ cells: 5 thousand, y-plus: 300, layers: 0 }", solver: "{ most-iterations: 12 }" },
    });
    const [{ path }] = (await prepareStudy(study)) as [Awaited<ReturnType<typeof prepareStudy>>[number]];
    const run = { cwd: path, env: { ...solver.env, PWD: path, PATH: `${solver.path}:/usr/bin:/bin` }, extendEnv: false };
    await execa("/bin/sh", ["./Allrun"], run);
    const name = "postProcessing/coefficients/6/coefficient.dat";
    const table = readTable(await readFile(join(path, name)), name);
    expect([...table.columns[0]!.values]).toEqual([7, 8, 9, 10, 11, 12]);
    expect(await readdir(join(path, "first-order"))).toEqual(["log.simpleFoam", "system"]);
    await execa("/bin/sh", ["./Allclean"], run);
    expect((await readdir(path)).filter((each) => /^(log|postP|[1-9])/.test(each))).toEqual([]);
  }, 60_000);

  test("the realizable k-epsilon model: its dictionaries are read, it starts on its own, and y+ is that of wall functions", async (context) => {
    if (solver === null) return context.skip("OpenFOAM is not installed");
    const study = await cartStudy({
      variants: { plain: cartParts },
      keys: {
        mesh: "{ cells: 6 thousand, y-plus: 300, layers: 2 }",
        solver: "{ turbulence: realizable-k-epsilon, most-iterations: 40 }",
      },
    });
    const [{ path }] = (await prepareStudy(study)) as [Awaited<ReturnType<typeof prepareStudy>>[number]];
    const run = { cwd: path, env: { ...solver.env, PWD: path, PATH: `${solver.path}:/usr/bin:/bin` }, extendEnv: false };
    expect((await readdir(join(path, "0"))).sort()).toEqual(["U", "epsilon", "k", "nut", "p"]);
    for (const file of ["0/epsilon", "system/fvSchemes", "system/fvSolution", "constant/turbulenceProperties"])
      await execa(join(solver.path, "foamDictionary"), ["-keywords", file], run);
    await execa("/bin/sh", ["./Allrun"], run);
    const name = "postProcessing/coefficients/20/coefficient.dat";
    const { columns } = readTable(await readFile(join(path, name)), name);
    const drag = columns.find((each) => each.name === "Cd")!.values;
    expect(columns[0]!.values.at(-1)).toBe(40);
    expect(drag.at(-1)).toBeGreaterThan(0.1);
    expect(drag.at(-1)).toBeLessThan(2);
    expect(await readFile(join(path, "log.simpleFoam"), "utf8")).toContain("realizableKE");
    expect(buildLedger(await readCaseRecord(path)).closing.ok).toBe(true);
  }, 60_000);

  test("at yaw: air in by the front and one side, out by the others; wind axes agree with the forces; both signs mirror each other", async (context) => {
    if (solver === null) return context.skip("OpenFOAM is not installed");
    const study = await cartStudy({
      variants: { plain: cartParts },
      keys: {
        yaw: "[8 deg, -8 deg]",
        mesh: "{ cells: 8 thousand, y-plus: 300, layers: 0 }",
        solver: "{ start: cold, most-iterations: 30 }",
      },
    });
    const cases = await prepareStudy(study);
    expect(cases.map(({ path }) => path.split("/").at(-1))).toEqual(["plain-30ms-yaw8deg", "plain-30ms-yaw-8deg"]);
    const lasts: { cd: number; cs: number; cl: number }[] = [];
    for (const { path, plan, condition } of cases) {
      const env = { ...solver.env, PWD: path, PATH: `${solver.path}:${solver.env.PATH ?? ""}` };
      await execa("/bin/sh", ["./Allrun"], { cwd: path, env, extendEnv: false });
      const table = async (object: string) => {
        const name = `postProcessing/${object}/0/coefficient.dat`;
        const { columns } = readTable(await readFile(join(path, name)), name);
        return (label: string): number => columns.find(({ name: own }) => own === label)!.values.at(-1)!;
      };
      const [own, wind] = [await table("coefficients"), await table("wind-axes")];
      const yaw = plan.condition.yaw;
      expect([condition, wind("Cd")]).toEqual([
        condition,
        expect.closeTo(own("Cd") * Math.cos(yaw) + own("Cs") * Math.sin(yaw), 6),
      ]);
      expect(wind("Cs")).toBeCloseTo(own("Cs") * Math.cos(yaw) - own("Cd") * Math.sin(yaw), 6);
      // A box pushed from the left is pushed to the right.
      expect(Math.sign(own("Cs"))).toBe(Math.sign(yaw));
      const ledger = buildLedger(await readCaseRecord(path));
      expect(ledger.closing.ok).toBe(true);
      expect(ledger.total.cdWind).not.toBeNull();
      lasts.push({ cd: own("Cd"), cs: own("Cs"), cl: own("Cl") });
    }
    const [left, right] = lasts as [(typeof lasts)[0], (typeof lasts)[0]];
    expect(Math.abs(right.cs / left.cs + 1)).toBeLessThan(0.1);
    expect(Math.abs(right.cd / left.cd - 1)).toBeLessThan(0.1);
  }, 120_000);
});
