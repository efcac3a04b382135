import { namedCases } from "../../src/case/case-paths.js";
import { compareCases } from "../../src/compare/compare-cases.js";
import type { DifferenceVerdict } from "../../src/compare/comparison.js";
import { inputProblem } from "../../src/errors.js";
import { readCaseRecord } from "../../src/ledger/case-record.js";
import type { CommandModule } from "../command.js";
import { exitCode } from "../context.js";
import { printComparison } from "../print/comparison.js";
import { countNote } from "../print/ledger.js";
import { addReferenceOptions, overridesOf, type ReferenceOptions } from "../reference-options.js";

interface Options extends ReferenceOptions {
  require?: string | true;
}

export const command: CommandModule<Options> = {
  arguments: "<case...>",
  description:
    "The difference of two cases, B minus A, for the whole and part by part, with its half-width and a verdict: resolved, direction-only or\n" +
    "not-resolved. A study compares its baseline with every other variant.",
  options(command) {
    command.option("--require [quantity]", "exit 3 unless the difference of this quantity (default: cd) of the whole is resolved");
    addReferenceOptions(command);
  },
  examples: [
    { call: "dragledger compare cases/open-bed-30ms cases/covered-bed-30ms", does: "covered-bed minus open-bed" },
    {
      call: "dragledger compare pickup-bed.yaml --require cd",
      does: "all variants of a study; exit 3 when a drag difference is not resolved",
    },
  ],
  async run({ args, options, print }) {
    const { paths, study } = await namedCases(args[0] as string[]);
    if (paths.length < 2 || (study === null && paths.length !== 2))
      throw inputProblem({
        code: "two-cases",
        message: `A comparison needs two cases; ${paths.length} given.`,
        remedy: "Give case A and case B, or one study file with two variants or more.",
      });
    const records = [];
    for (const path of paths) records.push(await readCaseRecord(path, overridesOf(options)));
    const comparisons = compareCases(records);
    print.document("compare", { ...comparisons[0], comparisons });
    for (const comparison of comparisons) printComparison(print, comparison);
    print.line();
    print.line(countNote);
    if (options.require === undefined) return exitCode.done;
    const name = options.require === true ? "cd" : options.require;
    const verdicts = comparisons.map((each) => each.differences.find((d) => d.part === null && d.name === name)?.verdict);
    if (verdicts.includes(undefined))
      throw inputProblem({
        code: "unknown-quantity",
        message: `There is no difference of '${name}' to require.`,
        remedy: "Use one of cd, cl, clFront, clRear, cs, cm, cda, drag, lift.",
      });
    return verdicts.every((verdict: DifferenceVerdict | undefined) => verdict === "resolved") ? exitCode.done : exitCode.no;
  },
};
