import type { PlannedNumber } from "../case/plan.js";
import { kilometresPerHour, number, plain, typesetUnit } from "./figures.js";
import type { ReportedRun } from "./report-input.js";
import type { Naming } from "./run-names.js";
import { cell, numeric, type Row, type TableModel, words } from "./table-model.js";

/** How the runs were set up. */
export interface SetUpSection {
  /** the numbers a reader asks for first */
  sheet: { name: string; value: string }[];
  /** name of the run whose plan is shown; null without a plan */
  of: string | null;
  /** Numbers of the plan by subject, each with reason and source. */
  plan: TableModel[];
  planned: number;
  /** numbers that are not the same in all runs; null when all are */
  differing: TableModel | null;
  /** reference values of every run and where each was found */
  references: TableModel;
}

/** First words of the keys, in the order shown, and what they are about. */
const subjects: [string, string][] = [
  ["half", "Model"],
  ["air", "Air"],
  ["flow", "Flow"],
  ["reference", "Reference"],
  ["domain", "Domain"],
  ["mesh", "Mesh"],
  ["boxes", "Refinement boxes"],
  ["parts", "Parts"],
  ["iterations", "Iterations"],
  ["stop", "Stop"],
];

export function setUpSection(runs: ReportedRun[], naming: Naming): SetUpSection {
  const first = runs.find(({ plan }) => plan.length > 0) ?? null;
  return {
    sheet: first ? sheetOf(first) : [],
    of: first ? naming.run(first.ledger.path) : null,
    plan: first ? planTables(first.plan) : [],
    planned: first?.plan.length ?? 0,
    differing: differingTable(runs, naming),
    references: referenceTable(runs, naming),
  };
}

function sheetOf({ plan, condition }: ReportedRun): SetUpSection["sheet"] {
  const sheet: SetUpSection["sheet"] = [];
  const add = (name: string, key: string, decimals?: number, factor = 1, unit?: string) => {
    const row = plan.find((each) => each.key === key);
    if (!row) return;
    const value = typeof row.value === "number" && decimals !== undefined ? number(row.value * factor, decimals) : plain(row.value);
    sheet.push({ name, value: [value, unit ?? typesetUnit(row.unit)].filter(Boolean).join(" ") });
  };
  if (condition) {
    sheet.push({ name: "speed", value: `${kilometresPerHour(condition.speed)} (${number(condition.speed, 2)} m/s)` });
    sheet.push({ name: "yaw", value: `${Number(((180 / Math.PI) * condition.yaw).toFixed(2))}°` });
    sheet.push({ name: "ground", value: condition.ground });
  }
  add("half model", "half");
  add("density", "air.density", 4);
  add("kinematic viscosity", "air.kinematicViscosity");
  add("Reynolds number, overall length", "flow.reynolds");
  add("reference area", "reference.area", 4);
  add("wheelbase", "reference.wheelbase", 3);
  add("blockage", "domain.blockage", 2, 100, "%");
  sheet.push(...domainSize(plan));
  sheet.push(...surfaceCell(plan));
  add("cells, predicted", "mesh.predictedCells");
  add("wall layers", "mesh.layers");
  add("first cell", "mesh.firstCell", 2, 1000, "mm");
  add("most iterations", "iterations.most");
  return sheet;
}

function domainSize(plan: PlannedNumber[]): SetUpSection["sheet"] {
  const [min, max] = ["domain.min", "domain.max"].map((key) => plan.find((row) => row.key === key)?.value);
  if (!Array.isArray(min) || !Array.isArray(max)) return [];
  const size = max.map((value, axis) => number(value - min[axis], 1));
  return [{ name: "domain, as computed", value: `${size.join(" × ")} m` }];
}

function surfaceCell(plan: PlannedNumber[]): SetUpSection["sheet"] {
  const [base, level] = ["domain.baseCell", "mesh.surfaceLevel"].map((key) => plan.find((row) => row.key === key)?.value);
  if (typeof base !== "number" || typeof level !== "number") return [];
  return [{ name: "cell on the body", value: `${number((1000 * base) / 2 ** level, 1)} mm` }];
}

function planTables(plan: PlannedNumber[]): TableModel[] {
  const known = subjects.map(([prefix]) => prefix);
  const others = [...new Set(plan.map(prefixOf))].filter((prefix) => !known.includes(prefix));
  return [...subjects, ...others.map((prefix): [string, string] => [prefix, prefix])]
    .map(([prefix, title]) => ({
      caption: title,
      corner: "number",
      columns: [numeric("value"), words("unit"), words("reason"), words("source")],
      groups: [{ title: null, rows: plan.filter((row) => prefixOf(row) === prefix).map(planRow) }],
    }))
    .filter((table) => table.groups[0]!.rows.length > 0);
}

const prefixOf = ({ key }: PlannedNumber): string => key.split(".")[0]!;

const planRow = ({ key, value, unit, reason, source }: PlannedNumber): Row => ({
  head: key,
  cells: [cell(plain(value)), cell(typesetUnit(unit)), cell(reason), cell(source)],
});

/** Forecasts of time and memory differ with every body and say nothing of the flow. */
const forecast = /^mesh\.predicted(?!Cells)/;

/** Domain, grid and reference are shared by design; what differs between the plans is worth a look. */
function differingTable(runs: ReportedRun[], naming: Naming): TableModel | null {
  const planned = runs.filter(({ plan }) => plan.length > 0);
  if (planned.length < 2) return null;
  const keys = [...new Set(planned.flatMap(({ plan }) => plan.map(({ key }) => key)))].filter((key) => !forecast.test(key));
  const shownValue = ({ plan }: ReportedRun, key: string): string => {
    const row = plan.find((each) => each.key === key);
    return row ? [plain(row.value), typesetUnit(row.unit)].filter(Boolean).join(" ") : "–";
  };
  const rows = keys
    .map((key): Row => ({ head: key, cells: planned.map((run) => cell(shownValue(run, key))) }))
    .filter(({ cells }) => cells.some(({ text }) => text !== cells[0]!.text));
  if (rows.length === 0) return null;
  return {
    caption: "Numbers that are not the same in all runs",
    corner: "number",
    columns: planned.map(({ ledger }) => numeric(naming.run(ledger.path))),
    groups: [{ title: null, rows }],
  };
}

function referenceTable(runs: ReportedRun[], naming: Naming): TableModel {
  const rows: { head: string; of(run: ReportedRun): string; key: string }[] = [
    { head: "area, m²", key: "area", of: ({ ledger }) => number(ledger.reference.area, 4) },
    { head: "length of moments, m", key: "length", of: ({ ledger }) => number(ledger.reference.length, 4) },
    {
      head: "centre of moments, m",
      key: "centre",
      of: ({ ledger }) => (ledger.reference.centre ? plain(ledger.reference.centre) : "–"),
    },
    { head: "speed, m/s", key: "speed", of: ({ ledger }) => number(ledger.reference.speed, 3) },
    { head: "density, kg/m³", key: "density", of: ({ ledger }) => number(ledger.reference.density, 4) },
    { head: "wheelbase, m", key: "wheelbase", of: ({ ledger }) => number(ledger.reference.wheelbase, 4) },
    {
      head: "model",
      key: "symmetryFactor",
      of: ({ ledger }) => (ledger.reference.symmetryFactor === 2 ? "half, forces doubled" : "whole"),
    },
  ];
  return {
    caption: "Reference of every run, and where each value was found",
    corner: "reference",
    columns: [...runs.map(({ ledger }) => numeric(naming.run(ledger.path))), words("found in")],
    groups: [
      {
        title: null,
        rows: rows.map(({ head, of, key }) => ({
          head,
          cells: [...runs.map((run) => cell(of(run))), cell(foundIn(runs, key, naming))],
        })),
      },
    ],
  };
}

/** Where the value of a reference was found, said once when it is the same place for all. */
function foundIn(runs: ReportedRun[], key: string, naming: Naming): string {
  const sources = runs.map(({ ledger }) => ledger.reference.sources[key] ?? "–");
  if (new Set(sources).size === 1) return sources[0]!;
  return runs.map(({ ledger }, k) => `${naming.run(ledger.path)}: ${sources[k]}`).join("; ");
}
