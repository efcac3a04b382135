import { join } from "node:path";
import { firstOrderFolder } from "../case/ladder.js";
import { exists, filesBelow, hashOfFile } from "./case-files.js";
import { hashOf, outermostEntries, readControlDict, runEntries } from "./control-dict.js";

/** sha256 of files by path relative to the case. */
export type Hashes = Record<string, string>;

const meshDictionaries = ["blockMeshDict", "snappyHexMeshDict", "surfaceFeatureExtractDict", "meshQualityDict"].map(
  (name) => `system/${name}`,
);
const surfaces = "constant/triSurface";
const generated = /\.(eMesh|extendedFeatureEdgeMesh)$/;
const aside = ["constant/polyMesh/", "constant/extendedFeatureEdgeMesh/", `${surfaces}/`];

/** Everything the mesh depends on: its dictionaries and the surfaces, without what the mesher derives from them. */
export async function meshInputs(casePath: string): Promise<Hashes> {
  const hashes: Hashes = {};
  for (const path of meshDictionaries)
    if (await exists(join(casePath, path))) hashes[path] = await hashOfFile(join(casePath, path));
  for (const path of await filesBelow(casePath, surfaces))
    if (!generated.test(path)) hashes[path] = await hashOfFile(join(casePath, path));
  return hashes;
}

/**
 * Everything the solution depends on beside the mesh: start fields, properties, schemes, and system/controlDict without the entries that
 * a run sets for itself.
 */
export async function solutionInputs(casePath: string): Promise<Hashes> {
  const hashes: Hashes = {};
  const paths = [
    ...(await filesBelow(casePath, "0")),
    ...(await filesBelow(casePath, "constant")),
    ...(await filesBelow(casePath, "system")),
    ...(await filesBelow(casePath, join(firstOrderFolder, "system"))),
  ];
  for (const path of paths) {
    if (meshDictionaries.includes(path) || aside.some((folder) => path.startsWith(folder)) || /^system\/decompos/.test(path))
      continue;
    hashes[path] =
      path === "system/controlDict"
        ? hashOf(withoutRunEntries(await readControlDict(casePath)))
        : await hashOfFile(join(casePath, path));
  }
  return hashes;
}

/** Paths whose content differs, is new or is gone, sorted. */
export function changedInputs(before: Hashes, now: Hashes): string[] {
  const paths = new Set([...Object.keys(before), ...Object.keys(now)]);
  return [...paths].filter((path) => before[path] !== now[path]).sort();
}

function withoutRunEntries(text: string): string {
  const entries = outermostEntries(text);
  const spans = runEntries.flatMap((key) => entries.get(key) ?? []).sort((a, b) => b.from - a.from);
  return spans.reduce((rest, { from, to }) => rest.slice(0, from) + rest.slice(to), text);
}
