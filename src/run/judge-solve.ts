import { readFile } from "node:fs/promises";
import { join } from "node:path";
import { Problem } from "../errors.js";
import { readSolverLog, type SolverLog } from "../openfoam/solver-log.js";
import { type CaseRun, endWith, type Phase } from "./case-run.js";
import { lastSolved } from "./failure.js";
import type { HistoryFollower } from "./history-follower.js";
import type { ProgramResult } from "./program.js";
import { findStartPoint } from "./start-point.js";
import type { Step } from "./steps.js";
import { testTargets, type Watched, type Watching } from "./watcher.js";

/** What is known of a solver's run when it has ended. */
export interface Solved {
  run: CaseRun;
  step: Step;
  follower: HistoryFollower;
  watching: Watching;
  result: ProgramResult;
  watched: Watched;
  /** Iteration that it went on from. */
  from: number;
}

/** The state that a solver's end brings the case to, with the reason. Reads the log; tells what it warns of. */
export async function judgeSolve({ run, step, follower, watching, result, watched, from }: Solved): Promise<Phase> {
  const bytes = await readFile(join(run.path, step.log)).catch(() => Buffer.alloc(0));
  const log = readLog(bytes, step.log);
  const last = lastSolved(bytes.subarray(-65_536).toString("latin1"));
  const where = `${last ? `; last solved ${last.field}, initial residual ${last.residual}` : ""}; log: ${step.log}`;
  for (const { severity, message, remedy } of log?.findings ?? [])
    if (severity !== "note") run.remark(`${step.name}: ${message}. ${remedy}`);
  if (watched.kind === "diverged") return endWith("diverged", `${watched.reason}${where}`);
  if (watched.kind === "no-force") return endWith("failed", `${watched.reason}; log: ${step.log}`);
  if (result.aborted || run.signal.aborted) {
    const point = await findStartPoint(run);
    const written = Math.max(Number(point.whole), Number(point.divided ?? 0));
    return endWith("interrupted", `interrupted at iteration ${follower.iteration}; the next run goes on from ${written}`);
  }
  if (result.signal === "SIGFPE" || (result.exitCode !== 0 && log?.trapped)) {
    return endWith("diverged", `floating point trap after iteration ${follower.iteration}${where}`);
  }
  if (result.exitCode !== 0) return endWith("failed", await run.failure(step, result));
  if (log?.end !== "ended")
    return endWith("failed", `${step.name} stopped without saying why (its log has no line End); log: ${step.log}`);
  if (follower.iteration <= from)
    return endWith("failed", `${step.name} ended but wrote no history of coefficients; log: ${step.log}`);
  const own = log.convergedAfter;
  const reason =
    own === null ? `the limit of ${run.most} iterations is reached` : `the solver's residual control ended it at iteration ${own}`;
  return watched.kind === "settled" ? settledWith(run, watched.reason) : atLimit(run, follower, watching, reason);
}

/** A run that came to its limit: settled all the same if its history says so. */
export function atLimit(run: CaseRun, follower: HistoryFollower, watching: Watching, reason: string): Phase {
  const test = testTargets(follower.cd, follower.cl, watching);
  return test.met ? settledWith(run, test.reason) : endWith("stopped-at-limit", `${reason}: ${test.reason}`);
}

function settledWith(run: CaseRun, reason: string): Phase {
  run.state.settled = true;
  return endWith("settled", reason);
}

/** null for a log that is empty or no text: the program or the disk ended before it wrote one. */
function readLog(bytes: Uint8Array, name: string): SolverLog | null {
  try {
    return readSolverLog(bytes, name);
  } catch (error) {
    if (error instanceof Problem) return null;
    throw error;
  }
}
