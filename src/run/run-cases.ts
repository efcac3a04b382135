import { constants } from "node:fs";
import { access, realpath } from "node:fs/promises";
import { availableParallelism } from "node:os";
import { join } from "node:path";
import PQueue from "p-queue";
import { readRunCard } from "../case/read-run-card.js";
import { type RunCard, runCardName } from "../case/run-card.js";
import { inputProblem, Problem, toolProblem } from "../errors.js";
import { fewestRows } from "../history/settle.js";
import { findSolver, howToGetSolver, type SolverEnvironment, usableMemory } from "../openfoam/environment.js";
import { type CaseLock, lockCase, refuseOrphan } from "./case-lock.js";
import { CaseRun, endWith, type Phase, type RunSettings } from "./case-run.js";
import type { CaseOutcome, RunEvent } from "./events.js";
import { ladderSteps, startOnLadder } from "./ladder.js";
import { meshCase, stepsToMesh } from "./mesh-case.js";
import { freshState, ownerLives, type RunState, readRunState, thisProcess, writeRunState } from "./run-state.js";
import { restoreControlDict, solveCase } from "./solve-case.js";
import { mapStep, solveSteps } from "./steps.js";
import { openWorkplace, type Workplace } from "./workplace.js";

export interface RunOptions {
  /** Cores to use in all; all of the machine's when left out. */
  cores?: number | undefined;
  /** Cases side by side; as many as there are cores and cases when left out. */
  atOnce?: number | undefined;
  /** Ends the run: the programs are ended, what is written stays, the cases can be run on. */
  signal?: AbortSignal | undefined;
  /** Limit of iterations in place of the run cards'. */
  mostIterations?: number | undefined;
  /** Begins cases that start from uniform flow in first order, and gives one that diverged another try. */
  careful?: boolean | undefined;
  /** The solver to use; searched for when left out. */
  solver?: SolverEnvironment | undefined;
  /** How often a running solver is looked at. */
  pollMilliseconds?: number | undefined;
  /** Iterations from one test of the targets to the next. */
  testEvery?: number | undefined;
  /** Fewest iterations that a mean is taken over. */
  minimumWindow?: number | undefined;
  /** How long a program may take to end when asked. */
  graceMilliseconds?: number | undefined;
  /** A case is divided over no more ranks than leave each this many cells. */
  leastCellsPerRank?: number | undefined;
}

interface Held {
  path: string;
  card: RunCard;
  state: RunState;
  lock: CaseLock;
  workplace: Workplace;
  lost: AbortController;
}

/**
 * Meshes, checks and solves cases, several side by side, and ends each when its targets hold. Goes on where an earlier run ended; what is
 * done is not done again. One outcome per path, in their order (a path named twice is run once).
 *
 * Starts processes, writes into the case folders. Throws Problem (input) before anything is started for a folder that is no case, cannot
 * be written or is being run already, and Problem (tool) when a program is missing. A case that fails is an outcome, not an exception.
 */
export async function runCases(paths: string[], options: RunOptions, onEvent: (event: RunEvent) => void): Promise<CaseOutcome[]> {
  const unique = [...new Set(await Promise.all(paths.map(canonical)))];
  const cards = await Promise.all(unique.map(readCard));
  const solver = options.solver ?? (await findSolver()) ?? (await noSolver());
  await requirePrograms(
    solver,
    unique,
    cards.some((card) => (card.ladder ?? []).length > 0),
  );
  const held: Held[] = [];
  try {
    for (const [index, path] of unique.entries()) held.push(await hold(path, cards[index]!));
    const outcomes = await runHeld(held, solver, options, onEvent);
    const byPath = new Map(outcomes.map((outcome) => [outcome.path, outcome]));
    return await Promise.all(paths.map(async (path) => byPath.get(await canonical(path))!));
  } finally {
    await Promise.all(held.flatMap(({ lock, workplace }) => [lock.release(), workplace.leave()]));
  }
}

/** Where a case stands, without running it. Reads files. Throws Problem (input) for a folder that is no case of this program. */
export async function caseState(path: string): Promise<CaseOutcome> {
  const folder = await canonical(path);
  const state = await readRunState(folder);
  if (state === null) {
    await readCard(folder);
    return outcomeOf(folder, freshState());
  }
  const outcome = outcomeOf(folder, state);
  const going = state.state === "meshing" || state.state === "meshed" || state.state === "solving";
  return going && !ownerLives(state) ? { ...outcome, state: "interrupted", reason: "its run ended without a word" } : outcome;
}

async function runHeld(
  held: Held[],
  solver: SolverEnvironment,
  options: RunOptions,
  onEvent: (event: RunEvent) => void,
): Promise<CaseOutcome[]> {
  const cores = Math.max(1, options.cores ?? availableParallelism());
  const wanted = Math.max(1, Math.min(options.atOnce ?? cores, held.length, cores));
  const atOnce = fittingMemory(held, wanted, onEvent);
  const share = Math.floor(cores / atOnce);
  if (solver.mpirun === null && share > 1) {
    onEvent({
      event: "remark",
      case: held[0]!.path,
      message: "mpirun was not found: each case runs on one core. `dragledger environment` says how to get it.",
    });
  }
  // Measured with 2 800 cells on 2 cores: two ranks took longer than one, they mostly wait for each other.
  const leastCells = options.leastCellsPerRank ?? 5000;
  const ranksFor = (cells: number) => (solver.mpirun === null ? 1 : Math.max(1, Math.min(share, Math.floor(cells / leastCells))));
  const settings: RunSettings = {
    mostIterations: options.mostIterations,
    careful: options.careful ?? false,
    pollMilliseconds: options.pollMilliseconds ?? 500,
    testEvery: options.testEvery ?? 20,
    minimumWindow: options.minimumWindow ?? fewestRows,
    graceMilliseconds: options.graceMilliseconds ?? 10_000,
  };
  const queue = new PQueue({ concurrency: atOnce });
  const defect = new AbortController();
  const results = await Promise.allSettled(
    held.map((one) =>
      queue.add(async () => {
        const signals = [one.lost.signal, defect.signal, ...(options.signal ? [options.signal] : [])];
        const run = new CaseRun({
          path: one.path,
          card: one.card,
          solver,
          ranksFor,
          state: one.state,
          settings,
          signal: AbortSignal.any(signals),
          emit: onEvent,
          workplace: one.workplace,
        });
        try {
          const outcome = await runOne(run);
          if (one.lost.signal.aborted)
            run.remark("This case was ended because its lock was lost: the machine slept, or another run took it over.");
          return outcome;
        } catch (error) {
          defect.abort();
          throw error;
        }
      }),
    ),
  );
  const failed = results.find((result) => result.status === "rejected");
  if (failed) throw failed.reason;
  return results.map((result) => (result as PromiseFulfilledResult<CaseOutcome>).value);
}

async function runOne(run: CaseRun): Promise<CaseOutcome> {
  const own = solveSteps(run.ranks).map(({ name }) => name);
  const steps = [...(await stepsToMesh(run.path)).map(({ name }) => name), ...(await ladderSteps(run)), ...own];
  run.emit({ event: "case-start", case: run.path, steps });
  const end = await phasesOf(run).catch((error: unknown) => fileTrouble(error));
  run.state.owner = null;
  if (end.end) {
    run.state.settled = end.state === "settled";
    await run.save(end.state, end.reason).catch((error: unknown) => fileTrouble(error));
  }
  const outcome = outcomeOf(run.path, run.state);
  run.emit({ event: "case-end", case: run.path, state: outcome.state, seconds: run.seconds, reason: outcome.reason });
  return outcome;
}

async function phasesOf(run: CaseRun): Promise<Phase> {
  if (run.signal.aborted) return endWith("interrupted", "interrupted before it was begun");
  await restoreControlDict(run);
  const meshed = await meshCase(run);
  return meshed.end ? meshed : solveCase(run, startOnLadder);
}

/** A full or read-only disk ends one case with a reason; any other exception is a defect and goes on up. */
function fileTrouble(error: unknown): Phase {
  if (error instanceof Problem) return endWith("failed", `${error.message} ${error.remedy}`);
  const { code, path } = error as NodeJS.ErrnoException;
  const meaning: Record<string, string> = {
    ENOSPC: "the disk is full",
    EDQUOT: "the disk quota is used up",
    EROFS: "the folder is on a read-only disk",
    EACCES: "the folder may not be written",
    EPERM: "the folder may not be written",
  };
  const said = code === undefined ? undefined : meaning[code];
  if (said === undefined) throw error;
  return endWith("failed", `${said}${path ? ` (${path})` : ""}; make room or choose another folder, then run again`);
}

/**
 * Fewer cases side by side when their meshers together would not fit into memory. Peak of the mesher, measured: 105 MB and 1.6 kB per
 * cell; a fifth is added for other programs.
 */
function fittingMemory(held: Held[], wanted: number, onEvent: (event: RunEvent) => void): number {
  const needs = held.map(({ card }) => 1.2 * (105e6 + 1600 * card.mesh.predictedCells)).sort((a, b) => b - a);
  const memory = usableMemory();
  const gigabytes = (bytes: number) => (bytes / 1e9).toFixed(1);
  let atOnce = wanted;
  while (atOnce > 1 && needs.slice(0, atOnce).reduce((sum, need) => sum + need, 0) > memory) atOnce -= 1;
  const tell = (message: string) => onEvent({ event: "remark", case: held[0]!.path, message });
  if (atOnce < wanted)
    tell(`${atOnce} instead of ${wanted} cases run side by side: ${wanted} would not fit into ${gigabytes(memory)} GB of memory.`);
  if (needs[0]! > memory)
    tell(
      `The largest case will need about ${gigabytes(needs[0]!)} GB of memory, and there are ${gigabytes(memory)} GB: it may be ended by the system.`,
    );
  return atOnce;
}

async function hold(path: string, card: RunCard): Promise<Held> {
  const lost = new AbortController();
  for (const folder of [path, join(path, "system")]) {
    await access(folder, constants.W_OK).catch((error: NodeJS.ErrnoException) => {
      throw inputProblem({
        code: "case-not-writable",
        message: `The case folder cannot be written (${error.code}); a run writes its mesh, fields, histories and logs there.`,
        where: folder,
        remedy: "Change its permissions, or prepare the study in another folder.",
        cause: error,
      });
    });
  }
  const lock = await lockCase(path, () => lost.abort());
  try {
    for (const folder of ["", ...(card.ladder ?? []).map((rung) => rung.folder)]) await refuseOrphan(join(path, folder));
    const state = (await readRunState(path)) ?? freshState();
    state.owner = thisProcess();
    await writeRunState(path, state);
    return { path, card, state, lock, lost, workplace: await openWorkplace(path) };
  } catch (error) {
    await lock.release();
    throw error;
  }
}

async function canonical(path: string): Promise<string> {
  return realpath(path).catch((error: NodeJS.ErrnoException) => {
    throw inputProblem({
      code: "missing-path",
      message: `There is no such case folder (${error.code}).`,
      where: path,
      remedy: "Check the path, or write the case with `dragledger prepare`.",
      cause: error,
    });
  });
}

async function readCard(path: string): Promise<RunCard> {
  const card = await readRunCard(path);
  if (card) return card;
  throw inputProblem({
    code: "not-a-prepared-case",
    message: `This folder has no ${runCardName}: it was not written by this program, so its parts, targets and limit are not known.`,
    where: path,
    remedy:
      "Write a case with `dragledger prepare <study.yaml>` and run that; finished runs of any case can be read by `history`, `converged` and `ledger`.",
  });
}

async function noSolver(): Promise<never> {
  throw toolProblem({
    code: "solver-missing",
    message: "OpenFOAM, which meshes and solves, was not found.",
    remedy: `To get it: ${await howToGetSolver()}. \`dragledger environment\` shows what is here.`,
  });
}

/** All programs are looked for before the first is started: a night's run must not end at its last step for want of one. */
async function requirePrograms(solver: SolverEnvironment, paths: string[], ladder: boolean): Promise<void> {
  const parallel = solver.mpirun === null ? [] : solveSteps(2);
  const mapping = ladder ? [mapStep("")] : [];
  const steps = [...(await Promise.all(paths.map(stepsToMesh))).flat(), ...mapping, ...solveSteps(1), ...parallel];
  const missing: string[] = [];
  for (const program of new Set(steps.map((step) => step.program))) {
    await access(join(solver.path, program), constants.X_OK).catch(() => missing.push(program));
  }
  if (missing.length === 0) return;
  throw toolProblem({
    code: "solver-incomplete",
    message: `This OpenFOAM (${solver.version}) lacks ${missing.join(", ")}.`,
    where: solver.path,
    remedy: `Install all of OpenFOAM v1912 or later (www.openfoam.com line): ${await howToGetSolver()}. Another installation is chosen by DRAGLEDGER_OPENFOAM.`,
  });
}

const outcomeOf = (path: string, state: RunState): CaseOutcome => ({
  path,
  state: state.state,
  iterations: state.iterations,
  settled: state.settled,
  seconds: state.seconds,
  reason: state.reason,
});
