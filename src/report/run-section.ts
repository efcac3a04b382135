import type { QuantitySettling } from "../history/settling.js";
import type { Entry, LedgerRun } from "../ledger/ledger.js";
import { forcePerCoefficient } from "../ledger/reference.js";
import { counts, grouped, kilometresPerHour, number, plusMinus, scaled, standardGravity, typesetSentence } from "./figures.js";
import type { ReportedRun, RunHistory } from "./report-input.js";
import type { Naming } from "./run-names.js";
import { type Cell, cell, numeric, type Row, type RowGroup, type TableModel, words } from "./table-model.js";

/** One run: its ledger and its histories. */
export interface RunSection {
  name: string;
  reference: string;
  window: string;
  ledger: TableModel;
  closing: { ok: boolean; message: string };
  history: RunHistory;
  settling: TableModel;
  /** the same for parts; null without any */
  partSettling: TableModel | null;
  remarks: string[];
}

export function runSection({ ledger, history, settling }: ReportedRun, naming: Naming): RunSection {
  const name = naming.run(ledger.path);
  const own = (part: boolean) => settling.filter((each) => (each.part !== null) === part);
  return {
    name,
    reference: referenceText(ledger),
    window: `Means over ${axisName(history)}s ${plainTime(ledger.window.from)} to ${plainTime(ledger.window.to)}: ${grouped(ledger.window.rows)} rows, worth ${number(ledger.window.effectiveSamples, 1)} independent samples of the drag.`,
    ledger: ledgerTable(name, ledger),
    closing: { ok: ledger.closing.ok, message: ledger.closing.message },
    history,
    settling: settlingTable(`Settling of ${name}: the whole vehicle`, own(false)),
    partSettling: own(true).length > 0 ? settlingTable(`Settling of ${name}: its parts`, own(true)) : null,
    remarks: ledger.findings.map(({ part, message, remedy }) =>
      typesetSentence([part === null ? "" : `${part}:`, message, remedy].filter(Boolean).join(" ")),
    ),
  };
}

/** Steady runs count iterations in whole numbers; anything else is a time. */
export const axisName = ({ iterations }: Pick<RunHistory, "iterations">): "iteration" | "time" =>
  iterations.every(Number.isInteger) ? "iteration" : "time";

const plainTime = (time: number): string => String(Number(time.toPrecision(6)));

function referenceText({ reference }: LedgerRun): string {
  return [
    reference.area === null ? "area unknown" : `reference area ${number(reference.area, 4)} m²`,
    reference.speed === null ? "speed unknown" : kilometresPerHour(reference.speed),
    reference.density === null ? "density unknown" : `air ${number(reference.density, 4)} kg/m³`,
    reference.wheelbase === null ? "no wheelbase" : `wheelbase ${number(reference.wheelbase, 3)} m`,
    ...(reference.symmetryFactor === 2 ? ["half model, all numbers are of the whole vehicle"] : []),
  ].join(", ");
}

function ledgerTable(name: string, { parts, total }: LedgerRun): TableModel {
  const inCounts = (estimate: Entry["cs"]): Cell => {
    const value = scaled(estimate, 1000);
    return value === null ? cell("–") : cell(number(value.value, 1), plusMinus(value.halfWidth, 1));
  };
  const cells = (entry: Entry): Cell[] => [
    inCounts(entry.cd),
    cell(number((100 * entry.cd.value) / total.cd.value, 1)),
    cell(number(entry.cdPressure && counts(entry.cdPressure.value), 1)),
    cell(number(entry.cdFriction && counts(entry.cdFriction.value), 1)),
    inCounts(entry.cl),
    cell(number(entry.drag?.value, 1)),
    cell(number(entry.lift?.value, 1)),
  ];
  return {
    caption: `Ledger of ${name}`,
    corner: "part",
    columns: [
      numeric("drag", "counts"),
      numeric("share", "%"),
      numeric("pressure", "counts"),
      numeric("friction", "counts"),
      numeric("lift", "counts"),
      numeric("drag", "N"),
      numeric("lift", "N"),
    ],
    groups: [
      {
        title: null,
        rows: [
          ...parts.map((part): Row => ({ head: part.name, part: part.name, cells: cells(part) })),
          { head: "whole vehicle", total: true, cells: cells(total) },
        ],
      },
    ],
  };
}

const quantityNames: Record<string, string> = {
  cd: "Cd",
  cl: "Cl",
  clFront: "Cl, front axle",
  clRear: "Cl, rear axle",
  cs: "Cs",
  cm: "Cm, nose up",
};

function settlingTable(caption: string, quantities: QuantitySettling[]): TableModel {
  return {
    caption,
    corner: "quantity",
    columns: [
      words("verdict"),
      numeric("mean"),
      numeric("half-width", "95 %"),
      numeric("start-up", "rows cut"),
      numeric("window", "rows"),
      numeric("independent", "samples"),
      numeric("period", "rows"),
      numeric("still needed", "rows"),
    ],
    groups: [
      {
        title: null,
        rows: quantities.map((each) => ({
          head: [each.part, quantityNames[each.name] ?? each.name].filter(Boolean).join(": "),
          ...(each.part === null ? {} : { part: each.part }),
          cells: [
            cell(each.verdict),
            cell(number(each.mean, 4)),
            cell(plusMinus(each.halfWidth, 5)),
            cell(grouped(each.startUp)),
            cell(grouped(each.rows)),
            cell(number(each.effectiveSamples, 1)),
            cell(number(each.period, 1)),
            cell(each.stillNeeded === null ? "–" : grouped(each.stillNeeded)),
          ],
        })),
      },
    ],
  };
}

const totalRows: { head: string; decimals: number; of(entry: Entry, perCoefficient: number | null): Entry["cs"] }[] = [
  { head: "Cd", decimals: 4, of: ({ cd }) => cd },
  { head: "CdA, m²", decimals: 4, of: ({ cda }) => cda },
  { head: "Cl", decimals: 4, of: ({ cl }) => cl },
  { head: "Cl, front axle", decimals: 4, of: ({ clFront }) => clFront },
  { head: "Cl, rear axle", decimals: 4, of: ({ clRear }) => clRear },
  { head: "drag, N", decimals: 1, of: ({ drag }) => drag },
  { head: "drag, kgf", decimals: 2, of: ({ drag }) => scaled(drag, 1 / standardGravity) },
  { head: "lift, N", decimals: 1, of: ({ lift }) => lift },
  { head: "lift, kgf", decimals: 2, of: ({ lift }) => scaled(lift, 1 / standardGravity) },
  { head: "lift, front axle, N", decimals: 1, of: ({ clFront }, q) => (q === null ? null : scaled(clFront, q)) },
  { head: "lift, rear axle, N", decimals: 1, of: ({ clRear }, q) => (q === null ? null : scaled(clRear, q)) },
];

/** The whole vehicle, one column per run. */
export function totalsTable(runs: ReportedRun[], naming: Naming): TableModel {
  const rows = totalRows.flatMap(({ head, decimals, of }): Row[] => {
    const estimates = runs.map(({ ledger }) => of(ledger.total, forcePerCoefficient(ledger.reference)));
    if (estimates.every((estimate) => estimate === null)) return [];
    return [
      {
        head,
        cells: estimates.map((estimate) =>
          estimate === null ? cell("–") : cell(number(estimate.value, decimals), plusMinus(estimate.halfWidth, decimals)),
        ),
      },
    ];
  });
  const groups: RowGroup[] = [{ title: null, rows }];
  return {
    caption: "The whole vehicle",
    corner: "quantity",
    columns: runs.map(({ ledger }) => numeric(naming.run(ledger.path))),
    groups,
  };
}
