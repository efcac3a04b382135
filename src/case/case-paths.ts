import { stat } from "node:fs/promises";
import { resolve } from "node:path";
import { inputProblem } from "../errors.js";
import { readStudy } from "../study/read.js";
import type { Study } from "../study/study.js";
import { studyCases } from "./study-cases.js";

/** What a command was given: case folders, and the study they came from when a study file was named. */
export interface NamedCases {
  paths: string[];
  study: Study | null;
}

/**
 * Case folders behind a list of paths: a folder stands for itself, a study file for all of its cases. Only one study may be
 * named. Throws an input problem for a path that is missing.
 */
export async function namedCases(given: string[]): Promise<NamedCases> {
  const paths: string[] = [];
  let study: Study | null = null;
  for (const path of given.map((each) => resolve(each))) {
    const found = await stat(path).catch(() => null);
    if (found === null)
      throw inputProblem({
        code: "missing-path",
        message: "There is no such case folder or study file.",
        where: path,
        remedy: "Check the path.",
      });
    if (found.isDirectory()) {
      paths.push(path);
      continue;
    }
    if (study !== null)
      throw inputProblem({
        code: "two-studies",
        message: "Two study files were given.",
        where: path,
        remedy: "Name one study, or case folders.",
      });
    study = await readStudy(path);
    paths.push(...studyCases(study).map((each) => each.path));
  }
  return { paths, study };
}
