import type { ConvergedCase } from "../../src/ledger/converged.js";
import { fixed, shortPath } from "../../src/number-text.js";
import { printFindings } from "./findings.js";
import { countNote } from "./ledger.js";
import type { Printer } from "./printer.js";
import { table } from "./table.js";

export function printSettlings(print: Printer, cases: ConvergedCase[]): void {
  for (const each of cases) {
    const colour = each.verdict === "settled" || each.verdict === "oscillating" ? print.colours.green : print.colours.yellow;
    print.heading(`${shortPath(each.path, process.cwd())}: ${colour(each.verdict)}`);
    if (each.recorded) print.line(print.colours.yellow(`  recorded results: ${each.recorded}`));
    const titles = ["mean", "half-width", "start-up", "rows", "effective", "period", "still needed"];
    print.line(
      table(
        [
          { title: "quantity" },
          { title: "part" },
          { title: "verdict" },
          ...titles.map((title) => ({ title, align: "right" as const })),
        ],
        each.quantities.map((q) => [
          q.name,
          q.part ?? "whole",
          q.verdict,
          fixed(q.mean, 5),
          fixed(q.halfWidth, 5),
          String(q.startUp),
          String(q.rows),
          fixed(q.effectiveSamples, 1),
          q.period === null ? "-" : fixed(q.period, 1),
          q.stillNeeded === null ? "-" : String(q.stillNeeded),
        ]),
        print.colours.bold,
      ),
    );
    for (const segment of each.segments.filter((s) => s.used < s.rows || !s.reason.startsWith("start of the run")))
      print.line(
        print.colours.dim(
          `  ${shortPath(segment.file, process.cwd())}: rows ${segment.used} of ${segment.rows} used, ${segment.from} to ${segment.to}: ${segment.reason}`,
        ),
      );
    printFindings(print, each.findings);
  }
  print.line();
  print.line(countNote);
}
