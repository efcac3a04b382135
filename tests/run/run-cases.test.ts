import { access, mkdir, readdir, readFile, rm, truncate, writeFile } from "node:fs/promises";
import { join } from "node:path";
import { describe, expect, test } from "vitest";
import { Problem } from "../../src/errors.js";
import type { RunEvent } from "../../src/run/events.js";
import { caseState, type RunOptions, runCases } from "../../src/run/run-cases.js";
import { preparedControl, type StandIn, standIn, standInCase } from "./stand-in.js";

/** One core, looked at often, so that a test takes tenths of a second. */
const quick = (made: StandIn, more: RunOptions = {}): RunOptions => ({
  solver: made.solver,
  cores: 1,
  pollMilliseconds: 10,
  testEvery: 10,
  minimumWindow: 40,
  graceMilliseconds: 300,
  ...more,
});

interface Told {
  events: RunEvent[];
  tell: (event: RunEvent) => void;
  remarks: () => string[];
}

function listener(on?: (event: RunEvent) => void): Told {
  const events: RunEvent[] = [];
  return {
    events,
    tell: (event) => {
      events.push(event);
      on?.(event);
    },
    remarks: () => events.flatMap((event) => (event.event === "remark" ? [event.message] : [])),
  };
}

const exists = (path: string) =>
  access(path).then(
    () => true,
    () => false,
  );
const starts = async (path: string) => (await readFile(join(path, "starts"), "utf8")).trim().split("\n");
const problemOf = async (call: Promise<unknown>): Promise<Problem> => {
  const error = await call.then(
    () => null,
    (thrown: unknown) => thrown,
  );
  expect(error).toBeInstanceOf(Problem);
  return error as Problem;
};

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

describe("how a case can fail", () => {
  const failing: { solver: string; state: string; reason: RegExp }[] = [
    {
      solver: "nan",
      state: "diverged",
      reason: /^coefficients are not numbers from iteration 30; last solved k, initial residual 0\.25; log: log\.simpleFoam$/,
    },
    {
      solver: "huge",
      state: "diverged",
      reason: /^drag coefficient 4\.2e\+5 at iteration 30; last solved k, initial residual 0\.25; log: log\.simpleFoam$/,
    },
    {
      solver: "trap",
      state: "diverged",
      reason: /^floating point trap after iteration 25; last solved k, initial residual 0\.25; log: log\.simpleFoam$/,
    },
    {
      solver: "fatal",
      state: "failed",
      reason:
        /^simpleFoam ended with code 1; log: log\.simpleFoam; FOAM FATAL IO ERROR: Entry 'div\(phi,k\)' not found in dictionary "system\/fvSchemes\.divSchemes" file: system\/fvSchemes\.divSchemes at line 9\.$/,
    },
    {
      solver: "killed",
      state: "failed",
      reason: /^simpleFoam was ended by SIGKILL; log: log\.simpleFoam; ended from outside; the machine may have run out of memory$/,
    },
    {
      solver: "silent",
      state: "failed",
      reason: /^simpleFoam stopped without saying why \(its log has no line End\); log: log\.simpleFoam$/,
    },
    {
      solver: "zeros",
      state: "failed",
      reason:
        /^all coefficients are exactly 0: no patch of the mesh matches the names in the function object; log: log\.simpleFoam$/,
    },
    {
      solver: "no-table",
      state: "failed",
      reason: /^simpleFoam ended but wrote no history of coefficients; log: log\.simpleFoam$/,
    },
  ];
  test.each(failing)("solver: $solver", async ({ solver, state, reason }) => {
    const made = await standIn();
    const path = await standInCase();
    made.behave({ STAND_IN_SOLVER: solver });
    const told = listener();
    const [outcome] = await runCases([path], quick(made), told.tell);
    expect(outcome!.state).toBe(state);
    expect(outcome!.reason).toMatch(reason);
    expect(outcome!.settled).toBe(false);
    expect(told.events.at(-1)).toMatchObject({ event: "case-end", state, reason: outcome!.reason });
    expect(await readFile(join(path, "system/controlDict"), "utf8")).toBe(preparedControl);
  });

  const meshes: { title: string; behaviour: Record<string, string>; reason: string }[] = [
    {
      title: "fatal error",
      behaviour: { STAND_IN_MESHER: "fatal" },
      reason:
        "snappyHexMesh ended with code 1; log: log.snappyHexMesh; FOAM FATAL ERROR: Point (9 0 0) is not inside the mesh or on a face or edge. Bounding box of the mesh:(-1 -1 0) (3 1 2); the keep-point (locationInMesh) lies outside the domain",
    },
    {
      title: "keep-point inside the body",
      behaviour: { STAND_IN_PATCHES: "inside" },
      reason:
        "after snappyHexMesh the mesh has no faces on inlet, outlet, ground: it is the inside of the body, because the keep-point (locationInMesh) lies inside a part; check `body.unit`, travel and up, then prepare again; log: log.snappyHexMesh",
    },
    {
      title: "millimetres taken as metres",
      behaviour: { STAND_IN_PATCHES: "no-body" },
      reason:
        "after snappyHexMesh no part of the body is in the mesh: the body is outside the domain or too small for its cells (body 4.20 x 1.80 x 1.40 m, cells of 0.8 m before refinement); a wrong unit does this, check `body.unit` in the study; log: log.snappyHexMesh",
    },
    {
      title: "a lost part",
      behaviour: { STAND_IN_PATCHES: "lost" },
      reason:
        "after snappyHexMesh no faces in the mesh for part rear wing: smaller than the cells there, hidden inside another part, or outside the domain; use a finer mesh or leave it out; log: log.snappyHexMesh",
    },
  ];
  test.each(meshes)("mesh: $title", async ({ behaviour, reason }) => {
    const made = await standIn();
    const path = await standInCase();
    made.behave(behaviour);
    const [outcome] = await runCases([path], quick(made), () => undefined);
    expect(outcome).toMatchObject({ state: "failed", reason });
    expect(await exists(join(path, "starts"))).toBe(false);
    made.behave({ STAND_IN_MESHER: "", STAND_IN_PATCHES: "", STAND_IN_SOLVER: "wander" });
    const [again] = await runCases([path], quick(made), () => undefined);
    // A mesh with trouble is judged again, not taken for finished; only the mesher's own failure makes it anew.
    expect(again!.state).toBe(behaviour.STAND_IN_MESHER ? "stopped-at-limit" : "failed");
  });

  test("failed mesh checks, the cell limit and an odd cell count are remarks, not ends", async () => {
    const made = await standIn();
    const path = await standInCase();
    made.behave({ STAND_IN_CHECKS: "2", STAND_IN_MESHER: "limit", STAND_IN_CELLS: "1900", STAND_IN_SOLVER: "wander" });
    const told = listener();
    const [outcome] = await runCases([path], quick(made), told.tell);
    expect(outcome!.state).toBe("stopped-at-limit");
    expect(told.remarks()).toEqual([
      "The mesh has 1900 cells where 1000 were predicted: the inside of the body may be meshed too (a hole in a part), or thin parts take more cells.",
      "Refinement stopped at the limit of 2000 cells: the mesh is coarser than planned (log.snappyHexMesh). Raise maxGlobalCells.",
      "checkMesh: 2 checks of the mesh failed (log.checkMesh, lines with ***). The run goes on; look at the places before trusting small differences.",
    ]);
  });

  test("one failing case does not take the others with it", async () => {
    const made = await standIn();
    const good = await standInCase();
    const bad = await standInCase();
    await writeFile(
      join(bad, "dragledger.json"),
      JSON.stringify({
        ...JSON.parse(await readFile(join(bad, "dragledger.json"), "utf8")),
        parts: [{ name: "mirror", patch: "body_mirror" }],
      }),
    );
    made.behave({ STAND_IN_SOLVER: "wander" });
    const outcomes = await runCases([bad, good], quick(made), () => undefined);
    expect(outcomes.map(({ path, state }) => [path, state])).toEqual([
      [bad, "failed"],
      [good, "stopped-at-limit"],
    ]);
  });
});

describe("going on after an interruption", () => {
  test("Ctrl-C ends the solver, keeps what is written; the next run goes on from there", async () => {
    const made = await standIn();
    const path = await standInCase({ mostIterations: 300 });
    made.behave({ STAND_IN_SOLVER: "hang" });
    const abort = new AbortController();
    const told = listener((event) => event.event === "iteration" && event.iteration === 25 && abort.abort());
    const [outcome] = await runCases([path], quick(made, { signal: abort.signal }), told.tell);
    expect(outcome).toMatchObject({
      state: "interrupted",
      iterations: 25,
      reason: "interrupted at iteration 25; the next run goes on from 20",
    });
    made.behave({ STAND_IN_SOLVER: "wander" });
    const again = listener();
    const [second] = await runCases([path], quick(made), again.tell);
    expect(second).toMatchObject({ state: "stopped-at-limit", iterations: 300 });
    expect((await starts(path)).at(-1)).toBe(`20 300 latestTime ${path}`);
    expect(again.events.filter((event) => event.event === "step-end" && event.skipped)).toHaveLength(5);
  });

  test("a program that does not listen is ended by force", async () => {
    const made = await standIn();
    const path = await standInCase();
    made.behave({ STAND_IN_SOLVER: "deaf" });
    const abort = new AbortController();
    const told = listener((event) => event.event === "iteration" && event.iteration === 25 && abort.abort());
    const [outcome] = await runCases([path], quick(made, { signal: abort.signal }), told.tell);
    expect(outcome!.state).toBe("interrupted");
    const state = JSON.parse(await readFile(join(path, "run-state.json"), "utf8"));
    expect(state.steps.at(-1)).toMatchObject({ name: "simpleFoam", state: "interrupted", signal: "SIGKILL" });
    expect(state.running).toBe(null);
  });

  test("two ranks: the launcher's children end too, and the divided case is gone on with", async () => {
    const made = await standIn();
    const path = await standInCase();
    made.behave({ STAND_IN_SOLVER: "hang" });
    const abort = new AbortController();
    const told = listener((event) => event.event === "iteration" && event.iteration === 25 && abort.abort());
    const options = quick(made, { cores: 2, leastCellsPerRank: 100 });
    const [outcome] = await runCases([path], { ...options, signal: abort.signal }, told.tell);
    expect(outcome!.reason).toBe("interrupted at iteration 25; the next run goes on from 20");
    expect((await readdir(join(path, "processor1"))).sort()).toEqual(["0", "20"]);
    made.behave({ STAND_IN_SOLVER: "wander" });
    const again = listener();
    const [second] = await runCases([path], options, again.tell);
    expect(second).toMatchObject({ state: "stopped-at-limit", iterations: 200 });
    expect(again.events).toContainEqual({ event: "step-end", case: path, step: "decomposePar", seconds: 0, skipped: true });
    expect((await starts(path)).at(-1)).toBe(`20 200 latestTime ${path}`);
  });

  test("an interrupted divided case goes on with another number of ranks", async () => {
    const made = await standIn();
    const path = await standInCase();
    made.behave({ STAND_IN_SOLVER: "hang" });
    const abort = new AbortController();
    const told = listener((event) => event.event === "iteration" && event.iteration === 25 && abort.abort());
    await runCases([path], quick(made, { cores: 2, leastCellsPerRank: 100, signal: abort.signal }), told.tell);
    made.behave({ STAND_IN_SOLVER: "wander" });
    const again = listener();
    const [second] = await runCases([path], quick(made), again.tell);
    expect(second!.iterations).toBe(200);
    expect(again.events.flatMap((event) => (event.event === "step-start" ? [event.step] : []))).toEqual([
      "reconstructPar",
      "simpleFoam",
    ]);
    expect((await readdir(path)).filter((name) => name.startsWith("processor"))).toEqual([]);
  });

  test("a time that was cut off while it was written is dropped, the one before is used", async () => {
    const made = await standIn();
    const path = await standInCase({ mostIterations: 100 });
    made.behave({ STAND_IN_SOLVER: "wander" });
    await runCases([path], quick(made), () => undefined);
    await truncate(join(path, "100", "U"), 5);
    const told = listener();
    const [outcome] = await runCases([path], quick(made, { mostIterations: 140 }), told.tell);
    expect(outcome!.iterations).toBe(140);
    expect(told.remarks()).toEqual([
      "Time 100 was not written to its end (U is cut off) and was deleted; the case goes on from the one before.",
    ]);
    expect((await starts(path)).at(-1)).toBe(`80 140 latestTime ${path}`);
  });

  test("interrupted in the mesher: the mesh is made again from its first step", async () => {
    const made = await standIn();
    const path = await standInCase();
    made.behave({ STAND_IN_MESHER: "hang" });
    const abort = new AbortController();
    const told = listener(
      (event) => event.event === "step-start" && event.step === "snappyHexMesh" && setTimeout(() => abort.abort(), 50),
    );
    const [outcome] = await runCases([path], quick(made, { signal: abort.signal }), told.tell);
    expect(outcome).toMatchObject({ state: "interrupted", reason: "interrupted in snappyHexMesh" });
    made.behave({ STAND_IN_MESHER: "", STAND_IN_SOLVER: "wander" });
    const again = listener();
    await runCases([path], quick(made), again.tell);
    expect(again.events.flatMap((event) => (event.event === "step-start" ? [event.step] : []))[0]).toBe("blockMesh");
  });

  test("a changed surface makes the mesh again and sets the old histories aside", async () => {
    const made = await standIn();
    const path = await standInCase();
    made.behave({ STAND_IN_SOLVER: "wander" });
    await runCases([path], quick(made), () => undefined);
    await writeFile(join(path, "constant/triSurface/body.stl"), "solid nose\nendsolid nose\n\n");
    const told = listener();
    const [outcome] = await runCases([path], quick(made), told.tell);
    expect(outcome).toMatchObject({ state: "stopped-at-limit", iterations: 200 });
    expect(told.remarks()).toEqual([
      "The mesh is made again: constant/triSurface/body.stl changed.",
      "Histories of the earlier set-up were moved to earlier/1; its fields were deleted.",
    ]);
    expect(await exists(join(path, "earlier/1/postProcessing/coefficients/0/coefficient.dat"))).toBe(true);
    expect(await exists(join(path, "earlier/1/log.simpleFoam"))).toBe(true);
    expect((await starts(path)).at(-1)).toBe(`0 200 latestTime ${path}`);
  });

  test("a changed scheme solves again on the same mesh; what a run sets itself does not count as a change", async () => {
    const made = await standIn();
    const path = await standInCase();
    made.behave({ STAND_IN_SOLVER: "wander" });
    await runCases([path], quick(made), () => undefined);
    await writeFile(join(path, "system/controlDict"), preparedControl.replace("endTime 200", "endTime 900"));
    await runCases([path], quick(made), () => undefined);
    expect(await starts(path)).toHaveLength(1);
    await writeFile(join(path, "system/fvSchemes"), "divSchemes { default none; }\n");
    const told = listener();
    await runCases([path], quick(made), told.tell);
    expect(told.remarks()[0]).toBe("The case is solved from the beginning: system/fvSchemes changed.");
    expect(told.events.flatMap((event) => (event.event === "step-start" ? [event.step] : []))).toEqual(["simpleFoam"]);
    expect(await starts(path)).toHaveLength(2);
  });

  test("a diverged case is not run again unless something changed", async () => {
    const made = await standIn();
    const path = await standInCase();
    made.behave({ STAND_IN_SOLVER: "nan" });
    const [first] = await runCases([path], quick(made), () => undefined);
    const told = listener();
    const [second] = await runCases([path], quick(made), told.tell);
    expect(second).toEqual(first);
    expect(told.remarks()).toEqual([
      "Nothing has changed since this case diverged; it is not run again. Change its mesh or its schemes, or delete run-state.json.",
    ]);
    made.behave({ STAND_IN_SOLVER: "wander" });
    await writeFile(join(path, "system/fvSolution"), "SIMPLE { consistent yes; }\n");
    const [third] = await runCases([path], quick(made), () => undefined);
    expect(third!.state).toBe("stopped-at-limit");
  });

  test("a controlDict left behind by a killed run is put back; one that somebody else changed is not", async () => {
    const made = await standIn();
    const path = await standInCase();
    made.behave({ STAND_IN_SOLVER: "hang" });
    const abort = new AbortController();
    let edited = "";
    const told = listener((event) => {
      if (event.event !== "iteration" || event.iteration < 25) return;
      void readFile(join(path, "system/controlDict"), "utf8").then((text) => {
        edited = text;
        abort.abort();
      });
    });
    await runCases([path], quick(made, { signal: abort.signal }), told.tell);
    const state = JSON.parse(await readFile(join(path, "run-state.json"), "utf8"));
    expect(state.controlDict).toBe(null);
    const { createHash } = await import("node:crypto");
    const leftBehind = {
      ...state,
      controlDict: { prepared: preparedControl, editedHash: createHash("sha256").update(edited).digest("hex") },
    };
    await writeFile(join(path, "run-state.json"), JSON.stringify(leftBehind));
    await writeFile(join(path, "system/controlDict"), edited);
    made.behave({ STAND_IN_SOLVER: "wander" });
    await runCases([path], quick(made), () => undefined);
    expect(await readFile(join(path, "system/controlDict"), "utf8")).toBe(preparedControl);
    await writeFile(join(path, "run-state.json"), JSON.stringify(leftBehind));
    await writeFile(join(path, "system/controlDict"), `${edited}\n// mine\n`);
    const last = listener();
    await runCases([path], quick(made, { mostIterations: 220 }), last.tell);
    expect(last.remarks()).toContain("system/controlDict was changed while the case ran; it is left as it is now.");
    expect(await readFile(join(path, "system/controlDict"), "utf8")).toContain("// mine");
  });
});

describe("what is refused before anything starts", () => {
  test("a case that is being run already, with the process named", async () => {
    const made = await standIn();
    const path = await standInCase();
    made.behave({ STAND_IN_SOLVER: "hang" });
    const abort = new AbortController();
    let problem: Problem | null = null;
    const told = listener((event) => {
      if (event.event !== "iteration" || event.iteration !== 25) return;
      void problemOf(runCases([path], quick(made), () => undefined)).then((found) => {
        problem = found;
        abort.abort();
      });
    });
    await runCases([path], quick(made, { signal: abort.signal }), told.tell);
    expect(problem).toMatchObject({ kind: "input", code: "case-is-running", where: path });
    expect(problem!.message).toMatch(new RegExp(`^This case is being run already by process ${process.pid} on \\S+\\.$`));
    expect(problem!.remedy).toBe("Wait until that run has ended, or end it first (Ctrl-C there); it keeps what it has written.");
  });

  test("a lock left behind by a process that is gone is taken over", async () => {
    const made = await standIn();
    const path = await standInCase();
    made.behave({ STAND_IN_SOLVER: "wander" });
    await runCases([path], quick(made), () => undefined);
    const state = JSON.parse(await readFile(join(path, "run-state.json"), "utf8"));
    const { hostname } = await import("node:os");
    await writeFile(
      join(path, "run-state.json"),
      JSON.stringify({ ...state, state: "solving", owner: { pid: 4194303, host: hostname() } }),
    );
    await mkdir(join(path, "run.lock"));
    expect(await caseState(path)).toMatchObject({ state: "interrupted", reason: "its run ended without a word" });
    const [outcome] = await runCases([path], quick(made), () => undefined);
    expect(outcome!.state).toBe("stopped-at-limit");
    expect(await exists(join(path, "run.lock"))).toBe(false);
  });

  test("a folder without a run card", async () => {
    const made = await standIn();
    const path = await standInCase();
    await rm(join(path, "dragledger.json"));
    const problem = await problemOf(runCases([path], quick(made), () => undefined));
    expect(problem).toMatchObject({ kind: "input", code: "not-a-prepared-case", where: path });
    expect(problem.message).toBe(
      "This folder has no dragledger.json: it was not written by this program, so its parts, targets and limit are not known.",
    );
    expect(problem.remedy).toBe(
      "Write a case with `dragledger prepare <study.yaml>` and run that; finished runs of any case can be read by `history`, `converged` and `ledger`.",
    );
    expect(await problemOf(caseState(path))).toMatchObject({ code: "not-a-prepared-case" });
  });

  test("a path that is not there", async () => {
    const made = await standIn();
    expect(await problemOf(runCases(["nowhere/at-all"], quick(made), () => undefined))).toMatchObject({
      kind: "input",
      code: "missing-path",
      message: "There is no such case folder (ENOENT).",
    });
  });

  test("an installation without one of the programs, before anything is meshed", async () => {
    const made = await standIn();
    const path = await standInCase();
    await rm(join(made.solver.path, "reconstructPar"));
    await rm(join(made.solver.path, "checkMesh"));
    const problem = await problemOf(runCases([path], quick(made), () => undefined));
    expect(problem).toMatchObject({ kind: "tool", code: "solver-incomplete", where: made.solver.path });
    expect(problem.message).toBe("This OpenFOAM (v1912) lacks checkMesh, reconstructPar.");
    expect(problem.remedy).toMatch(
      /^Install all of OpenFOAM v1912 or later \(www\.openfoam\.com line\): .+\. Another installation is chosen by DRAGLEDGER_OPENFOAM\.$/,
    );
    expect(await exists(join(path, "log.blockMesh"))).toBe(false);
  });

  test("a state file that is none", async () => {
    const made = await standIn();
    const path = await standInCase();
    await writeFile(join(path, "run-state.json"), "{ half");
    const problem = await problemOf(runCases([path], quick(made), () => undefined));
    expect(problem).toMatchObject({ kind: "input", code: "run-state-unreadable", where: join(path, "run-state.json") });
    expect(await exists(join(path, "run.lock"))).toBe(false);
  });
});

describe("the queue", () => {
  test("cases run side by side, no more at once than asked, outcomes in the order of the paths", async () => {
    const made = await standIn();
    made.behave({ STAND_IN_SOLVER: "wander" });
    const paths = await Promise.all([standInCase(), standInCase(), standInCase()]);
    let now = 0;
    let most = 0;
    const told = listener((event) => {
      if (event.event === "case-start") most = Math.max(most, ++now);
      if (event.event === "case-end") now -= 1;
    });
    const outcomes = await runCases([...paths, paths[0]!], quick(made, { cores: 2, atOnce: 2 }), told.tell);
    expect(outcomes.map(({ path }) => path)).toEqual([...paths, paths[0]]);
    expect(outcomes.every(({ state }) => state === "stopped-at-limit")).toBe(true);
    expect(most).toBe(2);
    expect(await starts(paths[0]!)).toHaveLength(1);
  });

  test("Ctrl-C leaves the cases that were not begun as they are", async () => {
    const made = await standIn();
    made.behave({ STAND_IN_SOLVER: "hang" });
    const paths = await Promise.all([standInCase(), standInCase()]);
    const abort = new AbortController();
    const told = listener((event) => event.event === "iteration" && event.iteration === 25 && abort.abort());
    const outcomes = await runCases(paths, quick(made, { signal: abort.signal }), told.tell);
    expect(outcomes.map(({ state, reason }) => [state, reason])).toEqual([
      ["interrupted", "interrupted at iteration 25; the next run goes on from 20"],
      ["interrupted", "interrupted before it was begun"],
    ]);
    expect(await exists(join(paths[1]!, "log.blockMesh"))).toBe(false);
  });

  test("cases whose meshers would not fit into memory together run one after another, with a remark", async () => {
    const made = await standIn();
    const big = { mesh: { ...(await import("./stand-in.js")).standInCard.mesh, predictedCells: 1e12 } };
    made.behave({ STAND_IN_SOLVER: "wander" });
    const paths = await Promise.all([standInCase(big), standInCase(big)]);
    const told = listener();
    await runCases(paths, quick(made, { cores: 2 }), told.tell);
    expect(told.remarks()[0]).toMatch(/^1 instead of 2 cases run side by side: 2 would not fit into \d+\.\d GB of memory\.$/);
    expect(told.remarks()[1]).toMatch(
      /^The largest case will need about 1920000\.1 GB of memory, and there are \d+\.\d GB: it may be ended by the system\.$/,
    );
  });
});
