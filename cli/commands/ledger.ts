import { Option } from "commander";
import { namedCases } from "../../src/case/case-paths.js";
import { buildLedger } from "../../src/ledger/build.js";
import { readCaseRecord } from "../../src/ledger/case-record.js";
import type { CommandModule } from "../command.js";
import { exitCode } from "../context.js";
import { ledgerCsv, ledgerMarkdown, printLedger } from "../print/ledger.js";
import { addReferenceOptions, overridesOf, type ReferenceOptions } from "../reference-options.js";

interface Options extends ReferenceOptions {
  format: "table" | "csv" | "markdown";
}

export const command: CommandModule<Options> = {
  arguments: "<case...>",
  description:
    "Drag, lift and side force of each part and the whole, pressure and friction apart, with the half-width of each mean, and whether the\n" +
    "parts add up to the whole. Takes cases of any origin, or a study for all of its cases. Exit 3 when a ledger does not close.",
  options(command) {
    addReferenceOptions(command);
    command.addOption(new Option("--format <form>", "form of the table").choices(["table", "csv", "markdown"]).default("table"));
  },
  examples: [
    { call: "dragledger ledger cases/open-bed-30ms", does: "the ledger of one case" },
    {
      call: "dragledger ledger motorcycle --area '0.75 m2' --density '1.2 kg/m3' --format csv",
      does: "a case made elsewhere, as CSV",
    },
  ],
  async run({ args, options, print }) {
    const { paths } = await namedCases(args[0] as string[]);
    const runs = [];
    for (const path of paths) runs.push(buildLedger(await readCaseRecord(path, overridesOf(options))));
    print.document("ledger", { runs });
    if (options.format === "csv") print.raw(ledgerCsv(runs));
    else if (options.format === "markdown") print.raw(ledgerMarkdown(runs));
    else printLedger(print, runs);
    return runs.every((run) => run.closing.ok) ? exitCode.done : exitCode.no;
  },
};
