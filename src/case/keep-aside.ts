import { lstat, mkdir, readdir, rename } from "node:fs/promises";
import { dirname, join } from "node:path";

/** Folder of a case that keeps what belongs to an earlier set-up. */
const earlier = "earlier";

const isTime = (name: string): boolean => /^\d+(\.\d+)?([eE][-+]?\d+)?$/.test(name) && Number(name) !== 0;
const own = /^(postProcessing|processors?\d+|log\..+|run-state\.json)$/;
const deeper = ["constant/polyMesh", "constant/extendedFeatureEdgeMesh", "constant/triSurface/body.eMesh", "system/decomposition"];

const exists = async (path: string): Promise<boolean> => (await lstat(path).catch(() => null)) !== null;

/** What running a case has left in its folder: mesh, written times, histories, logs. Paths relative to the case, sorted. */
export async function resultsIn(folder: string): Promise<string[]> {
  const names = (await readdir(folder)).filter((name) => isTime(name) || own.test(name));
  const below: string[] = [];
  for (const path of deeper) if (await exists(join(folder, path))) below.push(path);
  const ladder = await readdir(join(folder, "ladder")).catch(() => [] as string[]);
  for (const rung of ladder.filter((name) => /^[1-9]$/.test(name)))
    below.push(...(await resultsIn(join(folder, "ladder", rung))).map((path) => `ladder/${rung}/${path}`));
  return [...names, ...below].sort();
}

/** Moves what was found to a new folder below earlier/; returns its path relative to the case. */
export async function keepAside(folder: string, paths: string[]): Promise<string> {
  const taken = await readdir(join(folder, earlier)).catch(() => [] as string[]);
  let number = taken.length + 1;
  while (taken.includes(String(number))) number++;
  const target = `${earlier}/${number}`;
  for (const path of paths) {
    const to = join(folder, target, path);
    await mkdir(dirname(to), { recursive: true });
    await rename(join(folder, path), to);
  }
  return target;
}
