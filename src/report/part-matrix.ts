import type { BodySection } from "./body-section.js";
import { counts, number } from "./figures.js";
import type { ReportedRun } from "./report-input.js";
import type { Naming } from "./run-names.js";
import { cell, numeric, type Row, type TableModel } from "./table-model.js";

/** Runs of the first condition: the ones whose parts stand side by side and on the drawn body. */
export function runsSideBySide(runs: ReportedRun[]): ReportedRun[] {
  const [first] = runs;
  return first ? runs.filter(({ ledger }) => ledger.condition === first.ledger.condition) : [];
}

/** Parts of the ledgers in the order of their first appearance. */
export const partNames = (runs: ReportedRun[]): string[] => [
  ...new Set(runs.flatMap(({ ledger }) => ledger.parts.map(({ name }) => name))),
];

/** Drag of every part in every run, in counts; null when no run has parts. */
export function partMatrix(runs: ReportedRun[], naming: Naming, bodies: BodySection | null): TableModel | null {
  const shown = runsSideBySide(runs);
  const names = partNames(shown);
  if (names.length === 0) return null;
  const condition = shown[0] ? naming.condition(shown[0].ledger.path) : "";
  return {
    caption: `Drag by part, in counts${condition === "" ? "" : `, at ${condition}`}`,
    corner: "part",
    columns: shown.map(({ ledger }) => numeric(naming.run(ledger.path))),
    groups: [
      {
        title: null,
        rows: [
          ...names.map(
            (name, index): Row => ({
              head: name,
              part: name,
              tone: index,
              ...withOthers(name, bodies),
              cells: shown.map(({ ledger }) => {
                const part = ledger.parts.find((each) => each.name === name);
                return cell(part ? number(counts(part.cd.value), 1) : "–");
              }),
            }),
          ),
          {
            head: "whole vehicle",
            total: true,
            cells: shown.map(({ ledger: { total } }) => cell(number(counts(total.cd.value), 1))),
          },
        ],
      },
    ],
  };
}

/** Parts of the body whose forces stand in the row of another: the mirror images that a half model leaves out. */
function withOthers(row: string, bodies: BodySection | null): { note?: string } {
  const parts = bodies?.variants.flatMap((variant) => variant.parts) ?? [];
  const others = new Set(parts.filter((part) => part.row === row && part.name !== row).map(({ name }) => name));
  return others.size > 0 ? { note: `with ${[...others].join(", ")}` } : {};
}
