import { inputProblem } from "../errors.js";
import { type Dictionary, isDictionary, numberAt, wordAt, wordsAt } from "./dictionary.js";

/** One patch of `constant/polyMesh/boundary`. */
export interface BoundaryPatch {
  name: string;
  /** `wall`, `patch`, `symmetry`, ... */
  type: string;
  faces: number;
  groups: string[];
}

/**
 * The patches of a parsed `polyMesh/boundary`, in order of the file.
 *
 * @throws Problem (input) when the dictionary is no boundary file
 */
export function boundaryPatches(boundary: Dictionary, name: string): BoundaryPatch[] {
  const list = boundary.loose.find((value) => typeof value === "object" && value.kind === "list");
  if (typeof list !== "object" || list.kind !== "list") {
    throw inputProblem({
      code: "no-boundary",
      message: "there is no list of patches",
      where: name,
      remedy: "Give constant/polyMesh/boundary of a meshed case.",
    });
  }
  const patches: BoundaryPatch[] = [];
  list.items.forEach((item, index) => {
    const title = list.items[index - 1];
    if (!isDictionary(item) || typeof title !== "object" || (title.kind !== "word" && title.kind !== "string")) return;
    patches.push({
      name: title.text,
      type: wordAt(item, "type") ?? "patch",
      faces: numberAt(item, "nFaces") ?? 0,
      groups: wordsAt(item, "inGroups") ?? [],
    });
  });
  return patches;
}
