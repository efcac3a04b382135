import { readFile, stat } from "node:fs/promises";
import { isAbsolute, join, relative, resolve, sep } from "node:path";
import { Problem } from "../errors.js";
import { type BoundaryPatch, boundaryPatches } from "../openfoam/boundary.js";
import {
  type Dictionary,
  type DictionaryValue,
  isDictionary,
  numberAt,
  parseDictionary,
  valuesAt,
} from "../openfoam/dictionary.js";
import { textBytes } from "../openfoam/table-bytes.js";
import { type PatchWord, selectedPatches } from "./patch-patterns.js";

/** What the dictionaries of a case made elsewhere say of its force objects. Missing or unreadable files say nothing. */
export interface CaseDictionaries {
  /** `rhoInf` of a function object, kg/m³; null when it has none. 1 usually means: per unit density. */
  densityOf(object: string): number | null;
  /** Mesh patches behind the selection of a function object; null when they cannot be told. */
  patchesOf(object: string): string[] | null;
  /** The mesh has a symmetry plane: the forces may be those of a half model. */
  symmetryPlane: boolean;
}

/** Files that one control dictionary may include; cases in use have fewer than ten. */
const mostIncluded = 50;
const mostBytes = 64 * 1024 * 1024;

/** Reads `system/controlDict` with the files it includes from the case folder, and `constant/polyMesh/boundary`. Nothing is executed. */
export async function readCaseDictionaries(casePath: string): Promise<CaseDictionaries> {
  const functions = await readFunctions(casePath);
  const boundary = await dictionary(join(casePath, "constant", "polyMesh", "boundary"));
  const patches = boundary ? patchesIn(boundary) : [];
  // A mesh region stands before the object's own name.
  const entryOf = (object: string): Dictionary | undefined => functions.get(object.split("/").at(-1)!);
  return {
    densityOf(object) {
      const entry = entryOf(object);
      return (entry && numberAt(entry, "rhoInf")) ?? null;
    },
    patchesOf(object) {
      const entry = entryOf(object);
      const words = entry && patchWords(entry);
      return words && patches.length > 0 ? selectedPatches(words, patches) : null;
    },
    symmetryPlane: patches.some(({ type }) => type === "symmetryPlane" || type === "symmetry"),
  };
}

/** The function objects of a case by name, also those in files that the control dictionary includes. */
async function readFunctions(casePath: string): Promise<Map<string, Dictionary>> {
  const found = new Map<string, Dictionary>();
  const system = join(casePath, "system");
  const control = await dictionary(join(system, "controlDict"));
  if (control === null) return found;
  const seen = new Set<string>();
  const included = async (directive: string): Promise<{ name: string; content: Dictionary; asObject: boolean } | null> => {
    const [, word, name] = /^#(s?include|includeIfPresent|includeFunc) ([^\s()<>$]+)$/.exec(directive) ?? [];
    if (name === undefined) return null;
    const path = resolve(system, name);
    if (seen.has(path) || seen.size >= mostIncluded) return null;
    seen.add(path);
    const inside = relative(resolve(casePath), path);
    if (isAbsolute(inside) || inside.split(sep)[0] === "..") return null;
    const content = await dictionary(path);
    return content && { name, content, asObject: word === "includeFunc" };
  };
  const take = async (functions: Dictionary): Promise<void> => {
    for (const [name, values] of functions.entries) if (isDictionary(values[0])) found.set(name, values[0]);
    for (const directive of functions.directives) {
      const file = await included(directive);
      if (file === null) continue;
      if (file.asObject) found.set(file.name, file.content);
      await take(file.content);
    }
  };
  const takeFrom = async (top: Dictionary): Promise<void> => {
    const [value] = valuesAt(top, "functions") ?? [];
    if (isDictionary(value)) await take(value);
    else takeList(value, found);
    for (const directive of top.directives) {
      const file = await included(directive);
      if (file !== null) await takeFrom(file.content);
    }
  };
  await takeFrom(control);
  return found;
}

/** `functions ( name { ... } ... );` of versions before 2.2 */
function takeList(value: DictionaryValue | undefined, found: Map<string, Dictionary>): void {
  if (typeof value !== "object" || value.kind !== "list") return;
  value.items.forEach((item, index) => {
    const title = value.items[index - 1];
    if (isDictionary(item) && typeof title === "object" && (title.kind === "word" || title.kind === "string"))
      found.set(title.text, item);
  });
}

/** A dictionary file, packed or not; null when it is missing or cannot be read. */
async function dictionary(path: string): Promise<Dictionary | null> {
  for (const each of [path, `${path}.gz`]) {
    const state = await stat(each).catch(() => null);
    if (!state?.isFile() || state.size > mostBytes) continue;
    const bytes = await readFile(each).catch(() => null);
    if (bytes === null) continue;
    try {
      return parseDictionary(Buffer.from(textBytes(bytes, each)).toString("utf8"), each);
    } catch (error) {
      if (!(error instanceof Problem)) throw error;
    }
  }
  return null;
}

function patchesIn(boundary: Dictionary): BoundaryPatch[] {
  try {
    return boundaryPatches(boundary, "boundary");
  } catch (error) {
    if (error instanceof Problem) return [];
    throw error;
  }
}

/** The words behind `patches`; null when the entry is missing or holds something that is no word. */
function patchWords(entry: Dictionary): PatchWord[] | null {
  const values = valuesAt(entry, "patches");
  if (values === undefined) return null;
  const list = values.find((value) => typeof value === "object" && value.kind === "list");
  const items = typeof list === "object" && list.kind === "list" ? list.items : values;
  const words: PatchWord[] = [];
  for (const item of items) {
    if (typeof item !== "object" || (item.kind !== "word" && item.kind !== "string")) return null;
    words.push({ text: item.text, quoted: item.kind === "string" });
  }
  return words;
}
