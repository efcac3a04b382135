import { rename, rm } from "node:fs/promises";
import { join } from "node:path";
import { exists, processorFolders, timeFolders } from "./case-files.js";
import { type CaseRun, endWith, goOn, type Phase } from "./case-run.js";
import { entryOf, hashOf, putBack, readControlDict, textForEnd, textForRun, writeControlDict } from "./control-dict.js";
import { HistoryFollower } from "./history-follower.js";
import { changedInputs, type Hashes, solutionInputs } from "./inputs.js";
import { atLimit, judgeSolve } from "./judge-solve.js";
import { listed, setAside } from "./mesh-case.js";
import type { ProgramResult } from "./program.js";
import { joinFields, placeFields } from "./start-point.js";
import { type Step, solveSteps } from "./steps.js";
import { type Watched, Watcher, type Watching } from "./watcher.js";

/**
 * Solves a meshed case from where it stands, until its targets hold, its limit is reached or something ends it. `start` puts fields to
 * start from into a case that has none but the uniform ones.
 */
export async function solveCase(run: CaseRun, start: (run: CaseRun) => Promise<Phase>): Promise<Phase> {
  const steps = solveSteps(run.ranks);
  const inputs = await solutionInputs(run.path);
  const done = await standing(run, inputs);
  if (done.end) {
    for (const step of steps) run.skip(step);
    return done;
  }
  const started = await start(run);
  if (started.end) return started;
  const { phase, from } = await placeFields(run);
  if (phase.end) return phase;
  const follower = new HistoryFollower(run.path);
  await follower.poll();
  follower.dropAfter(from);
  const solver = steps.find((step) => step.program === "simpleFoam")!;
  run.state.solution = { inputs, most: run.most, targets: targetsOf(run), ...(run.settings.careful ? { careful: true } : {}) };
  const solved = await runSolver(run, solver, inputs, follower, from);
  run.state.iterations = follower.iteration;
  if (solved.end && solved.state !== "settled" && solved.state !== "stopped-at-limit") return solved;
  if (run.ranks > 1) {
    const joined = await joinFields(run);
    if (joined.end) return joined;
  }
  await dropOldTimes(run);
  return solved;
}

const targetsOf = (run: CaseRun) => ({ drag: run.card.stop.drag, lift: run.card.stop.lift, confidence: run.card.stop.confidence });

const watchingOf = (run: CaseRun): Watching => ({
  targets: targetsOf(run),
  minimumWindow: run.settings.minimumWindow,
  testEvery: run.settings.testEvery,
});

/** Is there nothing left to solve? A changed set-up begins again; stricter targets or a higher limit go on. */
async function standing(run: CaseRun, inputs: Hashes): Promise<Phase> {
  const { solution, state, reason } = run.state;
  if (!solution) return goOn;
  const changed = changedInputs(solution.inputs, inputs);
  if (changed.length > 0) {
    run.remark(`The case is solved from the beginning: ${listed(changed)} changed.`);
    await setAside(run);
    run.state.solution = null;
    run.state.iterations = 0;
    run.state.settled = false;
    return goOn;
  }
  if (state === "diverged" && run.settings.careful && solution.careful !== true) {
    run.remark("The case diverged before; it is solved again from the beginning, the first iterations in first order.");
    await setAside(run);
    run.state.solution = null;
    run.state.iterations = 0;
    return goOn;
  }
  if (state === "diverged") {
    run.remark(
      "Nothing has changed since this case diverged; it is not run again. Try it with --careful, change its mesh or its schemes, or delete run-state.json.",
    );
    return endWith("diverged", reason);
  }
  if (state !== "settled" && state !== "stopped-at-limit") return goOn;
  if ((await processorFolders(run.path)).length > 0) return goOn;
  const { drag, lift, confidence } = targetsOf(run);
  const asStrict = drag >= solution.targets.drag && lift >= solution.targets.lift && confidence <= solution.targets.confidence;
  if (state === "settled") return asStrict ? endWith("settled", reason) : goOn;
  if (run.most > solution.most) return goOn;
  // At its limit all the same; with looser targets its history may be good enough now.
  const follower = new HistoryFollower(run.path);
  await follower.poll();
  const end = atLimit(run, follower, watchingOf(run), `the limit of ${solution.most} iterations is reached`);
  run.state.solution = { ...solution, targets: targetsOf(run) };
  return end;
}

async function runSolver(run: CaseRun, step: Step, inputs: Hashes, follower: HistoryFollower, from: number): Promise<Phase> {
  const watching = watchingOf(run);
  if (from >= run.most) {
    run.skip(step);
    return atLimit(run, follower, watching, `the limit of ${run.most} iterations is reached`);
  }
  const prepared = await readControlDict(run.path);
  await run.save("solving", "");
  await editControlDict(run, prepared, textForRun(prepared, run.most));
  await rotateLog(run.path, step.log);
  try {
    const { result, watched } = await watchSolver(run, step, inputs, follower, new Watcher(watching), from);
    return await judgeSolve({ run, step, follower, watching, result, watched, from });
  } finally {
    await restoreControlDict(run);
  }
}

/** Edits system/controlDict; the state knows of the edit before it is made, so that a killed run is put back in any case. */
async function editControlDict(run: CaseRun, prepared: string, text: string, options: { ahead?: boolean } = {}): Promise<void> {
  const before = run.state.controlDict?.editedHashes ?? [];
  run.state.controlDict = { prepared, editedHashes: [...before, hashOf(text)] };
  await run.save();
  await writeControlDict(run.path, text, options);
}

/** Puts system/controlDict back as it was prepared, also after a run that was killed. */
export async function restoreControlDict(run: CaseRun): Promise<void> {
  if (run.state.controlDict === null) return;
  const own = await putBack(run.path, run.state.controlDict);
  if (!own) run.remark("system/controlDict was changed while the case ran; it is left as it is now.");
  run.state.controlDict = null;
  await run.save();
}

async function watchSolver(
  run: CaseRun,
  step: Step,
  inputs: Hashes,
  follower: HistoryFollower,
  watcher: Watcher,
  from: number,
): Promise<{ result: ProgramResult; watched: Watched }> {
  const stop = new AbortController();
  const signal = AbortSignal.any([run.signal, stop.signal]);
  const pace = new Pace(run, from);
  let ended = false;
  let wake: () => void = () => undefined;
  const program = run.step(step, inputs, { signal }).finally(() => {
    ended = true;
    wake();
  });
  const seen: { now: Watched } = { now: { kind: "going", halfWidth: null, stillNeeded: null } };
  const look = async () => {
    await follower.poll();
    if (seen.now.kind === "going") seen.now = watcher.look(follower.time, follower.cd, follower.cl);
    pace.tell(follower, seen.now);
  };
  let asked = false;
  try {
    while (!ended) {
      await new Promise<void>((resolve) => {
        wake = resolve;
        setTimeout(resolve, run.settings.pollMilliseconds);
      });
      if (ended) break;
      await look();
      if (seen.now.kind === "diverged" || seen.now.kind === "no-force") stop.abort();
      if (seen.now.kind === "settled" && !asked) {
        asked = true;
        const { prepared } = run.state.controlDict!;
        await editControlDict(run, prepared, textForEnd(await readControlDict(run.path)), { ahead: true });
      }
    }
  } catch (error) {
    // Whatever went wrong here (a full disk, say), the solver must not go on without its watcher.
    stop.abort();
    await program.catch(() => undefined);
    throw error;
  }
  const result = await program;
  await look();
  return { result, watched: seen.now };
}

/** Tells of the iterations of one start; their pace is taken from the first one seen on, without the time the solver took to start. */
class Pace {
  private first: { iteration: number; at: number } | null = null;
  private told: number;

  constructor(
    private readonly run: CaseRun,
    from: number,
  ) {
    this.told = from;
  }

  tell(follower: HistoryFollower, watched: Watched): void {
    const { run } = this;
    const { iteration } = follower;
    if (iteration <= this.told) return;
    this.told = iteration;
    const now = performance.now();
    this.first ??= { iteration, at: now };
    const since = iteration - this.first.iteration;
    const toLimit = run.most - iteration;
    const needed = watched.kind === "going" ? watched.stillNeeded : 0;
    run.emit({
      event: "iteration",
      case: run.path,
      iteration,
      most: run.most,
      cd: follower.cd.at(-1) ?? null,
      halfWidth: watched.kind === "going" || watched.kind === "settled" ? watched.halfWidth : null,
      secondsLeft: since === 0 ? null : ((now - this.first.at) / 1000 / since) * Math.min(toLimit, needed ?? toLimit),
    });
  }
}

/** The solver deletes old times by "purgeWrite" only among those of its own start; here they go for all starts of the case. */
async function dropOldTimes(run: CaseRun): Promise<void> {
  const kept = Number(entryOf(await readControlDict(run.path), "purgeWrite") ?? 0);
  if (!Number.isInteger(kept) || kept <= 0) return;
  const times = (await timeFolders(run.path)).filter((name) => Number(name) !== 0);
  for (const name of times.slice(0, -kept)) await rm(join(run.path, name), { recursive: true, force: true });
}

/** Keeps the log of an earlier start as log.simpleFoam.1, .2 and so on, the highest number being the latest of them. */
async function rotateLog(casePath: string, log: string): Promise<void> {
  if (!(await exists(join(casePath, log)))) return;
  let number = 1;
  while (await exists(join(casePath, `${log}.${number}`))) number += 1;
  await rename(join(casePath, log), join(casePath, `${log}.${number}`));
}
