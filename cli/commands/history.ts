import { stat } from "node:fs/promises";
import { resolve } from "node:path";
import { Option } from "commander";
import { inputProblem } from "../../src/errors.js";
import type { History } from "../../src/history/history.js";
import { lastRows } from "../../src/history/last-rows.js";
import { readCaseHistories } from "../../src/history/read-case.js";
import { readHistoryFile } from "../../src/history/read-file.js";
import { writeWhole } from "../../src/write-whole.js";
import type { CommandModule } from "../command.js";
import { exitCode } from "../context.js";
import { historyCsv, printHistories } from "../print/history.js";
import { positiveInteger } from "../values.js";

interface Options {
  last: number;
  csv?: string | true;
}

export const command: CommandModule<Options> = {
  arguments: "<file-or-case...>",
  description:
    "Read any table that the solver's function objects wrote, of any version: layout, columns, joined files, last values, mean and spread of the\n" +
    "last rows, and what is odd about it. A case folder shows every table below it. Exit 3 when a table holds an error such as zeros or nan.",
  options(command) {
    command
      .addOption(new Option("--last <rows>", "rows for mean and spread").default(100).argParser(positiveInteger))
      .option("--csv [file]", "write the whole history as CSV to a file, or to standard output");
  },
  examples: [
    { call: "dragledger history postProcessing/forces/0/force.dat", does: "what is in this file" },
    { call: "dragledger history cases/open-bed-30ms --last 200 --json", does: "every table of a case, as JSON" },
  ],
  async run({ args, options, print }) {
    const read: { path: string; history: History }[] = [];
    for (const given of args[0] as string[]) {
      const path = resolve(given);
      const found = await stat(path).catch(() => null);
      if (found === null)
        throw inputProblem({
          code: "file-missing",
          message: "There is no such file or case folder.",
          where: path,
          remedy: "Check the path.",
        });
      if (found.isDirectory())
        for (const history of await readCaseHistories(path)) read.push({ path: history.segments[0]?.file ?? path, history });
      else for (const history of await readHistoryFile(path)) read.push({ path, history });
    }
    const summaries = read.map(({ path, history }) => lastRows(path, history, options.last));
    print.document("history", { files: summaries });
    if (options.csv === true) print.raw(historyCsv(read.map(({ history }) => history)));
    else printHistories(print, summaries, options.last);
    if (typeof options.csv === "string") {
      await writeWhole(options.csv, historyCsv(read.map(({ history }) => history)));
      print.note(`wrote ${options.csv}`);
    }
    return summaries.some((each) => each.findings.some((found) => found.severity === "error")) ? exitCode.no : exitCode.done;
  },
};
