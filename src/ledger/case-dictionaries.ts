import { readFile } from "node:fs/promises";
import { join } from "node:path";
import { Problem } from "../errors.js";
import { type BoundaryPatch, boundaryPatches } from "../openfoam/boundary.js";
import { type Dictionary, dictionaryAt, isDictionary, numberAt, parseDictionary, wordsAt } from "../openfoam/dictionary.js";

/** What the dictionaries of a case made elsewhere say of its force objects. Missing or unreadable files say nothing. */
export interface CaseDictionaries {
  /** Density written into a force object; undefined when none has one. 1 usually means: per unit density. */
  density: number | undefined;
  /** Mesh patches behind the patterns of a function object; null when they cannot be told. */
  patchesOf(object: string): string[] | null;
  /** The mesh has a symmetry plane: the forces may be those of a half model. */
  symmetryPlane: boolean;
}

export async function readCaseDictionaries(casePath: string): Promise<CaseDictionaries> {
  const control = await dictionary(join(casePath, "system", "controlDict"));
  const boundary = await dictionary(join(casePath, "constant", "polyMesh", "boundary"));
  const patches = boundary ? patchesIn(boundary) : [];
  const functions = control ? dictionaryAt(control, "functions") : undefined;
  return {
    density: densityIn(functions),
    patchesOf(object) {
      const entry = functions && dictionaryAt(functions, object.split("/").at(-1)!);
      const patterns = entry && wordsAt(entry, "patches");
      return patterns && patches.length > 0 ? matching(patterns, patches) : null;
    },
    symmetryPlane: patches.some(({ type }) => type === "symmetryPlane" || type === "symmetry"),
  };
}

async function dictionary(path: string): Promise<Dictionary | null> {
  const text = await readFile(path, "utf8").catch(() => null);
  if (text === null) return null;
  try {
    return parseDictionary(text, path);
  } catch (error) {
    if (error instanceof Problem) return null;
    throw error;
  }
}

function patchesIn(boundary: Dictionary): BoundaryPatch[] {
  try {
    return boundaryPatches(boundary, "boundary");
  } catch (error) {
    if (error instanceof Problem) return [];
    throw error;
  }
}

function densityIn(functions: Dictionary | undefined): number | undefined {
  for (const values of functions?.entries.values() ?? []) {
    const [entry] = values;
    const density = isDictionary(entry) ? numberAt(entry, "rhoInf") : undefined;
    if (density !== undefined) return density;
  }
  return undefined;
}

/** Patches and groups that a word names or a pattern matches, as the solver does it. */
function matching(patterns: string[], patches: BoundaryPatch[]): string[] {
  const tests = patterns.map((pattern) => {
    try {
      const whole = new RegExp(`^(?:${pattern})$`);
      return (name: string) => name === pattern || whole.test(name);
    } catch {
      return (name: string) => name === pattern;
    }
  });
  return patches.filter(({ name, groups }) => tests.some((test) => test(name) || groups.some(test))).map(({ name }) => name);
}
