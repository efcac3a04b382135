import { cp, rename, rm, symlink } from "node:fs/promises";
import { join } from "node:path";
import { firstOrderFolder } from "../case/ladder.js";
import { exists, timeFolders } from "./case-files.js";
import { type CaseRun, endWith, goOn, type Phase } from "./case-run.js";
import { hasFlow } from "./start-point.js";
import { firstOrderStep } from "./steps.js";
import { workplaceBelow } from "./workplace.js";

/**
 * The first iterations of a case without a flow, in first order: of two pickup meshes with 15 and 25 thousand cells one swung without
 * end and one diverged from uniform flow in second order, whatever the relaxation; both settled within 30 iterations after 60
 * in first order (measured with OpenFOAM v1912). They are computed in a folder aside, which borrows the mesh, on one core, and moved from there.
 */
export async function startInFirstOrder(run: CaseRun): Promise<Phase> {
  const folder = join(run.path, firstOrderFolder);
  if ((await hasFlow(run)) || !(await exists(join(folder, "system", "controlDict")))) return goOn;
  const clear = async (): Promise<void> => {
    for (const name of ["0", "constant", "postProcessing", ...(await timeFolders(folder))])
      await rm(join(folder, name), { recursive: true, force: true });
  };
  await clear();
  await symlink(join("..", "constant"), join(folder, "constant"));
  await cp(join(run.path, "0"), join(folder, "0"), { recursive: true });
  await run.save("solving", "");
  const result = await run.step(firstOrderStep, {}, { workplace: workplaceBelow(run.workplace, firstOrderFolder) });
  if (result.aborted) return endWith("interrupted", `interrupted in ${firstOrderStep.name}`);
  const last = (await timeFolders(folder)).at(-1) ?? "0";
  if (result.exitCode === 0 && last !== "0") await rename(join(folder, last), join(run.path, last));
  else run.remark(`${await run.failure(firstOrderStep, result)}. The start is from uniform flow in second order.`);
  await clear();
  return goOn;
}
