import { listPlan } from "../../src/case/list-plan.js";
import type { PlannedNumber } from "../../src/case/plan.js";
import { type PlannedCase, planStudy, prepareStudy } from "../../src/case/prepare.js";
import { shortPath, significant, thousands } from "../../src/number-text.js";
import { readStudy } from "../../src/study/read.js";
import type { CommandModule } from "../command.js";
import { exitCode } from "../context.js";
import { printFindings } from "../print/findings.js";
import type { Printer } from "../print/printer.js";
import { table } from "../print/table.js";

interface Options {
  plan?: boolean;
  again?: boolean;
  accept?: boolean;
}

export const command: CommandModule<Options> = {
  arguments: "<study.yaml>",
  description:
    "Resolve a study and write one OpenFOAM case per variant and condition, below cases/ beside the study file. Domain, grid and reference\n" +
    "are those of the baseline for every variant. An unchanged study rewrites nothing.",
  options(command) {
    command
      .option("--plan", "print every number of the plan with its reason and source; write nothing")
      .option("--again", "set up changed cases again although they hold results; the old results are kept aside")
      .option("--accept", "prepare a body that inspect calls not fit");
  },
  examples: [
    { call: "dragledger prepare pickup-bed.yaml --plan", does: "every number, its reason and its source; nothing is written" },
    { call: "dragledger prepare pickup-bed.yaml", does: "writes the cases below cases/" },
  ],
  async run({ args, options, print }) {
    const study = await readStudy(args[0] as string);
    if (options.plan) {
      const planned = await planStudy(study, { accept: options.accept === true });
      const plan = listPlan(planned[0]!.plan);
      print.document("prepare", {
        study: study.name,
        cases: planned.map((each) => ({
          path: each.path,
          variant: each.variant,
          condition: each.condition,
          cells: each.plan.mesh.predictedCells.value,
          changed: false,
          findings: each.findings,
        })),
        plan,
      });
      printPlan(print, plan);
      printCaseFindings(print, planned);
      return exitCode.done;
    }
    const prepared = await prepareStudy(study, { again: options.again === true, accept: options.accept === true });
    print.document("prepare", {
      study: study.name,
      cases: prepared.map((each) => ({
        path: each.path,
        variant: each.variant,
        condition: each.condition,
        cells: each.plan.mesh.predictedCells.value,
        changed: each.changed,
        findings: each.findings,
      })),
      plan: listPlan(prepared[0]!.plan),
    });
    print.line(
      table(
        [
          { title: "case" },
          { title: "variant" },
          { title: "condition" },
          { title: "cells (predicted)", align: "right" },
          { title: "" },
        ],
        prepared.map((each) => [
          shortPath(each.path, process.cwd()),
          each.variant,
          each.condition,
          thousands(Math.round(each.plan.mesh.predictedCells.value)),
          each.changed ? "written" : "unchanged",
        ]),
        print.colours.bold,
      ),
    );
    for (const each of prepared) for (const remark of each.remarks) print.note(`${each.variant} ${each.condition}: ${remark}`);
    printCaseFindings(print, prepared);
    print.line(`next: dragledger run ${args[0]}`);
    return exitCode.done;
  },
};

/** What is odd about each case; what was said of one of them already is not said of the next. */
function printCaseFindings(print: Printer, cases: PlannedCase[]): void {
  const said = new Set<string>();
  for (const { variant, condition, findings } of cases) {
    const fresh = findings.filter(({ code, message }) => !said.has(`${code} ${message}`));
    for (const { code, message } of fresh) said.add(`${code} ${message}`);
    if (fresh.length === 0) continue;
    print.line(`${variant} ${condition}:`);
    printFindings(print, fresh, { briefNotes: true });
  }
}

const valueText = (value: PlannedNumber["value"]): string =>
  typeof value === "string"
    ? value
    : Array.isArray(value)
      ? `(${value.map((x) => significant(x, 6)).join(" ")})`
      : significant(value, 6);

/** The plan as one block per number: value and unit, then why, then where the rule comes from. */
export function printPlan(print: Printer, plan: PlannedNumber[]): void {
  const widest = Math.max(...plan.map((row) => row.key.length));
  for (const row of plan) {
    print.line(`${print.colours.bold(row.key.padEnd(widest))}  ${valueText(row.value)}${row.unit ? ` ${row.unit}` : ""}`);
    print.line(`${" ".repeat(widest)}  ${print.colours.dim(`${row.reason} [${row.source}]`)}`);
  }
}
