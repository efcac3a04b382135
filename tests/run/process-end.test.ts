import { readFile } from "node:fs/promises";
import { join } from "node:path";
import { execa } from "execa";
import { describe, expect, onTestFinished, test } from "vitest";
import { isAlive } from "../../src/run/program.js";
import { caseState, runCases } from "../../src/run/run-cases.js";
import { problemOf, quick, starts } from "./listening.js";
import { preparedControl, standIn, standInCase } from "./stand-in.js";

const runner = new URL("runner.ts", import.meta.url).pathname;
const start = (casePath: string, programs: string, ending: string) =>
  execa(process.execPath, ["--import", "tsx", runner, casePath, programs, ending], { reject: false });

async function solverOf(casePath: string): Promise<number> {
  const { running } = JSON.parse(await readFile(join(casePath, "run-state.json"), "utf8"));
  expect(running.program).toBe("simpleFoam");
  onTestFinished(() => {
    if (isAlive(running.pid)) process.kill(running.pid, "SIGKILL");
  });
  return running.pid;
}

const gone = async (pid: number): Promise<boolean> => {
  for (let wait = 0; wait < 200 && isAlive(pid); wait += 1) await new Promise((resolve) => setTimeout(resolve, 20));
  return !isAlive(pid);
};

describe("when the process that runs a case ends", () => {
  test.each(["exit", "throw"])("by %s: the solver ends with it, and the next run goes on", async (ending) => {
    const made = await standIn();
    const path = await standInCase();
    await start(path, made.solver.path, ending);
    expect(await gone(await solverOf(path))).toBe(true);
    expect(await caseState(path)).toMatchObject({ state: "interrupted", reason: "its run ended without a word" });
    made.behave({ STAND_IN_SOLVER: "wander" });
    const [outcome] = await runCases([path], quick(made), () => undefined);
    expect(outcome).toMatchObject({ state: "stopped-at-limit", iterations: 200 });
    expect((await starts(path)).at(-1)).toMatch(/^20 200 /);
    expect(await readFile(join(path, "system/controlDict"), "utf8")).toBe(preparedControl);
  });

  test("killed: its solver is still there, and the next run says so instead of starting a second one", async () => {
    const made = await standIn();
    const path = await standInCase();
    const process_ = start(path, made.solver.path, "stay");
    for await (const line of process_) if (line === "hanging") process_.kill("SIGKILL");
    await process_;
    const pid = await solverOf(path);
    expect(isAlive(pid)).toBe(true);
    const problem = await problemOf(runCases([path], quick(made), () => undefined));
    expect(problem).toMatchObject({ kind: "input", code: "program-still-running", where: path });
    expect(problem.message).toBe(`simpleFoam (process ${pid}), started by a run that is gone, still works in this case.`);
    expect(problem.remedy).toBe(
      `End it (kill ${pid}) or wait until it ends, then run again: the case goes on from its last written iteration.`,
    );
    process.kill(pid, "SIGKILL");
    expect(await gone(pid)).toBe(true);
    made.behave({ STAND_IN_SOLVER: "wander" });
    const [outcome] = await runCases([path], quick(made), () => undefined);
    expect(outcome).toMatchObject({ state: "stopped-at-limit", iterations: 200 });
  });
});
