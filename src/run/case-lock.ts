import { readlink, rm } from "node:fs/promises";
import { join } from "node:path";
import { lock } from "proper-lockfile";
import { inputProblem } from "../errors.js";
import { isAlive } from "./program.js";
import { ownerLives, readRunState } from "./run-state.js";

const lockName = "run.lock";
/** A lock whose holder has not renewed it for this long is taken over, wherever its holder was. */
const staleMilliseconds = 30_000;

export interface CaseLock {
  release: () => Promise<void>;
}

/**
 * Takes a case for this process: one run at a time. A lock left behind by a process that is gone is taken over at once when it ran on
 * this machine. Throws Problem (input) that names the process when the case is taken.
 *
 * `onLost` is called when the lock was taken over by somebody else, after the machine slept for instance.
 */
export async function lockCase(casePath: string, onLost: () => void): Promise<CaseLock> {
  try {
    return await take(casePath, onLost);
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code !== "ELOCKED") throw error;
  }
  const state = await readRunState(casePath);
  if (state?.owner && !ownerLives(state)) {
    await rm(join(casePath, lockName), { recursive: true, force: true });
    return take(casePath, onLost).catch((error: NodeJS.ErrnoException) => {
      throw error.code === "ELOCKED" ? taken(casePath, null) : error;
    });
  }
  throw taken(casePath, state?.owner ?? null);
}

async function take(casePath: string, onLost: () => void): Promise<CaseLock> {
  const unlock = await lock(casePath, {
    lockfilePath: join(casePath, lockName),
    stale: staleMilliseconds,
    update: staleMilliseconds / 3,
    realpath: false,
    onCompromised: onLost,
  });
  return { release: () => unlock().catch(() => undefined) };
}

const taken = (casePath: string, owner: { pid: number; host: string } | null) =>
  inputProblem({
    code: "case-is-running",
    message: `This case is being run already${owner ? ` by process ${owner.pid} on ${owner.host}` : ""}.`,
    where: casePath,
    remedy: "Wait until that run has ended, or end it first (Ctrl-C there); it keeps what it has written.",
  });

/**
 * Throws Problem (input) when a program of an earlier run still works in the case although its run is gone (killed, say): a second
 * solver in the same folder would spoil both. Told apart from an unrelated process with the same id by its folder, where /proc shows it.
 */
export async function refuseOrphan(casePath: string): Promise<void> {
  const running = (await readRunState(casePath))?.running;
  if (!running || !isAlive(running.pid)) return;
  const folder = await readlink(`/proc/${running.pid}/cwd`).catch(() => null);
  if (folder !== running.cwd) return;
  throw inputProblem({
    code: "program-still-running",
    message: `${running.program} (process ${running.pid}), started by a run that is gone, still works in this case.`,
    where: casePath,
    remedy: `End it (kill ${running.pid}) or wait until it ends, then run again: the case goes on from its last written iteration.`,
  });
}
