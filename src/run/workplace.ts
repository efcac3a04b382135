import { mkdtemp, rm, symlink } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { inputProblem } from "../errors.js";

/** Where the programs of a case are started, and what tells them where the case is. */
export interface Workplace {
  cwd: string;
  /** Put after a program's own arguments. */
  args: string[];
  /** The case folder by a path that the programs take. */
  path: string;
  leave: () => Promise<void>;
}

/** OpenFOAM's file names hold no blanks and quotes: its programs end at once in such a folder ("called for invalid fileName"). */
const refused = /[\s"']/;

/**
 * The case folder itself, or, when its path has a blank or a quote in it, a link to it elsewhere that has none. The programs are then told
 * of the link by -case and started beside it, because MPI launchers replace a link in the current folder by what it points to.
 *
 * Throws Problem (input) when the folder for temporary files has such a path too.
 */
export async function openWorkplace(casePath: string): Promise<Workplace> {
  if (!refused.test(casePath)) return { cwd: casePath, args: [], path: casePath, leave: async () => undefined };
  const place = tmpdir();
  if (refused.test(place)) {
    throw inputProblem({
      code: "path-refused-by-solver",
      message:
        "OpenFOAM does not work in folders with blanks or quotes in their path, nor does the folder for temporary files offer a way round.",
      where: casePath,
      remedy: "Move the study to a path without them, or set TMPDIR to one.",
    });
  }
  const folder = await mkdtemp(join(place, "dragledger-"));
  const link = join(folder, "case");
  await symlink(casePath, link);
  return { cwd: folder, args: ["-case", link], path: link, leave: () => rm(folder, { recursive: true, force: true }) };
}

/** The same for a folder inside the case, which has a case tree of its own; left together with the case's. */
export function workplaceBelow(workplace: Workplace, folder: string): Workplace {
  const path = join(workplace.path, folder);
  const leave = async (): Promise<void> => undefined;
  return workplace.args.length === 0
    ? { cwd: path, args: [], path, leave }
    : { cwd: workplace.cwd, args: ["-case", path], path, leave };
}
