import { mkdir, readdir, rename, rm } from "node:fs/promises";
import { join } from "node:path";
import { exists, processorFolders, timeFolders } from "./case-files.js";
import { type CaseRun, endWith, goOn, type Phase } from "./case-run.js";
import { coefficientsObject } from "./history-follower.js";
import { changedInputs, meshInputs } from "./inputs.js";
import { checkMeshOf } from "./mesh-check.js";
import { meshSteps, type Step } from "./steps.js";

/** Folder of a case that keeps histories and logs of runs whose mesh or set-up is no longer the case's. */
export const earlierFolder = "earlier";

const meshFiles = ["points", "faces", "owner", "neighbour", "boundary"];

/** The steps that lead to the mesh of a case. */
export async function stepsToMesh(casePath: string): Promise<Step[]> {
  return meshSteps({ features: await exists(join(casePath, "system", "surfaceFeatureExtractDict")) });
}

/** Makes the mesh, or takes the one that is there when everything it depends on is unchanged, and judges it. */
export async function meshCase(run: CaseRun): Promise<Phase> {
  const inputs = await meshInputs(run.path);
  const steps = await stepsToMesh(run.path);
  const changed = run.state.mesh ? changedInputs(run.state.mesh.inputs, inputs) : null;
  const whole = (await Promise.all(meshFiles.map((name) => exists(join(run.path, "constant", "polyMesh", name))))).every(Boolean);
  const from = changed !== null && changed.length === 0 && whole ? firstToRun(run, steps) : 0;
  if (from === 0) {
    if (changed && changed.length > 0) run.remark(`The mesh is made again: ${listed(changed)} changed.`);
    await setAside(run);
    run.state.steps = [];
    run.state.solution = null;
    run.state.iterations = 0;
    run.state.settled = false;
    run.state.mesh = { inputs, cells: 0, remarks: [] };
  }
  for (const step of steps.slice(0, from)) run.skip(step);
  if (from === steps.length && run.state.mesh!.cells > 0) return goOn;
  await run.save("meshing", "");
  for (const step of steps.slice(from)) {
    const result = await run.step(step, inputs);
    if (result.aborted) return endWith("interrupted", `interrupted in ${step.name}`);
    if (result.exitCode !== 0) return endWith("failed", await run.failure(step, result));
  }
  const verdict = await checkMeshOf(run.path, run.card);
  for (const remark of verdict.remarks) run.remark(remark);
  if (verdict.trouble !== null) {
    // Judged again by the next run even if nothing changed: the mesh must not count as finished.
    run.state.steps = run.state.steps.filter(({ name }) => name !== "checkMesh");
    return endWith("failed", `after snappyHexMesh ${verdict.trouble}; log: log.snappyHexMesh`);
  }
  run.state.mesh = { inputs, cells: verdict.cells, remarks: verdict.remarks };
  await run.save("meshed", `${verdict.cells} cells`);
  return goOn;
}

/**
 * Index of the first step that is not done. The steps before checkMesh change the mesh in place, so one that was begun and not ended
 * leaves nothing to go on from: then all are done again.
 */
function firstToRun(run: CaseRun, steps: Step[]): number {
  const index = steps.findIndex((step) => run.recordOf(step.name)?.state !== "done");
  if (index < 0) return steps.length;
  const begun = run.recordOf(steps[index]!.name) !== undefined;
  return begun && steps[index]!.name !== "checkMesh" ? 0 : index;
}

/**
 * Takes away what belongs to a mesh or a set-up that is gone: histories and logs are moved to earlier/<n>, fields are deleted (they can be
 * computed again, and would be read by a solver that goes on from the latest time).
 */
export async function setAside(run: CaseRun): Promise<void> {
  const folders = [...(await timeFolders(run.path)).filter((name) => Number(name) !== 0), ...(await processorFolders(run.path))];
  const histories = await exists(join(run.path, "postProcessing"));
  if (histories) {
    const earlier = join(run.path, earlierFolder);
    await mkdir(earlier, { recursive: true });
    const target = join(earlier, String((await readdir(earlier)).length + 1));
    await mkdir(target, { recursive: true });
    const logs = (await readdir(run.path)).filter((name) => name.startsWith("log.simpleFoam"));
    for (const name of ["postProcessing", ...logs]) await rename(join(run.path, name), join(target, name));
    if (await exists(join(target, "postProcessing", coefficientsObject))) {
      run.remark(
        `Histories of the earlier set-up were moved to ${earlierFolder}/${target.slice(earlier.length + 1)}; its fields were deleted.`,
      );
    }
  }
  for (const name of folders) await rm(join(run.path, name), { recursive: true, force: true });
}

export function listed(paths: string[]): string {
  return paths.length > 3 ? `${paths.slice(0, 3).join(", ")} and ${paths.length - 3} more` : paths.join(", ");
}
