import { readFileSync } from "node:fs";
import { join } from "node:path";
import { describe, expect, test } from "vitest";
import { readSolverLog, type SolverLog } from "../../src/openfoam/solver-log.js";

const logs = join(import.meta.dirname, "..", "fixtures", "histories", "logs");
const recorded = (name: string): SolverLog => readSolverLog(readFileSync(join(logs, `${name}.gz`)), name);

const banner = `/*---------------------------------------------------------------------------*\\
| =========                 |                                                 |
| \\\\      /  F ield         | OpenFOAM: The Open Source CFD Toolbox           |
|  \\\\    /   O peration     | Version:  v2312                                 |
\\*---------------------------------------------------------------------------*/
Build  : abc OPENFOAM=2312
Exec   : /opt/bin/simpleFoam -parallel
nProcs : 4
trapFpe: Floating point exception trapping enabled (FOAM_SIGFPE).
sigFpe : Enabling floating point exception trapping (FOAM_SIGFPE).
`;
const step = (time: string, residual = "0.5"): string =>
  `Time = ${time}\n\nsmoothSolver:  Solving for Ux, Initial residual = ${residual}, Final residual = 0.01, No Iterations 3\nGAMG:  Solving for p, Initial residual = 0.25, Final residual = 0.01, No Iterations 3\n    GAMG:  Solving for p, Initial residual = 0.1, Final residual = 0.01, No Iterations 3\nExecutionTime = ${time} s  ClockTime = 9 s\n\n`;
const read = (text: string): SolverLog => readSolverLog(text, "log.simpleFoam");

describe("how a run ended", () => {
  test("a recorded run that ended at its limit", () => {
    expect(recorded("ended")).toMatchObject({
      version: "1912",
      program: "simpleFoam",
      processes: 1,
      runs: 1,
      end: "ended",
      reason: "the run ended at time 20, at its limit",
      fatal: null,
      trapped: false,
      convergedAfter: null,
      lastTime: 20,
      steps: 20,
      executionTime: 0.58,
      clockTime: 1,
    });
  });

  test("a recorded floating-point trap: no End, a trace", () => {
    const log = recorded("fpe");
    expect(log).toMatchObject({ end: "failed", trapped: true, fatal: null, lastTime: 100 });
    expect(log.reason).toBe(
      "floating-point trap at time 100 in Foam::GaussSeidelSmoother::smooth: the solution became infinite or undefined",
    );
  });

  test("a recorded stop because a nan could not be read", () => {
    const log = recorded("nan");
    expect(log).toMatchObject({
      end: "failed",
      trapped: false,
      fatal: { line: 4946, message: "Wrong token type - expected scalar value, found on line 0: word 'nan'" },
    });
    expect(log.reason).toContain("after residuals had become nan or inf (the run diverged)");
  });

  test("a recorded run that diverged to nan and ended normally", () => {
    const log = recorded("nan2");
    expect(log).toMatchObject({
      end: "ended",
      lastTime: 420,
      reason: "the program ended at time 420, but its residuals were nan or inf: the run diverged",
    });
    expect(log.findings.map(({ code, severity }) => [code, severity])).toEqual([
      ["unmatched-patches", "error"],
      ["not-finite", "error"],
    ]);
  });

  test("converged, also with the suffix s and a parallel end", () => {
    expect(
      read(
        `${banner}${step("267s")}${step("268s")}SIMPLE solution converged in 268 iterations\n\nEnd\n\nFinalising parallel run\n`,
      ),
    ).toMatchObject({
      version: "v2312",
      program: "simpleFoam",
      processes: 4,
      end: "ended",
      convergedAfter: 268,
      lastTime: 268,
      reason: "the solver's criterion was met after 268 iterations",
    });
  });

  test("a log that stops inside a step, and one that says nothing of an end", () => {
    expect(read(`${banner}${step("1")}Time = 2\n\nsmoothSolver:  Solving for Ux, Initial res`)).toMatchObject({
      end: "stopped",
      lastTime: 2,
      reason: "the log stops at time 2 without an error: the run was killed, or it still goes on",
    });
  });

  test("an End in the middle is not the end: the second run counts, and is counted", () => {
    const log = read(`${banner}${step("1")}End\n${banner}${step("2")}`);
    expect(log).toMatchObject({ runs: 2, end: "stopped", lastTime: 2, steps: 1 });
  });

  test("an error of one rank among the lines of others", () => {
    const log = read(
      `${banner}${step("1")}[1] \n[3] --> FOAM FATAL IO ERROR: (openfoam-2312)\n[1] --> FOAM FATAL IO ERROR: (openfoam-2312)\n[3] Unknown solver x\n[1] Unknown solver x\n[1] file: system/fvSolution.solvers.p at line 12.\n[1]     From static solver::New\nFOAM parallel run exiting\n--------------------------------------------------------------------------\nMPI_ABORT was invoked on rank 1\n`,
    );
    expect(log).toMatchObject({
      end: "failed",
      fatal: { message: "Unknown solver x", file: "system/fvSolution.solvers.p at line 12" },
    });
    expect(log.reason).toBe("fatal error at time 1: Unknown solver x");
  });

  test("an error text that is cut", () => {
    expect(read(`${banner}--> FOAM FATAL ERROR: \nCannot find patch`)).toMatchObject({
      end: "failed",
      reason: "fatal error before the first step: Cannot find patch",
    });
  });

  test.each([
    ["Killed", "the run was killed at time 1"],
    [
      "slurmstepd: error: *** JOB 12 ON n1 CANCELLED AT 2026-01-01T00:00:00 DUE TO TIME LIMIT ***",
      "the batch system ended the run at its time limit at time 1",
    ],
    ["terminate called after throwing an instance of 'std::bad_alloc'", "the machine ran out of memory at time 1"],
    ["#1  Foam::sigSegv::sigHandler(int) at ??:?", "a segmentation fault ended the run at time 1"],
    ["=   BAD TERMINATION OF ONE OF YOUR APPLICATION PROCESSES", "one of the parallel processes ended the run at time 1"],
  ])("killed from outside: %s", (line, reason) => {
    expect(read(`${banner}${step("1")}${line}\n`)).toMatchObject({ end: "failed", reason });
  });

  test("a healthy log raises no false alarm: trapping is on, a determinant is computed", () => {
    const log = read(`${banner}faces on cells with determinant < 0.001                : 0\n${step("1")}End\n`);
    expect(log).toMatchObject({ end: "ended", trapped: false, findings: [] });
  });
});

describe("what else a log tells", () => {
  test("the first initial residual of each field and step; a field not solved is missing", () => {
    const log = read(
      `${banner}${step("1")}Time = 2\n\nGAMG:  Solving for p, Initial residual = 0.2, Final residual = 0.01, No Iterations 3\nPCG:  Solving for Phi:  solution singularity\n`,
    );
    expect(log.residuals.map(({ name, values }) => [name, [...values]])).toEqual([
      ["Time", [1, 2]],
      ["Ux", [0.5, Number.NaN]],
      ["p", [0.25, 0.2]],
    ]);
  });

  test("times in hours, minutes and seconds; colour codes and carriage returns", () => {
    const log = read(
      `${banner}Time = 1\n\u001b[31mExecutionTime = 1:02:03.5 s  ClockTime = 01:02:04 s\u001b[0m\r\nprogress 10%\rEnd\n`,
    );
    expect(log).toMatchObject({ executionTime: 3723.5, clockTime: 3724, end: "ended" });
  });

  test("warnings that make results wrong without a stop", () => {
    const bounded = Array.from(
      { length: 20 },
      (_, index) => `${step(String(index + 1))}bounding k, min: -1 max: 2 average: 0.1\n`,
    ).join("");
    const log = read(
      `${banner}    Cannot find any patch or group names matching body_.*\nUnknown function type residuals\n${bounded}End\n`,
    );
    expect(log.findings.map(({ code, count }) => [code, count])).toEqual([
      ["unmatched-patches", 1],
      ["unknown-function", 1],
      ["bounding", 20],
    ]);
    expect(log.findings[0]!.message).toBe(
      "the solver found no patch or group that matches body_.*: its forces miss that part, or are exactly zero",
    );
  });

  test("an empty file is refused", () => {
    expect(() => readSolverLog(new Uint8Array(0), "log")).toThrowError("the file has no bytes");
  });

  test("endless lines are read in time that grows with their length", () => {
    const log = read(
      `${banner}${"#0 Foam::".repeat(100_000)}\n${"Solving for ".repeat(100_000)}\n${"negative ".repeat(50_000)}\nbounding ${"x".repeat(300_000)}\nEnd\n`,
    );
    expect(log.end).toBe("ended");
  });
});
