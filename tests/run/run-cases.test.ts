import { readdir, readFile, writeFile } from "node:fs/promises";
import { join } from "node:path";
import { describe, expect, test } from "vitest";
import { caseState, runCases } from "../../src/run/run-cases.js";
import { exists, listener, quick, starts } from "./listening.js";
import { preparedControl, standIn, standInCard, standInCase } from "./stand-in.js";

describe("a case from dictionaries to a settled history", () => {
  test("meshes, solves, asks the solver to end when drag and lift are known, and leaves controlDict as prepared", async () => {
    const made = await standIn();
    const path = await standInCase({ mostIterations: 5000 });
    const told = listener();
    const [outcome] = await runCases([path], quick(made), told.tell);
    expect(outcome).toMatchObject({ path, state: "settled", settled: true });
    expect(outcome!.iterations).toBeGreaterThan(60);
    expect(outcome!.iterations).toBeLessThan(5000);
    expect(outcome!.reason).toMatch(
      /^cd 0\.30\d\d \+- 0\.00\d\d \(asked 0\.001\), cl [\d.-]+ \+- 0\.00\d\d \(asked 0\.003\) at 95 %$/,
    );
    expect(await readFile(join(path, "system/controlDict"), "utf8")).toBe(preparedControl);
    expect(await exists(join(path, String(outcome!.iterations), "U"))).toBe(true);
    expect(told.events[0]).toEqual({
      event: "case-start",
      case: path,
      steps: ["blockMesh", "surfaceFeatureExtract", "snappyHexMesh", "renumberMesh", "checkMesh", "simpleFoam"],
    });
    const ended = told.events.filter((event) => event.event === "step-end");
    expect(ended.map((event) => [event.step, event.skipped])).toEqual([
      ["blockMesh", false],
      ["surfaceFeatureExtract", false],
      ["snappyHexMesh", false],
      ["renumberMesh", false],
      ["checkMesh", false],
      ["simpleFoam", false],
    ]);
    expect(told.events.at(-1)).toMatchObject({ event: "case-end", state: "settled" });
    const iterations = told.events.filter((event) => event.event === "iteration");
    expect(iterations.length).toBeGreaterThan(2);
    expect(iterations.at(-1)).toMatchObject({ most: 5000, iteration: outcome!.iterations });
    expect(iterations.at(-1)!.cd).toBeCloseTo(0.3, 3);
    expect(await starts(path)).toEqual([`0 5000 latestTime ${path}`]);
    expect(await caseState(path)).toEqual(outcome);
  });

  test("a second run does nothing, and says so step by step", async () => {
    const made = await standIn();
    const path = await standInCase({ mostIterations: 5000 });
    const [first] = await runCases([path], quick(made), () => undefined);
    const told = listener();
    expect(await runCases([path], quick(made), told.tell)).toEqual([first]);
    expect(told.events.flatMap((event) => (event.event === "step-end" ? [event.skipped] : []))).toEqual([
      true,
      true,
      true,
      true,
      true,
      true,
    ]);
    expect(told.events.some((event) => event.event === "step-start")).toBe(false);
    expect(await starts(path)).toHaveLength(1);
  });

  test("stricter targets and a higher limit go on from the last written time; looser ones do nothing", async () => {
    const made = await standIn();
    const path = await standInCase();
    made.behave({ STAND_IN_SOLVER: "wander" });
    const [first] = await runCases([path], quick(made), () => undefined);
    expect(first).toMatchObject({ state: "stopped-at-limit", iterations: 200, settled: false });
    expect(first!.reason).toMatch(/^the limit of 200 iterations is reached: cd /);
    await runCases([path], quick(made, { mostIterations: 150 }), () => undefined);
    expect(await starts(path)).toHaveLength(1);
    const [second] = await runCases([path], quick(made, { mostIterations: 260 }), () => undefined);
    expect(second).toMatchObject({ state: "stopped-at-limit", iterations: 260 });
    expect((await starts(path)).at(-1)).toBe(`200 260 latestTime ${path}`);
    expect((await readdir(path)).filter((name) => name.startsWith("log.simpleFoam")).sort()).toEqual([
      "log.simpleFoam",
      "log.simpleFoam.1",
    ]);
    expect((await readdir(path)).filter((name) => /^\d+$/.test(name)).sort()).toEqual(["0", "240", "260"]);
    const card = JSON.parse(await readFile(join(path, "dragledger.json"), "utf8"));
    await writeFile(
      join(path, "dragledger.json"),
      JSON.stringify({ ...card, stop: { drag: 1e-9, lift: 1e-9, confidence: 0.99 }, mostIterations: 280 }),
    );
    const [third] = await runCases([path], quick(made), () => undefined);
    expect(third).toMatchObject({ state: "stopped-at-limit", iterations: 280 });
  });

  test("a case at its limit is settled when looser targets hold for its history, without a further iteration", async () => {
    const made = await standIn();
    const path = await standInCase({ stop: { drag: 1e-9, lift: 1e-9, confidence: 0.95 }, mostIterations: 400 });
    const [first] = await runCases([path], quick(made), () => undefined);
    expect(first).toMatchObject({ state: "stopped-at-limit", iterations: 400 });
    await writeFile(join(path, "dragledger.json"), JSON.stringify({ ...standInCard, mostIterations: 400 }));
    const [second] = await runCases([path], quick(made), () => undefined);
    expect(second).toMatchObject({ state: "settled", settled: true, iterations: 400 });
    expect(await starts(path)).toHaveLength(1);
  });

  test("a limit that the write interval does not divide is still written", async () => {
    const made = await standIn();
    const path = await standInCase();
    made.behave({ STAND_IN_SOLVER: "wander" });
    const [outcome] = await runCases([path], quick(made, { mostIterations: 47 }), () => undefined);
    expect(outcome!.iterations).toBe(47);
    expect(await exists(join(path, "47", "U"))).toBe(true);
  });

  test("two ranks: divided, solved through the launcher, put together, the divided copy deleted", async () => {
    const made = await standIn();
    const path = await standInCase();
    made.behave({ STAND_IN_SOLVER: "wander" });
    const told = listener();
    const [outcome] = await runCases([path], quick(made, { cores: 2, leastCellsPerRank: 100 }), told.tell);
    expect(outcome).toMatchObject({ state: "stopped-at-limit", iterations: 200 });
    expect(await readFile(join(path, "launches"), "utf8")).toBe(
      `mpirun ${made.solver.path}/simpleFoam -parallel -decomposeParDict system/decomposition\n`,
    );
    expect((await readdir(path)).filter((name) => name.startsWith("processor"))).toEqual([]);
    expect(await exists(join(path, "200", "U"))).toBe(true);
    expect(told.events.flatMap((event) => (event.event === "step-end" ? [event.step] : [])).slice(-3)).toEqual([
      "decomposePar",
      "simpleFoam",
      "reconstructPar",
    ]);
    expect(await readFile(join(path, "system/decomposition"), "utf8")).toContain(
      "numberOfSubdomains 2;\nmethod hierarchical;\nhierarchicalCoeffs { n (2 1 1);",
    );
  });

  test("a case too small for two ranks runs on one", async () => {
    const made = await standIn();
    const path = await standInCase();
    made.behave({ STAND_IN_SOLVER: "wander" });
    await runCases([path], quick(made, { cores: 2 }), () => undefined);
    expect(await exists(join(path, "launches"))).toBe(false);
  });

  test("without a launcher one core is used, with a remark", async () => {
    const made = await standIn();
    const path = await standInCase();
    made.behave({ STAND_IN_SOLVER: "wander" });
    const told = listener();
    const options = quick(made, { cores: 2, leastCellsPerRank: 100, solver: { ...made.solver, mpirun: null } });
    const [outcome] = await runCases([path], options, told.tell);
    expect(outcome!.state).toBe("stopped-at-limit");
    expect(told.remarks()).toEqual([
      "mpirun was not found: each case runs on one core. `dragledger environment` says how to get it.",
    ]);
  });
});
