import { availableParallelism } from "node:os";
import { namedCases } from "../../src/case/case-paths.js";
import { prepareStudy } from "../../src/case/prepare.js";
import { duration, shortPath } from "../../src/number-text.js";
import type { CaseOutcome } from "../../src/run/events.js";
import { runCases } from "../../src/run/run-cases.js";
import type { CommandModule } from "../command.js";
import { type ExitCode, exitCode } from "../context.js";
import { progress } from "../print/progress.js";
import { table } from "../print/table.js";
import { positiveInteger } from "../values.js";

interface Options {
  cores?: number;
  atOnce?: number;
  iterations?: number;
  careful?: boolean;
}

export const command: CommandModule<Options> = {
  arguments: "<study-or-case...>",
  description:
    "Mesh, check and solve cases, one after another or side by side, and stop each when its drag and lift are known well enough. A study is\n" +
    "prepared first if need be. Called again, it goes on where it ended; what is done is not done twice.",
  options(command) {
    command
      .option("--cores <n>", "cores to use in all (default: all of this machine)", positiveInteger)
      .option("--at-once <n>", "cases side by side (default: as many as there are cores)", positiveInteger)
      .option("--careful", "begin cold starts in first order, and try cases again that diverged")
      .option("--iterations <n>", "hard limit of iterations instead of the study's", positiveInteger);
  },
  examples: [
    { call: "dragledger run pickup-bed.yaml", does: "all cases of a study" },
    { call: "dragledger run cases/open-bed-30ms --cores 2 --at-once 1", does: "one case with two MPI processes" },
  ],
  async run({ args, options, print, signal }) {
    const { paths, study } = await namedCases(args[0] as string[]);
    if (study)
      for (const { variant, condition, remarks } of await prepareStudy(study, {}))
        for (const remark of remarks) print.note(`${variant} ${condition}: ${remark}`);
    const shown = progress(print);
    const cores = options.cores ?? availableParallelism();
    const outcomes = await runCases(
      paths,
      {
        cores,
        atOnce: options.atOnce ?? Math.min(cores, paths.length),
        signal,
        mostIterations: options.iterations,
        careful: options.careful,
      },
      (event) => shown.show(event),
    ).finally(() => shown.end());
    print.document("run", { study: study?.name ?? null, cases: outcomes });
    print.line(
      table(
        [
          { title: "case" },
          { title: "state" },
          { title: "iterations", align: "right" },
          { title: "time", align: "right" },
          { title: "why" },
        ],
        outcomes.map((each) => [
          shortPath(each.path, process.cwd()),
          each.state,
          String(each.iterations),
          duration(each.seconds),
          each.reason,
        ]),
        print.colours.bold,
      ),
    );
    return outcomeCode(outcomes);
  },
};

/** The worst of the outcomes decides: interrupted, a failure of the solver, not settled, good. */
export function outcomeCode(outcomes: CaseOutcome[]): ExitCode {
  if (outcomes.some((each) => each.state === "interrupted")) return exitCode.interrupted;
  if (outcomes.some((each) => each.state === "failed" || each.state === "diverged")) return exitCode.tool;
  return outcomes.every((each) => each.settled) ? exitCode.done : exitCode.no;
}
