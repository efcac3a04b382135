import { join, resolve } from "node:path";
import { namedCases } from "../../src/case/case-paths.js";
import { readCaseRecord } from "../../src/ledger/case-record.js";
import { shortPath, thousands } from "../../src/number-text.js";
import { writeStudyReport } from "../../src/report/study-report.js";
import type { CommandModule } from "../command.js";
import { exitCode } from "../context.js";
import { addReferenceOptions, overridesOf, type ReferenceOptions } from "../reference-options.js";

interface Options extends ReferenceOptions {
  output?: string;
}

export const command: CommandModule<Options> = {
  arguments: "<study-or-case...>",
  description:
    "Write one HTML file that needs nothing else: the answer with its uncertainty, ledger and differences part by part, histories, the body in 3-D, the\n" +
    "set-up with every reason, cautions and provenance. Takes a study, or cases of any origin; with several the first is the baseline.",
  options(command) {
    command.option("-o, --output <file>", "where to write it (default: beside the study, or report.html here)");
    addReferenceOptions(command);
  },
  examples: [
    { call: "dragledger report pickup-bed.yaml", does: "writes pickup-bed.html beside the study" },
    { call: "dragledger report cases/open-bed-30ms -o open-bed.html", does: "one case" },
  ],
  async run({ args, options, print }) {
    const { paths, study } = await namedCases(args[0] as string[]);
    const records = [];
    for (const path of paths) records.push(await readCaseRecord(path, overridesOf(options)));
    const path = resolve(
      options.output ?? (study ? join(study.folder, `${study.name.replaceAll(/[^A-Za-z0-9_-]+/g, "-")}.html`) : "report.html"),
    );
    const report = await writeStudyReport({ study, records, path });
    print.document("report", { ...report });
    print.line(`${shortPath(report.path, process.cwd())} (${thousands(Math.round(report.bytes / 1024))} KiB)`);
    return exitCode.done;
  },
};
