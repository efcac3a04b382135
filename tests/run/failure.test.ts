import { writeFile } from "node:fs/promises";
import { join } from "node:path";
import { describe, expect, test } from "vitest";
import { causeOf, explainFailure, lastSolved } from "../../src/run/failure.js";
import { temporaryFolder } from "./stand-in.js";

// The texts are those of v1912, seen in trials with small cases of our own.
const healthy = `Build  : OPENFOAM=1912 patch=200626
trapFpe: Floating point exception trapping enabled (FOAM_SIGFPE).
minDeterminant 0.001;
smoothSolver:  Solving for Ux, Initial residual = 0.01, Final residual = 0.0004, No Iterations 3
GAMG:  Solving for p, Initial residual = 0.0212, Final residual = 0.0009, No Iterations 4
End
`;

describe("causes in logs", () => {
  test("a healthy log has none, though its banner speaks of floating point exceptions", () => {
    expect(causeOf(healthy)).toBe(null);
    expect(lastSolved(healthy)).toEqual({ field: "p", residual: "0.0212" });
    expect(lastSolved("nothing")).toBe(null);
  });

  test("fatal errors: three lines of the first one, rank numbers off", () => {
    const log = `${healthy}[1] \n[1] \n[1] --> FOAM FATAL ERROR: \n[1] Cannot find patchField entry for body_nose\n[1] \n[1] file: 0/U.boundaryField from line 2 to line 3.\n[1] \n[1]     From function Foam::Field\n[1] FOAM parallel run exiting\n`;
    expect(causeOf(log)).toBe(
      "FOAM FATAL ERROR: Cannot find patchField entry for body_nose (0/U.boundaryField from line 2 to line 3)",
    );
    expect(causeOf("--> FOAM FATAL ERROR :\n    Could not find mandatory etc entry (mode=ugo)\n    'controlDict'\n\n")).toBe(
      "FOAM FATAL ERROR: Could not find mandatory etc entry (mode=ugo) 'controlDict'",
    );
  });

  test("colour codes and control characters of a log do not reach the message", () => {
    const cause = causeOf("\u001b[31m--> FOAM FATAL ERROR: \u001b[0m\n bad\u0007 \u001b]0;title\u0007 name\r\n\nFOAM exiting\n");
    expect(cause).toBe("FOAM FATAL ERROR: bad\ufffd \ufffd]0;title\ufffd name");
    expect(cause).not.toMatch(/\p{Cc}/u);
  });

  test("an endless line is cut", () => {
    expect(causeOf(`--> FOAM FATAL ERROR: \n${"x".repeat(10_000)}\n`)).toHaveLength(400);
  });
});

describe("what a failure means", () => {
  const result = { exitCode: 1, signal: null, seconds: 1, peakMemory: null, aborted: false, notStarted: null };
  test.each([
    ["Invalid option: -noFields", "this version of the solver's programs does not know an option that is used here"],
    [
      "There are not enough slots available in the system to satisfy the 3 slots",
      "MPI sees fewer cores than ranks; use fewer cores",
    ],
    [
      "mpirun has detected an attempt to run as root.",
      "MPI does not start as root without OMPI_ALLOW_RUN_AS_ROOT=1 and OMPI_ALLOW_RUN_AS_ROOT_CONFIRM=1",
    ],
    ["simpleFoam: error while loading shared libraries: libx.so", "the installation of the solver is not complete"],
    [
      "mpirun noticed that process rank 1 exited on signal 9 (Killed).",
      "ended from outside; the machine may have run out of memory",
    ],
  ])("%s", async (line, meaning) => {
    const log = join(await temporaryFolder(), "log.x");
    await writeFile(log, `${healthy}${line}\n`);
    expect(await explainFailure("step", result, "log.x", log)).toBe(`step ended with code 1; log: log.x; ${line}; ${meaning}`);
  });

  test("without a log, without a start", async () => {
    expect(await explainFailure("step", result, "log.x", "/nowhere/log.x")).toBe("step ended with code 1; log: log.x");
    expect(await explainFailure("step", { ...result, exitCode: null, notStarted: "ENOENT" }, "log.x", "/nowhere/log.x")).toBe(
      "step could not be started (ENOENT)",
    );
  });
});
