import { open, readdir } from "node:fs/promises";
import { join } from "node:path";

/** The banner ends well before this. */
const bannerBytes = 4096;
const logName = /^log\.\w*Foam$/;

/** The solver with its build, from the banner of its log, such as `simpleFoam, OPENFOAM=1912 patch=200626`; null without a log. */
export async function readSolverBuild(casePath: string): Promise<string | null> {
  const names = (await readdir(casePath).catch(() => [])).filter((name) => logName.test(name));
  for (const name of names.sort()) {
    const banner = await beginning(join(casePath, name));
    const build = /^Build\s*:\s*(.+)$/m.exec(banner)?.[1]?.trim();
    const program = /^Exec\s*:\s*(\S+)/m.exec(banner)?.[1]?.split("/").at(-1);
    if (build && program) return `${program}, ${build}`;
  }
  return null;
}

async function beginning(path: string): Promise<string> {
  const file = await open(path).catch(() => null);
  if (file === null) return "";
  try {
    const { buffer, bytesRead } = await file.read(Buffer.alloc(bannerBytes), 0, bannerBytes, 0);
    return buffer.subarray(0, bytesRead).toString("latin1");
  } catch {
    return "";
  } finally {
    await file.close();
  }
}
