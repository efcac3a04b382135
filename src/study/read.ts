import { readFile, stat } from "node:fs/promises";
import { resolve } from "node:path";
import { inputProblem } from "../errors.js";
import { type Fault, problemOf, schemaFaults } from "./faults.js";
import { resolveStudy } from "./resolve.js";
import { studySchema } from "./schema.js";
import type { Study } from "./study.js";
import { readYaml, type YamlSource } from "./yaml-source.js";

/** Bytes. A hundred variants of twenty files each fit; more is another kind of file. */
const LARGEST = 128 * 1024;

const write = "Write a study file with: dragledger new study.yaml body.stl";

/**
 * A study from the text of its file, everything checked that needs no other file. `path` is that of the file; relative paths in
 * the study start at its folder. `name` is how messages call the file, `path` unless given.
 *
 * @throws Problem(input), one of the codes `study-*` or `not-computed`; `where` is `name:line:column (key)`.
 */
export function parseStudy(text: string, path: string, name: string = path): Study {
  return parse(text, path, name).study;
}

function parse(text: string, path: string, name: string): { study: Study; source: YamlSource; files: string[][] } {
  if (text.trim() === "")
    throw inputProblem({ code: "study-empty", message: "The study file is empty.", where: name, remedy: write });
  if (text.length > LARGEST) throw tooLarge(text.length, name);
  const source = readYaml(text, name);
  const parsed = studySchema.safeParse(source.value);
  if (!parsed.success) throw problemOf(schemaFaults(parsed.error.issues, source.value), source, name);
  const { study, faults } = resolveStudy(parsed.data, resolve(path));
  if (faults.length > 0) throw problemOf(faults, source, name);
  return { study, source, files: Object.values(parsed.data.variants).map((variant) => variant.files) };
}

/**
 * Reads a study file. Paths in the result are absolute and exist.
 *
 * @throws Problem(input) when the file or one that it names is missing or no file, and as `parseStudy`.
 */
export async function readStudy(path: string): Promise<Study> {
  const text = await readText(path);
  const { study, source, files } = parse(text, path, path);
  const faults = await Promise.all(
    study.variants.flatMap((variant, v) =>
      variant.files.map(async (file, k): Promise<Fault[]> => {
        const found = await stat(file).catch(() => null);
        if (found?.isFile()) return [];
        return [
          {
            path: ["variants", variant.name, "files", k],
            at: "value",
            code: "study-missing-file",
            message: `Variant '${variant.name}' names ${files[v]![k]}, ${found ? "which is not a file" : "which does not exist"}.`,
            remedy: `Looked for at ${file}; relative paths start at the folder of the study file.`,
          },
        ];
      }),
    ),
  );
  if (faults.flat().length > 0) throw problemOf(faults.flat(), source, path);
  return study;
}

const tooLarge = (size: number, where: string) =>
  inputProblem({
    code: "study-too-large",
    message: `The file has ${size} bytes; a study file has at most ${LARGEST}.`,
    where,
    remedy: "Name the study file, not a surface or a result.",
  });

async function readText(path: string): Promise<string> {
  const problem = (code: string, message: string, remedy: string) => inputProblem({ code, message, where: path, remedy });
  const found = await stat(path).catch(() => null);
  if (found === null) throw problem("study-missing", "There is no such study file.", `Check the path. ${write}`);
  if (found.isDirectory())
    throw problem("study-is-folder", "This is a folder; expected a study file.", "Name the study file in it.");
  if (!found.isFile()) throw problem("study-not-a-file", "This is no ordinary file; expected a study file.", "Name a study file.");
  if (found.size > LARGEST) throw tooLarge(found.size, path);
  const bytes = await readFile(path);
  let text: string;
  try {
    text = new TextDecoder("utf-8", { fatal: true }).decode(bytes);
  } catch {
    throw problem("study-not-text", "The file is not UTF-8 text; expected a study file.", "Save the file as UTF-8.");
  }
  if (text.includes("\0"))
    throw problem("study-not-text", "The file holds zero bytes; expected a study file.", "Name the study file, not a surface.");
  return text;
}
