import { statfs } from "node:fs/promises";
import { join } from "node:path";
import type { RunCard } from "../case/run-card.js";
import type { SolverEnvironment } from "../openfoam/environment.js";
import { hashOf } from "./control-dict.js";
import type { CaseState, RunEvent } from "./events.js";
import { explainFailure } from "./failure.js";
import type { Hashes } from "./inputs.js";
import { type ProgramResult, runProgram } from "./program.js";
import { type RunState, type StepRecord, writeRunState } from "./run-state.js";
import { commandOf, type Step } from "./steps.js";
import type { Workplace } from "./workplace.js";

export interface RunSettings {
  mostIterations: number | undefined;
  /** A start from uniform flow begins in first order. */
  careful: boolean;
  pollMilliseconds: number;
  testEvery: number;
  minimumWindow: number;
  graceMilliseconds: number;
}

/** One case, or one rung of its ladder, while it is run: what it is, where it stands, and how its programs are started. */
export class CaseRun {
  private readonly began = performance.now();
  private readonly secondsBefore: number;
  /** A run that finds everything done adds nothing to the case's time. */
  private worked = false;

  readonly path: string;
  readonly card: RunCard;
  readonly solver: SolverEnvironment;
  readonly ranks: number;
  /** Ranks that a mesh of so many cells is solved on. */
  readonly ranksFor: (cells: number) => number;
  readonly state: RunState;
  readonly settings: RunSettings;
  readonly signal: AbortSignal;
  readonly emit: (event: RunEvent) => void;
  readonly workplace: Workplace;

  constructor(
    given: Pick<CaseRun, "path" | "card" | "solver" | "ranksFor" | "state" | "settings" | "signal" | "emit" | "workplace">,
  ) {
    this.path = given.path;
    this.workplace = given.workplace;
    this.card = given.card;
    this.solver = given.solver;
    this.ranksFor = given.ranksFor;
    this.ranks = given.ranksFor(given.card.mesh.predictedCells);
    this.state = given.state;
    this.settings = given.settings;
    this.signal = given.signal;
    this.emit = given.emit;
    this.secondsBefore = given.state.seconds;
  }

  /** Wall seconds of this run alone. */
  get seconds(): number {
    return (performance.now() - this.began) / 1000;
  }

  get most(): number {
    return this.settings.mostIterations ?? this.card.mostIterations;
  }

  remark(message: string): void {
    this.emit({ event: "remark", case: this.path, message });
  }

  async save(state?: CaseState, reason?: string): Promise<void> {
    if (state !== undefined) this.state.state = state;
    if (reason !== undefined) this.state.reason = reason;
    this.state.seconds = this.secondsBefore + (this.worked ? this.seconds : 0);
    await writeRunState(this.path, this.state);
  }

  recordOf(step: string): StepRecord | undefined {
    return this.state.steps.find(({ name }) => name === step);
  }

  skip(step: Step): void {
    this.emit({ event: "step-end", case: this.path, step: step.name, seconds: 0, skipped: true });
  }

  /** Runs one step; its record is in the state file while it runs and after it ended. `signal` in place of the run's own, if given. */
  async step(
    step: Step,
    inputs: Hashes,
    options: { marker?: string; signal?: AbortSignal; workplace?: Workplace } = {},
  ): Promise<ProgramResult> {
    this.emit({ event: "step-start", case: this.path, step: step.name });
    this.worked = true;
    const record: StepRecord = {
      name: step.name,
      state: "running",
      log: step.log,
      inputs: hashOf(JSON.stringify(inputs)),
      seconds: 0,
      exitCode: null,
      signal: null,
      peakMemory: null,
      ended: null,
    };
    this.state.steps = [...this.state.steps.filter(({ name }) => name !== step.name), record];
    let noted: Promise<unknown> = Promise.resolve();
    const workplace = options.workplace ?? this.workplace;
    const { program, args } = commandOf(step, this.solver.path, this.solver.mpirun);
    const result = await runProgram({
      program,
      args: [...args, ...workplace.args],
      cwd: workplace.cwd,
      env: this.solver.env,
      log: join(this.path, step.log),
      signal: options.signal ?? this.signal,
      graceMilliseconds: this.settings.graceMilliseconds,
      ...(options.marker === undefined ? {} : { marker: options.marker }),
      onStart: (pid) => {
        this.state.running = { program: step.program, pid, cwd: workplace.cwd };
        noted = this.save().then(
          () => null,
          (error: unknown) => error,
        );
      },
    });
    const trouble = await noted;
    if (trouble) throw trouble;
    this.state.running = null;
    const good = result.exitCode === 0 && !result.aborted;
    Object.assign(record, {
      state: good ? "done" : result.aborted ? "interrupted" : "failed",
      seconds: result.seconds,
      exitCode: result.exitCode,
      signal: result.signal,
      peakMemory: result.peakMemory,
      ended: new Date().toISOString(),
    });
    await this.save();
    this.emit({ event: "step-end", case: this.path, step: step.name, seconds: result.seconds, skipped: false });
    return result;
  }

  /** Why a step failed, in words. */
  async failure(step: Step, result: ProgramResult): Promise<string> {
    const said = await explainFailure(step.name, result, step.log, join(this.path, step.log));
    const disk = await statfs(this.path).catch(() => null);
    const full = disk !== null && disk.bavail * disk.bsize < 1_000_000 && !said.includes("the disk is full");
    return full ? `${said}; the disk is full` : said;
  }
}

/** What a phase of a case came to: go on with the next, or an end with its state and reason. */
export type Phase = { end: false } | { end: true; state: CaseState; reason: string };

export const goOn: Phase = { end: false };
export const endWith = (state: CaseState, reason: string): Phase => ({ end: true, state, reason });
