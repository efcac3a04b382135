import { mkdir, readFile, rm, writeFile } from "node:fs/promises";
import { hostname } from "node:os";
import { join } from "node:path";
import { describe, expect, test } from "vitest";
import type { Problem } from "../../src/errors.js";
import { caseState, runCases } from "../../src/run/run-cases.js";
import { exists, listener, problemOf, quick } from "./listening.js";
import { standIn, standInCase } from "./stand-in.js";

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
