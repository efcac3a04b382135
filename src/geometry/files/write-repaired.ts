import { stat } from "node:fs/promises";
import { basename, resolve } from "node:path";
import { inputProblem } from "../../errors.js";
import { writeWhole } from "../../write-whole.js";
import type { TriangleSet } from "../triangle-set.js";
import { asciiStl, binaryStl } from "./write-stl.js";

/**
 * Writes a body as one STL file: text with a solid for each part, under its name for people, or, where the file's own name says all there is to say, binary. Never over a file that the
 * body was read from, by whatever path or link it is named, and over any other only when told. The file appears under its name when it
 * is whole.
 *
 * @throws Problem(input) `would-overwrite-input`, `file-exists`, `not-an-stl-name`, `cannot-write`, `coordinate-not-finite`.
 */
export async function writeRepaired(path: string, set: TriangleSet, options: { overwrite?: boolean } = {}): Promise<void> {
  await requireFree(path, set, options);
  await writeWhole(path, namesItself(path, set) ? binaryStl(set) : asciiStl(set, (part) => part.name));
}

/**
 * Looks whether a repaired body may be written to a path, before time is spent on it.
 *
 * @throws Problem(input) `would-overwrite-input`, `file-exists`, `not-an-stl-name`.
 */
export async function requireFree(
  path: string,
  set: Pick<TriangleSet, "files">,
  { overwrite = false }: { overwrite?: boolean } = {},
): Promise<void> {
  if (!/\.stl$/i.test(path))
    throw inputProblem({
      code: "not-an-stl-name",
      message: `A repaired body is written as STL; the name "${path}" does not end in .stl.`,
      where: path,
      remedy: "Give a name that ends in .stl.",
    });
  const there = await stat(path).catch(() => null);
  for (const file of set.files) {
    const input = await stat(file.path).catch(() => null);
    const same = resolve(file.path) === resolve(path);
    if (same || (there !== null && input !== null && there.dev === input.dev && there.ino === input.ino))
      throw inputProblem({
        code: "would-overwrite-input",
        message: `${path} is a file that the body was read from (${file.path}); it is never written over.`,
        where: path,
        remedy: "Give the repaired body a name of its own.",
      });
  }
  if (there !== null && !overwrite)
    throw inputProblem({
      code: "file-exists",
      message: `${path} exists already.`,
      where: path,
      remedy: "Give another name, or remove the file first.",
    });
}

/** A binary file has no place for names: its one part is called like the file. */
const namesItself = (path: string, { parts }: TriangleSet): boolean =>
  parts.length === 1 && basename(path).replace(/\.stl$/i, "") === parts[0].name;
