import { existsSync } from "node:fs";
import { cp, mkdir } from "node:fs/promises";
import { availableParallelism } from "node:os";
import { join, resolve } from "node:path";
import { prepareStudy } from "../../src/case/prepare.js";
import { studyCases } from "../../src/case/study-cases.js";
import { compareCases } from "../../src/compare/compare-cases.js";
import { readSurfaces } from "../../src/geometry/files/read.js";
import { surveyBody } from "../../src/geometry/survey-body.js";
import { buildLedger } from "../../src/ledger/build.js";
import { readCaseRecord } from "../../src/ledger/case-record.js";
import { duration, fixed, shortPath, thousands } from "../../src/number-text.js";
import { findSolver, howToGetSolver } from "../../src/openfoam/environment.js";
import { packageFile } from "../../src/package-files.js";
import { writeStudyReport } from "../../src/report/study-report.js";
import type { CaseOutcome } from "../../src/run/events.js";
import { runCases } from "../../src/run/run-cases.js";
import { readStudy } from "../../src/study/read.js";
import type { CommandModule } from "../command.js";
import { type ExitCode, exitCode } from "../context.js";
import { printComparison } from "../print/comparison.js";
import { printLedger } from "../print/ledger.js";
import { progress } from "../print/progress.js";

interface Options {
  recorded?: boolean;
}

const studyFile = "pickup-bed.yaml";

export const command: CommandModule<Options> = {
  arguments: "[folder]",
  description:
    "Do the whole job on the sample pickup, in a folder of its own (default: dragledger-demo): check the geometry, plan and write three cases, mesh and solve\n" +
    "them, then ledger, comparison and report. Without the solver everything else is done and recorded results of a real run are read, and labelled so.",
  options(command) {
    command.option("--recorded", "read the recorded results also where the solver is installed");
  },
  examples: [
    { call: "dragledger demo", does: "in ./dragledger-demo; a few minutes with the solver, seconds without" },
    { call: "dragledger demo /tmp/pickup --recorded", does: "in a folder of your choice, with the recorded results" },
  ],
  async run({ args, options, print, signal }) {
    const folder = resolve((args[0] as string | undefined) ?? "dragledger-demo");
    await mkdir(folder, { recursive: true });
    for (const name of ["geometry", studyFile])
      if (!existsSync(join(folder, name))) await cp(packageFile("sample-geometry", name), join(folder, name), { recursive: true });
    const study = await readStudy(join(folder, studyFile));

    print.heading("1. Geometry");
    for (const { name, files } of study.variants) {
      const survey = surveyBody(await readSurfaces(files), study.body);
      print.line(
        `  ${name}: ${thousands(survey.triangles)} triangles in ${survey.parts.length} parts, ${fixed(survey.extents.length, 2)} m long, ` +
          `frontal area ${fixed(survey.frontalArea.value, 4)} m², wheelbase ${fixed(survey.wheelbase, 3)} m: ${survey.verdict}`,
      );
    }

    print.heading("2. Plan and cases");
    const prepared = await prepareStudy(study, {});
    const { plan } = prepared[0]!;
    const size = [0, 1, 2].map((i) => fixed(plan.domain.max.value[i] - plan.domain.min.value[i], 1)).join(" × ");
    print.line(
      `  ${plan.half.value ? "half model, " : ""}domain ${size} m, blockage ${fixed(100 * plan.domain.blockage.value, 2)} %, ` +
        `${fixed(3.6 * plan.flow.speed.value, 0)} km/h, Reynolds number ${plan.flow.reynolds.value.toExponential(2)}`,
    );
    for (const each of prepared)
      print.line(
        `  ${shortPath(each.path, process.cwd())}: about ${thousands(each.plan.mesh.predictedCells.value)} cells, ${each.changed ? "written" : "unchanged"}`,
      );

    print.heading("3. Run");
    const solver = options.recorded ? null : await findSolver();
    let outcomes: CaseOutcome[] = [];
    let paths = prepared.map((each) => each.path);
    if (solver) {
      const shown = progress(print);
      const cores = availableParallelism();
      outcomes = await runCases(paths, { cores, atOnce: Math.min(cores, paths.length), signal, solver }, (event) =>
        shown.show(event),
      ).finally(() => shown.end());
      for (const each of outcomes)
        print.line(
          `  ${shortPath(each.path, process.cwd())}: ${each.state} after ${each.iterations} iterations, ${duration(each.seconds)}: ${each.reason}`,
        );
      const ended = outcomes.find((each) => !["settled", "stopped-at-limit"].includes(each.state));
      if (ended) return ended.state === "interrupted" ? exitCode.interrupted : exitCode.tool;
    } else {
      const why = options.recorded ? "as asked" : `the solver is not installed (${await howToGetSolver()})`;
      print.line(`  ${print.colours.yellow("recorded results")} of a real run are read instead: ${why}`);
      paths = studyCases(study).map(({ path }) => packageFile("sample-geometry", "recorded", path.split("/").at(-1)!));
    }

    const records = [];
    for (const path of paths) records.push(await readCaseRecord(path));
    const ledgers = records.map(buildLedger);
    print.heading("4. Ledger");
    printLedger(print, ledgers);
    print.heading("5. Comparison");
    const comparisons = compareCases(records);
    for (const comparison of comparisons) printComparison(print, comparison);
    print.heading("6. Report");
    const report = await writeStudyReport({ study, records, path: join(folder, "pickup-bed.html") });
    print.line(`  ${report.path} (${thousands(Math.round(report.bytes / 1024))} KiB)`);
    print.document("demo", { folder, recorded: solver === null, cases: outcomes, runs: ledgers, comparisons, report });
    return ledgers.every((run) => run.closing.ok) ? exitCode.done : (exitCode.no as ExitCode);
  },
};
