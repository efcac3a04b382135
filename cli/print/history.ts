import type { History } from "../../src/history/history.js";
import type { HistorySummary } from "../../src/history/last-rows.js";
import { shortPath, significant } from "../../src/number-text.js";
import { printFindings } from "./findings.js";
import type { Printer } from "./printer.js";
import { csv, table } from "./table.js";

export function printHistories(print: Printer, summaries: HistorySummary[], last: number): void {
  for (const each of summaries) {
    print.heading(`${each.object}: ${each.layout}${each.dialect ? ` (layout ${each.dialect})` : ""}`);
    print.line(`  ${shortPath(each.path, process.cwd())}`);
    print.line(`  ${each.rows} rows, time ${each.from} to ${each.to}`);
    const header = Object.entries(each.header).map(
      ([key, value]) => `${key} ${Array.isArray(value) ? `(${value.join(" ")})` : value}`,
    );
    if (header.length > 0) print.line(`  header: ${header.join(", ")}`);
    if (each.segments.length > 1)
      for (const segment of each.segments)
        print.line(
          print.colours.dim(
            `  ${shortPath(segment.file, process.cwd())}: ${segment.used} of ${segment.rows} rows: ${segment.reason}`,
          ),
        );
    print.line(
      table(
        [
          { title: "column" },
          ...["last", `mean of last ${last}`, "standard deviation"].map((title) => ({ title, align: "right" as const })),
        ],
        each.columns.map((column) => [
          column.name,
          ...[column.last, column.mean, column.standardDeviation].map((x) => significant(x, 6)),
        ]),
        print.colours.bold,
      ),
    );
    printFindings(print, each.findings);
  }
}

/** Every row of every history; with several, a first column says which. */
export function historyCsv(histories: History[]): string {
  const blocks = histories.map((history) => {
    const titles = ["object", "layout", ...history.columns.map(({ name }) => name)];
    const rows = Array.from({ length: history.rows }, (_, i) => [
      history.object,
      history.layout,
      ...history.columns.map(({ values }) => values[i]),
    ]);
    return csv(titles, rows);
  });
  return blocks.join("\r\n");
}
