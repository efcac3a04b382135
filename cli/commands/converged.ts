import { namedCases } from "../../src/case/case-paths.js";
import { readCaseRecord } from "../../src/ledger/case-record.js";
import { settleRecord } from "../../src/ledger/converged.js";
import type { CommandModule } from "../command.js";
import { exitCode } from "../context.js";
import { printSettlings } from "../print/settling.js";
import { addReferenceOptions, overridesOf, type ReferenceOptions } from "../reference-options.js";
import { coefficient } from "../values.js";

interface Options extends ReferenceOptions {
  drag?: number;
  lift?: number;
}

export const command: CommandModule<Options> = {
  arguments: "<case...>",
  description:
    "Say for each quantity, of the whole and of every part, whether its mean is known: start-up cut away, window, half-width, effective samples, iterations\n" +
    "still needed. Takes cases of any origin, or a study for all of its cases. Exit 3 when a case has not settled.",
  options(command) {
    command
      .option("--drag <half-width>", "half-width wanted for the drag coefficient, such as '1 count'", coefficient)
      .option("--lift <half-width>", "half-width wanted for the lift coefficient, such as '3 counts'", coefficient);
    addReferenceOptions(command);
  },
  examples: [
    { call: "dragledger converged cases/open-bed-30ms", does: "one case against the targets of its study" },
    { call: "dragledger converged cases/* --drag '2 counts' --lift '5 counts'", does: "many cases against targets of your own" },
  ],
  async run({ args, options, print }) {
    const { paths } = await namedCases(args[0] as string[]);
    const cases = [];
    for (const path of paths)
      cases.push(settleRecord(await readCaseRecord(path, overridesOf(options)), { drag: options.drag, lift: options.lift }));
    print.document("converged", { cases });
    printSettlings(print, cases);
    return cases.every((each) => each.verdict === "settled" || each.verdict === "oscillating") ? exitCode.done : exitCode.no;
  },
};
