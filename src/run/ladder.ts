import { copyFile, cp, link, mkdir, readdir, readFile, rename, rm, symlink, writeFile } from "node:fs/promises";
import { join } from "node:path";
import type { RunCard } from "../case/run-card.js";
import { exists } from "./case-files.js";
import { CaseRun, endWith, goOn, type Phase } from "./case-run.js";
import type { RunEvent } from "./events.js";
import { startInFirstOrder } from "./first-order.js";
import { meshCase, stepsToMesh } from "./mesh-case.js";
import { freshState, readRunState } from "./run-state.js";
import { restoreControlDict, solveCase } from "./solve-case.js";
import { carriedFields, hasFlow } from "./start-point.js";
import { firstOrderStep, mapStep, solveSteps } from "./steps.js";
import { workplaceBelow } from "./workplace.js";

type Rung = NonNullable<RunCard["ladder"]>[number];

/** A start need not be known as well as a result: a rung ends when its means are known to so many times the asked half-widths. */
const looser = 5;
/** The iteration that fields mapped from a rung stand for; iteration 0 keeps the uniform ones, as they were prepared. */
const mappedTime = "1";
/** A folder beside the rungs where fields are mapped; moved from there when all is well. */
const stage = "ladder/onto";
const body = "constant/triSurface/body.stl";

/** Names of the steps of a case's ladder, as they are told. */
export async function ladderSteps(run: CaseRun): Promise<string[]> {
  const names: string[] = [];
  if (run.card.ladder?.length === 0) return [firstOrderStep.name];
  for (const rung of run.card.ladder ?? []) {
    const before = rung === run.card.ladder![0] ? firstOrderStep : mapStep("");
    const steps = [
      ...(await stepsToMesh(join(run.path, rung.folder))),
      before,
      ...solveSteps(run.ranksFor(rung.mesh.predictedCells)),
    ];
    names.push(...steps.map(({ name }) => nameOn(rung, name)));
  }
  if (names.length > 0) names.push(mapStep("").name);
  return names;
}

const nameOn = ({ folder }: Pick<Rung, "folder">, step: string): string => `${folder} ${step}`;

/**
 * Puts the flow on coarser grids into a case that has none yet: each rung is meshed, started from the one before and solved, and the last
 * is mapped onto the case's mesh. A rung that is done is not done again. One that fails is left out with a remark: the next one
 * starts from the one before it, or from uniform flow.
 */
export async function startOnLadder(run: CaseRun): Promise<Phase> {
  const rungs = run.card.ladder;
  if (rungs === undefined) return run.settings.careful ? startInFirstOrder(run) : goOn;
  if (rungs.length === 0) return startInFirstOrder(run);
  if (await hasFlow(run)) {
    for (const name of await ladderSteps(run))
      run.emit({ event: "step-end", case: run.path, step: name, seconds: 0, skipped: true });
    return goOn;
  }
  await run.save("solving", "started on its ladder");
  let below: Rung | null = null;
  for (const rung of rungs) {
    const end: Phase = await climb(run, rung, below);
    if (!end.end) continue;
    if (end.state === "interrupted") return endWith("interrupted", `${rung.folder}: ${end.reason}`);
    if (end.state === "settled" || end.state === "stopped-at-limit") below = rung;
    else
      run.remark(
        `${rung.folder} ${end.state} and is left out (${end.reason}); ${rung === rungs.at(-1) ? "the case" : "the next rung"} starts from ${below?.folder ?? "uniform flow"}.`,
      );
  }
  return below === null ? goOn : mapOnto(run, below, join(run.workplace.path, below.folder));
}

/** Meshes and solves one rung, started from the one below it. */
async function climb(run: CaseRun, rung: Rung, below: Rung | null): Promise<Phase> {
  const path = join(run.path, rung.folder);
  if (!(await exists(join(path, "system", "controlDict"))))
    return endWith("failed", "its dictionaries are missing: prepare the study again");
  await shareBody(run.path, path);
  const state = (await readRunState(path)) ?? freshState();
  const rungRun = new CaseRun({
    path,
    card: cardOn(run.card, rung),
    solver: run.solver,
    ranksFor: run.ranksFor,
    state,
    settings: { ...run.settings, mostIterations: undefined },
    signal: run.signal,
    emit: (event) => tellOn(run, rung, event),
    workplace: workplaceBelow(run.workplace, rung.folder),
  });
  await restoreControlDict(rungRun);
  const meshed = await meshCase(rungRun);
  const end = meshed.end
    ? meshed
    : await solveCase(rungRun, (each) =>
        below === null ? startInFirstOrder(each) : startOn(each, below, join(run.workplace.path, below.folder)),
      );
  if (end.end) await rungRun.save(end.state, end.reason);
  return end;
}

/** What a run knows of a rung. A part that its large cells lose is no reason to stop. */
function cardOn(card: RunCard, { mesh, mostIterations }: Rung): RunCard {
  const { ladder: _ladder, ...own } = card;
  const { drag, lift, confidence } = card.stop;
  return { ...own, parts: [], mesh, mostIterations, stop: { drag: looser * drag, lift: looser * lift, confidence } };
}

/** Events of a rung are told as the case's. */
function tellOn(run: CaseRun, rung: Rung, event: RunEvent): void {
  if (event.event === "step-start" || event.event === "step-end")
    run.emit({ ...event, case: run.path, step: nameOn(rung, event.step) });
  else if (event.event === "iteration") run.emit({ ...event, case: run.path, rung: rung.folder });
  else if (event.event === "remark") run.remark(`${rung.folder}: ${event.message}`);
}

/** The surface of the body may be large: a rung has a second name for it, or a copy where the disk knows no such names. */
async function shareBody(casePath: string, rungPath: string): Promise<void> {
  const [from, to] = [join(casePath, body), join(rungPath, body)];
  await mkdir(join(to, ".."), { recursive: true });
  await rm(to, { force: true });
  await link(from, to).catch(() => copyFile(from, to));
}

/** Maps a rung's flow onto a case that has none beside the uniform one. */
async function startOn(run: CaseRun, below: Rung, from: string): Promise<Phase> {
  return (await hasFlow(run)) ? goOn : mapOnto(run, below, from);
}

/**
 * A velocity field that is at rest inside. Cells of the finer mesh that lie within the coarse one's body are not mapped; they stand at the
 * wall, and with the speed of the oncoming air in them (1 % of the cells of a pickup) the drag coefficient went through 100 and
 * took 150 iterations to come back, where 30 are enough.
 */
const atRest = (field: string): string => field.replace(/^(internalField\s+uniform\s+)\([^()]*\)/m, "$1(0 0 0)");

/**
 * Fields of a solved rung on the mesh of a case, as its iteration 1. They are mapped in a folder that borrows mesh and dictionaries and
 * moved when they are whole: the mapper writes over the start fields, which stay as they were prepared. `from`: the rung's folder.
 */
async function mapOnto(run: CaseRun, below: Rung, from: string): Promise<Phase> {
  const staged = join(run.path, stage);
  await rm(staged, { recursive: true, force: true });
  await mkdir(staged, { recursive: true });
  for (const folder of ["constant", "system"]) await symlink(join("..", "..", folder), join(staged, folder));
  await cp(join(run.path, "0"), join(staged, "0"), { recursive: true });
  const velocity = join(staged, "0", "U");
  await writeFile(velocity, atRest(await readFile(velocity, "utf8")));
  const step = mapStep(from);
  const result = await run.step(step, { [below.folder]: "" }, { workplace: workplaceBelow(run.workplace, stage) });
  if (result.aborted) return endWith("interrupted", `interrupted in ${step.name}`);
  if (result.exitCode !== 0) {
    run.remark(`${await run.failure(step, result)}. The start is from uniform flow.`);
    await rm(staged, { recursive: true, force: true });
    return goOn;
  }
  const mapped = join(staged, "0");
  for (const name of await readdir(mapped))
    if (!carriedFields.includes(name.replace(/\.gz$/, ""))) await rm(join(mapped, name), { recursive: true, force: true });
  await rename(mapped, join(run.path, mappedTime));
  await rm(staged, { recursive: true, force: true });
  return goOn;
}
