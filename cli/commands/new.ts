import { existsSync } from "node:fs";
import { basename, dirname, relative, resolve } from "node:path";
import { inputProblem } from "../../src/errors.js";
import { readSurfaces } from "../../src/geometry/files/read.js";
import { surveyBody } from "../../src/geometry/survey-body.js";
import { draftStudy } from "../../src/study/draft.js";
import { writeWhole } from "../../src/write-whole.js";
import type { CommandModule } from "../command.js";
import { exitCode } from "../context.js";

interface Options {
  force?: boolean;
}

export const command: CommandModule<Options> = {
  arguments: "<study.yaml> <stl...>",
  description:
    "Write a study file filled in from what `inspect` finds in the body. What had to be guessed is marked GUESS: confirm or correct it.",
  options(command) {
    command.option("--force", "overwrite an existing study file");
  },
  examples: [
    { call: "dragledger new roadster.yaml roadster.stl", does: "a study of one body, to be completed" },
    {
      call: "dragledger new studies/wing.yaml body.stl wheels.stl wing.stl --force",
      does: "three files as one body; replaces the old file",
    },
  ],
  async run({ args, options, print }) {
    const path = resolve(args[0] as string);
    const files = (args[1] as string[]).map((file) => resolve(file));
    if (existsSync(path) && !options.force)
      throw inputProblem({
        code: "study-exists",
        message: "The study file exists already.",
        where: path,
        remedy: "Choose another name, or overwrite it with --force.",
      });
    const survey = surveyBody(await readSurfaces(files));
    const text = draftStudy({
      name: basename(path).replace(/\.ya?ml$/i, ""),
      files: files.map((file) => relative(dirname(path), file)),
      survey,
    });
    await writeWhole(path, text);
    const guesses = text
      .split("\n")
      .filter((line) => line.includes("GUESS"))
      .map((line) => line.trim());
    print.document("new", { path, guesses });
    print.line(`wrote ${args[0]}`);
    for (const guess of guesses) print.line(`  ${print.colours.yellow(guess)}`);
    print.line(`next: dragledger prepare ${args[0]} --plan`);
    return exitCode.done;
  },
};
