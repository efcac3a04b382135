import { readdir, readFile, stat } from "node:fs/promises";
import { join } from "node:path";
import { Problem } from "../errors.js";
import { readHistoryFile } from "../history/read-file.js";
import { type MeshCheck, type MesherLog, readCheckMesh, readMesherLog } from "../openfoam/mesh-log.js";
import type { MeshSummary, PartMesh } from "./report-input.js";

/**
 * What the logs of a case say of its mesh, and y+ of its newest table. Null when the case keeps none of them; what cannot be read is left out,
 * since a report of forces is still one without it.
 *
 * @param parts names of parts and the patches that carry them
 */
export async function readMesh(casePath: string, parts: { name: string; patch: string }[]): Promise<MeshSummary | null> {
  const [check, mesher, yPlus] = await Promise.all([
    readLog(join(casePath, "log.checkMesh"), readCheckMesh),
    readLog(join(casePath, "log.snappyHexMesh"), readMesherLog),
    readYPlus(casePath),
  ]);
  if (check === null && mesher === null && yPlus.size === 0) return null;
  return {
    cells: check?.cells ?? mesher?.cells ?? null,
    ok: check?.ok ?? null,
    failures: check?.failures ?? [],
    maxNonOrthogonality: check?.maxNonOrthogonality ?? null,
    maxSkewness: check?.maxSkewness ?? null,
    parts: partsOf(parts, check, mesher, yPlus),
  };
}

type YPlus = NonNullable<PartMesh["yPlus"]>;

function partsOf(
  parts: { name: string; patch: string }[],
  check: MeshCheck | null,
  mesher: MesherLog | null,
  yPlus: Map<string, YPlus>,
): PartMesh[] {
  return parts.flatMap(({ name, patch }) => {
    const layers = mesher?.layers.find((each) => each.patch === patch);
    const faces = check?.patches.find((each) => each.name === patch)?.faces ?? layers?.faces ?? null;
    const found = yPlus.get(patch) ?? null;
    if (!layers && faces === null && found === null) return [];
    return [{ part: name, faces, layers: layers?.layers ?? null, layersAsked: layers?.wanted ?? null, yPlus: found }];
  });
}

async function readLog<T>(path: string, read: (bytes: Uint8Array, name: string) => T): Promise<T | null> {
  try {
    return read(await readFile(path), path);
  } catch (error) {
    if (error instanceof Problem || isMissing(error)) return null;
    throw error;
  }
}

const isMissing = (error: unknown): boolean =>
  ["ENOENT", "ENOTDIR", "EACCES"].includes((error as NodeJS.ErrnoException).code ?? "");

const tableName = /^yPlus(?:_\d+(?:\.\d+)?)?\.dat(?:\.gz)?$/;

/** y+ by patch at the last time of the newest table. */
async function readYPlus(casePath: string): Promise<Map<string, YPlus>> {
  const found = new Map<string, YPlus>();
  const tables: { path: string; written: number }[] = [];
  for (const object of await folders(join(casePath, "postProcessing")))
    for (const time of await folders(object))
      for (const name of (await entries(time)).filter((each) => tableName.test(each)))
        tables.push({ path: join(time, name), written: (await stat(join(time, name))).mtimeMs });
  const newest = tables.sort((a, b) => b.written - a.written)[0];
  if (!newest) return found;
  const histories = await readHistoryFile(newest.path).catch((error: unknown) => {
    if (error instanceof Problem) return [];
    throw error;
  });
  for (const { columns, words, rows } of histories) {
    const patches = words.find(({ name }) => name === "patch")?.values;
    const column = (name: string) => columns.find((each) => each.name === name)?.values;
    const [time, least, most, mean] = [column("Time"), column("min"), column("max"), column("average")];
    if (!patches || !time || !least || !most || !mean) continue;
    for (let row = 0; row < rows; row++)
      if (time[row] === time[rows - 1]) found.set(patches[row]!, { least: least[row]!, mean: mean[row]!, most: most[row]! });
  }
  return found;
}

const entries = (path: string): Promise<string[]> => readdir(path).catch(() => []);

async function folders(path: string): Promise<string[]> {
  const found = await readdir(path, { withFileTypes: true }).catch(() => []);
  return found.filter((entry) => entry.isDirectory()).map((entry) => join(path, entry.name));
}
