import { createHash } from "node:crypto";
import { readdir, readFile, truncate, writeFile } from "node:fs/promises";
import { join } from "node:path";
import { describe, expect, test } from "vitest";
import { runCases } from "../../src/run/run-cases.js";
import { exists, listener, quick, starts } from "./listening.js";
import { preparedControl, standIn, standInCase } from "./stand-in.js";

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

  test("rows past the last written time do not count for the run that goes on from there", async () => {
    const made = await standIn();
    const path = await standInCase();
    made.behave({ STAND_IN_SOLVER: "hang" });
    const abort = new AbortController();
    const told = listener((event) => event.event === "iteration" && event.iteration === 25 && abort.abort());
    await runCases([path], quick(made, { signal: abort.signal }), told.tell);
    made.behave({ STAND_IN_SOLVER: "no-table" });
    const again = listener();
    const [outcome] = await runCases([path], quick(made), again.tell);
    expect(outcome).toMatchObject({
      state: "failed",
      iterations: 20,
      reason: "simpleFoam ended but wrote no history of coefficients; log: log.simpleFoam",
    });
    expect(again.events.some((event) => event.event === "iteration")).toBe(false);
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

  test.each([
    { hangs: "snappyHexMesh", behaviour: { STAND_IN_MESHER: "hang" }, again: "blockMesh" },
    { hangs: "renumberMesh", behaviour: { STAND_IN_HANGS: "renumberMesh" }, again: "blockMesh" },
    { hangs: "checkMesh", behaviour: { STAND_IN_HANGS: "checkMesh" }, again: "checkMesh" },
  ])("interrupted in $hangs: the next run begins with $again", async ({ hangs, behaviour, again }) => {
    const made = await standIn();
    const path = await standInCase();
    made.behave(behaviour);
    const abort = new AbortController();
    const told = listener((event) => event.event === "step-start" && event.step === hangs && setTimeout(() => abort.abort(), 50));
    const [outcome] = await runCases([path], quick(made, { signal: abort.signal }), told.tell);
    expect(outcome).toMatchObject({ state: "interrupted", reason: `interrupted in ${hangs}` });
    made.behave({ STAND_IN_MESHER: "", STAND_IN_HANGS: "", STAND_IN_SOLVER: "wander" });
    const next = listener();
    const [second] = await runCases([path], quick(made), next.tell);
    expect(second!.state).toBe("stopped-at-limit");
    expect(next.events.flatMap((event) => (event.event === "step-start" ? [event.step] : []))[0]).toBe(again);
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
      "Nothing has changed since this case diverged; it is not run again. Try it with --careful, change its mesh or its schemes, or delete run-state.json.",
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
    const leftBehind = {
      ...state,
      controlDict: { prepared: preparedControl, editedHashes: [createHash("sha256").update(edited).digest("hex")] },
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
