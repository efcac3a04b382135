import { mkdir, readdir, rm, writeFile } from "node:fs/promises";
import { join } from "node:path";
import { flawOfTime, processorFolders, timeFolders } from "./case-files.js";
import { type CaseRun, endWith, goOn, type Phase } from "./case-run.js";
import { decompositionFile, decompositionText, divideStep, joinStep } from "./steps.js";

/** Fields that a solver needs to go on, where the case has them. */
export const carriedFields = ["U", "p", "k", "omega", "epsilon", "nuTilda", "nut"];

/** Where the solution of a case stands on disk. */
export interface StartPoint {
  /** Latest whole time of the undivided case; "0" at least. */
  whole: string;
  /** Latest time that is whole in every processor folder; null when the case is not divided. */
  divided: string | null;
  /** Processor folders there are. */
  processors: number;
}

/**
 * Finds the latest time that a solver can go on from. A time folder that is not whole (the machine or the solver stopped while writing
 * it) is deleted with a remark, so that "latest time" means the one before.
 */
export async function findStartPoint(run: CaseRun): Promise<StartPoint> {
  const fields = (await readdir(join(run.path, "0")).catch(() => [] as string[])).map((name) => name.replace(/\.gz$/, ""));
  const needed = carriedFields.filter((name) => name === "U" || name === "p" || fields.includes(name));
  const processors = await processorFolders(run.path);
  const whole = await latestWhole(run, [run.path], needed);
  const divided =
    processors.length > 0
      ? await latestWhole(
          run,
          processors.map((name) => join(run.path, name)),
          needed,
        )
      : null;
  return { whole, divided, processors: processors.length };
}

/** Is there a flow to go on from, or only the uniform one? */
export async function hasFlow(run: CaseRun): Promise<boolean> {
  const { whole, divided } = await findStartPoint(run);
  return Number(whole) > 0 || Number(divided ?? 0) > 0;
}

async function latestWhole(run: CaseRun, folders: string[], fields: string[]): Promise<string> {
  const times = new Set((await Promise.all(folders.map(timeFolders))).flat());
  const descending = [...times].sort((a, b) => Number(b) - Number(a));
  for (const time of descending) {
    if (Number(time) === 0) return time;
    const flaws = await Promise.all(folders.map((folder) => flawOfTime(join(folder, time), fields)));
    const flaw = flaws.find((each) => each !== null);
    if (flaw === undefined) return time;
    run.remark(`Time ${time} was not written to its end (${flaw}) and was deleted; the case goes on from the one before.`);
    for (const folder of folders) await rm(join(folder, time), { recursive: true, force: true });
  }
  return "0";
}

/** Brings the fields to where the solver of this run looks for them: divided over its ranks, or whole. Returns the time to go on from. */
export async function placeFields(run: CaseRun): Promise<{ phase: Phase; from: number }> {
  const point = await findStartPoint(run);
  const newerDivided = point.divided !== null && Number(point.divided) > Number(point.whole);
  const asIs =
    run.ranks > 1 && point.processors === run.ranks && point.divided !== null && Number(point.divided) >= Number(point.whole);
  if (asIs) {
    run.skip(divideStep());
    return { phase: goOn, from: Number(point.divided) };
  }
  if (newerDivided) {
    const joined = await joinFields(run);
    if (joined.end) return { phase: joined, from: 0 };
  } else if (point.processors > 0) await removeProcessors(run.path);
  const from = Math.max(Number(point.whole), Number(point.divided ?? 0));
  if (run.ranks <= 1) return { phase: goOn, from };
  const { min, max } = run.card.mesh.domain;
  const size = [max[0] - min[0], max[1] - min[1], max[2] - min[2]] as const;
  await mkdir(join(run.path, "system"), { recursive: true });
  await writeFile(join(run.path, decompositionFile), decompositionText(run.ranks, size));
  const step = divideStep();
  const result = await run.step(step, { [decompositionFile]: String(run.ranks) });
  if (result.aborted) {
    await removeProcessors(run.path);
    return { phase: endWith("interrupted", `interrupted in ${step.name}`), from };
  }
  if (result.exitCode !== 0) return { phase: endWith("failed", await run.failure(step, result)), from };
  return { phase: goOn, from };
}

/** Puts the latest time of a divided case together and deletes the divided copy. */
export async function joinFields(run: CaseRun): Promise<Phase> {
  const step = joinStep();
  const result = await run.step(step, {});
  if (result.aborted) return endWith("interrupted", `interrupted in ${step.name}`);
  if (result.exitCode !== 0) return endWith("failed", await run.failure(step, result));
  await removeProcessors(run.path);
  return goOn;
}

async function removeProcessors(casePath: string): Promise<void> {
  for (const name of await processorFolders(casePath)) await rm(join(casePath, name), { recursive: true, force: true });
}
