import { readFile } from "node:fs/promises";
import { hostname } from "node:os";
import { join } from "node:path";
import writeFileAtomic from "write-file-atomic";
import { inputProblem } from "../errors.js";
import type { ControlEdit } from "./control-dict.js";
import type { CaseState } from "./events.js";
import type { Hashes } from "./inputs.js";
import { isAlive } from "./program.js";

export const runStateName = "run-state.json";

export interface StepRecord {
  name: string;
  state: "running" | "done" | "failed" | "interrupted";
  log: string;
  /** sha256 over the hashes of all files that the step depended on */
  inputs: string;
  seconds: number;
  exitCode: number | null;
  signal: string | null;
  /** bytes; null when unknown */
  peakMemory: number | null;
  /** ISO 8601 */
  ended: string | null;
}

/** What a run leaves in the case folder of where it stands; the next run goes on from it. */
export interface RunState {
  schema: "dragledger/run-state/1";
  state: CaseState;
  reason: string;
  iterations: number;
  settled: boolean;
  /** wall time of all runs of this case together */
  seconds: number;
  /** ISO 8601 */
  updated: string;
  /** The process that runs the case; null when none does. */
  owner: { pid: number; host: string } | null;
  /** The program that was started last and has not been seen to end. */
  running: { program: string; pid: number; cwd: string } | null;
  steps: StepRecord[];
  mesh: { inputs: Hashes; cells: number; remarks: string[] } | null;
  /** `careful`: begun in first order where it started from uniform flow */
  solution: {
    inputs: Hashes;
    most: number;
    targets: { drag: number; lift: number; confidence: number };
    careful?: true;
  } | null;
  /** Set while system/controlDict is not as it was prepared. */
  controlDict: ControlEdit | null;
}

export const freshState = (): RunState => ({
  schema: "dragledger/run-state/1",
  state: "prepared",
  reason: "not run yet",
  iterations: 0,
  settled: false,
  seconds: 0,
  updated: new Date().toISOString(),
  owner: null,
  running: null,
  steps: [],
  mesh: null,
  solution: null,
  controlDict: null,
});

/** The state of a case as it was left, null when it was never run. Throws Problem (input) for a file that is not one. */
export async function readRunState(casePath: string): Promise<RunState | null> {
  const file = join(casePath, runStateName);
  let text: string;
  try {
    text = await readFile(file, "utf8");
  } catch (error) {
    if ((error as NodeJS.ErrnoException).code === "ENOENT") return null;
    throw error;
  }
  try {
    const state = JSON.parse(text) as RunState;
    if (state.schema === "dragledger/run-state/1" && Array.isArray(state.steps)) return { ...freshState(), ...state };
  } catch {
    // Told below: what it is instead does not matter.
  }
  throw inputProblem({
    code: "run-state-unreadable",
    message: `${runStateName} is not the state of a run that this version can read.`,
    where: file,
    remedy: "Delete this file: the next run then meshes and solves the case from the beginning.",
  });
}

export async function writeRunState(casePath: string, state: RunState): Promise<void> {
  state.updated = new Date().toISOString();
  await writeFileAtomic(join(casePath, runStateName), `${JSON.stringify(state, null, 1)}\n`);
}

export const thisProcess = (): { pid: number; host: string } => ({ pid: process.pid, host: hostname() });

/** Is the run that owns the state still going, as far as this machine can tell? True for one on another machine. */
export function ownerLives(state: RunState): boolean {
  if (state.owner === null) return false;
  return state.owner.host !== hostname() || isAlive(state.owner.pid);
}
