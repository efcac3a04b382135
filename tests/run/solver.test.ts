import { cp, readdir, readFile, writeFile } from "node:fs/promises";
import { join } from "node:path";
import { describe, expect, type TestContext, test } from "vitest";
import { findSolver } from "../../src/openfoam/environment.js";
import { HistoryFollower } from "../../src/run/history-follower.js";
import { type RunOptions, runCases } from "../../src/run/run-cases.js";
import { exists, listener } from "./listening.js";
import { smallCase, smallControl } from "./small-case.js";

// The real solver on a box of about 2 800 cells: what the stand-in programs claim, the real ones do.
const solver = await findSolver();

function options(context: TestContext, more: RunOptions = {}): RunOptions {
  if (solver === null) return context.skip("OpenFOAM is not installed");
  if ((more.cores ?? 1) > 1 && solver.mpirun === null) return context.skip("mpirun is not installed");
  return { solver, cores: 1, pollMilliseconds: 50, leastCellsPerRank: 100, ...more };
}

async function cdAt(path: string, iteration: number): Promise<number> {
  const follower = new HistoryFollower(path);
  await follower.poll();
  const row = follower.time.indexOf(iteration);
  // The first row of a case that was started on its ladder is that of iteration 2.
  expect(row).toBe(iteration - follower.time[0]!);
  return follower.cd[row]!;
}

const ignore = () => undefined;

describe("the real solver", () => {
  test("meshes and solves on one core and on two ranks alike, goes on after Ctrl-C as if nothing had been", async (context) => {
    const one = options(context);
    const two = options(context, { cores: 2 });
    // The solver refuses paths with blanks and quotes; the divided case has one.
    const [whole, divided, interrupted] = await Promise.all([
      smallCase(),
      smallCase({ folder: `the box's case, "30 m s"` }),
      smallCase(),
    ]);

    const told = listener();
    const [serial] = await runCases([whole], { ...one, mostIterations: 30 }, told.tell);
    expect(serial).toMatchObject({ state: "stopped-at-limit", iterations: 30 });
    expect(told.remarks()).toEqual([]);
    const state = JSON.parse(await readFile(join(whole, "run-state.json"), "utf8"));
    expect(state.mesh.cells).toBeGreaterThan(2500);
    expect(state.mesh.cells).toBeLessThan(3100);
    expect(await readFile(join(whole, "system/controlDict"), "utf8")).toBe(smallControl);
    expect(await readFile(join(whole, "log.simpleFoam"), "utf8")).not.toContain("PWD is not the cwd");
    // A box near the ground, far too coarsely meshed: between a flat plate's 1.2 and a streamlined body.
    const cd = await cdAt(whole, 30);
    expect(cd).toBeGreaterThan(0.7);
    expect(cd).toBeLessThan(1.3);

    const [parallel] = await runCases([divided], { ...two, mostIterations: 30 }, ignore);
    expect(parallel).toMatchObject({ state: "stopped-at-limit", iterations: 30 });
    expect((await readdir(divided)).filter((name) => name.startsWith("processor"))).toEqual([]);
    expect(await exists(join(divided, "30", "U"))).toBe(true);
    expect(await cdAt(divided, 30)).toBeCloseTo(cd, 2);

    const abort = new AbortController();
    const stopping = listener((event) => event.event === "iteration" && event.iteration >= 25 && abort.abort());
    const [stopped] = await runCases([interrupted], { ...two, mostIterations: 5000, signal: abort.signal }, stopping.tell);
    expect(stopped!.state).toBe("interrupted");
    expect(stopped!.iterations).toBeGreaterThanOrEqual(25);
    const written = Number(/goes on from (\d+)$/.exec(stopped!.reason)?.[1]);
    expect(written % 10).toBe(0);
    expect(written).toBeGreaterThan(stopped!.iterations - 11);
    const most = written + 20;
    const [resumed] = await runCases([interrupted], { ...one, mostIterations: most }, ignore);
    expect(resumed).toMatchObject({ state: "stopped-at-limit", iterations: most });
    expect(await exists(join(interrupted, "postProcessing/coefficients", String(written), "coefficient.dat"))).toBe(true);
    expect(await cdAt(interrupted, most)).toBeCloseTo(cd, 1);
  }, 120_000);

  test("is asked to end when the targets hold, writes its fields there, and is not started again", async (context) => {
    const path = await smallCase();
    const given = options(context, { mostIterations: 5000, testEvery: 5, minimumWindow: 60 });
    const [settled] = await runCases([path], given, ignore);
    expect(settled!.state).toBe("settled");
    expect(settled!.iterations).toBeLessThan(2000);
    expect(await exists(join(path, String(settled!.iterations), "U"))).toBe(true);
    expect(await readFile(join(path, "log.simpleFoam"), "utf8")).toMatch(/^End\s*$/m);
    expect(await readFile(join(path, "system/controlDict"), "utf8")).toBe(smallControl);
    expect(await runCases([path], given, ignore)).toEqual([settled]);
    expect(await exists(join(path, "log.simpleFoam.1"))).toBe(false);
  }, 120_000);

  test("a keep-point inside the body, millimetres taken as metres, a point outside the domain", async (context) => {
    const given = options(context);
    const paths = await Promise.all([
      smallCase({ keepPoint: "(0.51 0.013 0.27)" }),
      smallCase({ scale: 0.001 }),
      smallCase({ keepPoint: "(100 0 0)" }),
    ]);
    const outcomes = await runCases(paths, { ...given, cores: 1 }, ignore);
    expect(outcomes.map(({ state }) => state)).toEqual(["failed", "failed", "failed"]);
    expect(outcomes[0]!.reason).toMatch(
      /^after snappyHexMesh the mesh has no faces on inlet, outlet, ground: it is the inside of the body/,
    );
    expect(outcomes[1]!.reason).toMatch(/^after snappyHexMesh no part of the body is in the mesh: /);
    expect(outcomes[2]!.reason).toMatch(
      /^snappyHexMesh ended with code 1; log: log\.snappyHexMesh; FOAM FATAL ERROR: Point \(100 0 0\) is not inside the mesh .*; the keep-point \(locationInMesh\) lies outside the domain$/,
    );
  }, 120_000);

  test("a ladder gives the case a start near its end: one grid coarser, first order first, mapped onto the finer mesh", async (context) => {
    const [cold, path] = [await smallCase(), await smallCase()];
    const given = options(context, { mostIterations: 60 });
    const card = JSON.parse(await readFile(join(path, "dragledger.json"), "utf8"));
    const ladder = [{ folder: "ladder/1", mesh: { ...card.mesh, predictedCells: 2400 }, mostIterations: 80 }];
    await writeFile(join(path, "dragledger.json"), JSON.stringify({ ...card, ladder }));
    const rung = join(path, "ladder/1");
    for (const part of ["0", "constant", "system"]) await cp(join(path, part), join(rung, part), { recursive: true });
    const snappy = await readFile(join(rung, "system/snappyHexMeshDict"), "utf8");
    await writeFile(
      join(rung, "system/snappyHexMeshDict"),
      snappy.replace("level 1;", "level 0;").replace("level (1 1)", "level (0 0)"),
    );
    const first = join(rung, "first-order/system");
    await cp(join(rung, "system"), first, { recursive: true });
    const schemes = await readFile(join(first, "fvSchemes"), "utf8");
    await writeFile(join(first, "fvSchemes"), schemes.replace("bounded Gauss linearUpwindV grad(U)", "bounded Gauss upwind"));
    await writeFile(join(first, "controlDict"), smallControl.replace("endTime 30", "endTime 20"));
    const before = await readFile(join(path, "0/U"), "utf8");

    const [one, two] = await runCases([cold, path], { ...given, cores: 1 }, ignore);
    expect([one!.state, two!.state]).not.toContain("failed");
    expect(two!.iterations).toBe(60);
    const end = await cdAt(cold, 60);
    expect(await exists(join(path, "postProcessing/coefficients/1/coefficient.dat"))).toBe(true);
    expect(Math.abs((await cdAt(path, 60)) - end)).toBeLessThan(0.01 * end);
    // Ten iterations after the start it is nearer to the end than the cold start by far.
    const off = async (of: string) => Math.abs((await cdAt(of, 11)) - end);
    expect(await off(path)).toBeLessThan(0.3 * (await off(cold)));
    expect(await readFile(join(path, "0/U"), "utf8")).toBe(before);
    expect(await readFile(join(rung, "log.simpleFoam"), "utf8")).toMatch(/^End\s*$/m);
  }, 120_000);

  test("divergence is found and told with its place", async (context) => {
    const path = await smallCase({ relaxation: 1.95 });
    const [outcome] = await runCases([path], options(context, { mostIterations: 500 }), ignore);
    expect(outcome!.state).toBe("diverged");
    expect(outcome!.reason).toMatch(
      /^(floating point trap after iteration \d+|coefficients are not numbers from iteration \d+|drag coefficient \S+ at iteration \d+); last solved \w+, initial residual \S+; log: log\.simpleFoam$/,
    );
  }, 120_000);
});
