import type { PlannedNumber } from "../case/plan.js";
import type { Comparison, Difference } from "../compare/comparison.js";
import type { CaseRecord } from "../ledger/case-record.js";
import type { ConvergedCase } from "../ledger/converged.js";
import type { Entry, LedgerRun } from "../ledger/ledger.js";
import { forcePerCoefficient } from "../ledger/reference.js";
import type { LedgerWindow } from "../ledger/window.js";
import { estimate, fixed, signed, thousands } from "../number-text.js";
import { differenceChart, historyChart } from "./charts.js";
import type { ComparisonTable, NamedBody, PageModel, RunSection } from "./page-model.js";

/** One case with all that was made of it. */
export interface ReportedRun {
  record: CaseRecord;
  ledger: LedgerRun;
  window: LedgerWindow;
  converged: ConvergedCase;
  /** rows for the mesh table: name and value */
  mesh: [string, string][];
}

export interface ReportInput {
  title: string;
  question: string | null;
  runs: ReportedRun[];
  comparisons: Comparison[];
  bodies: NamedBody[];
  toolVersion: string;
}

const gravity = 9.80665;

export const cautions: string[] = [
  "These are numerical estimates of the forces on a simplified vehicle: the body as drawn, a smooth road, no rain, no gusts, no flow through the radiator or the cabin unless the body has it.",
  "The flow was computed as steady and turbulent from the nose on. A real wake moves; a flow that is about to separate may settle in another state than the real one, and then a difference between two variants means little.",
  "The half-widths say how well a mean is known from its history. They do not hold the errors of mesh, turbulence model or geometry, which are usually larger for absolute values and smaller for differences.",
  "Lift at the axles changes how a vehicle holds the road. A change of axle lift can make it unstable at speed, in a side wind or while braking; nothing here assesses that.",
  "No number here is a sign-off. Whether a change may be made and driven is decided by local rules and by engineers who are licensed to do so.",
];

/** The page's data from runs and comparisons. Pure: what it needs of files was read before. */
export function buildPageModel({ title, question, runs, comparisons, bodies, toolVersion }: ReportInput): PageModel {
  return {
    title,
    question,
    recorded: runs.map(({ ledger }) => ledger.recorded).find((text) => text !== null) ?? null,
    answers: comparisons.map((comparison) => ({
      sentence: comparison.sentence,
      verdict: comparison.differences.find((each) => each.part === null && each.name === "cd")?.verdict ?? "not-resolved",
    })),
    comparisons: comparisons.map((comparison) => comparisonTable(comparison, runs)),
    runs: runs.map(runSection),
    bodies,
    plan: planOf(runs),
    cautions,
    provenance: runs.map(({ record }) => ({ run: runName(record), rows: provenanceOf(record) })),
    toolVersion,
  };
}

const runName = ({ variant, condition }: Pick<CaseRecord, "variant" | "condition">): string =>
  condition ? `${variant}, ${condition}` : variant;

const planOf = (runs: ReportedRun[]): PlannedNumber[] => runs.find(({ record }) => record.card)?.record.card?.plan ?? [];

const wholeRows: { name: string; label: string; decimals: number; newtons?: "front" | "rear" }[] = [
  { name: "cd", label: "Cd", decimals: 4 },
  { name: "cda", label: "CdA, m²", decimals: 4 },
  { name: "drag", label: "drag, N", decimals: 1 },
  { name: "cl", label: "Cl", decimals: 4 },
  { name: "lift", label: "lift, N", decimals: 1 },
  { name: "clFront", label: "Cl front axle", decimals: 4, newtons: "front" },
  { name: "clRear", label: "Cl rear axle", decimals: 4, newtons: "rear" },
];

function comparisonTable(comparison: Comparison, runs: ReportedRun[]): ComparisonTable {
  const rows: ComparisonTable["rows"] = [];
  const perCoefficient = runs.map(({ record }) => forcePerCoefficient(record.reference)).find((value) => value !== null) ?? null;
  for (const { name, label, decimals, newtons } of wholeRows) {
    const found = comparison.differences.find((each) => each.part === null && each.name === name);
    if (!found) continue;
    rows.push(row(label, found, decimals, 1));
    if (!newtons || perCoefficient === null) continue;
    rows.push(row(`load on the ${newtons} axle from lift, kgf`, found, 1, -perCoefficient / gravity));
  }
  const parts = partRows(comparison);
  return {
    a: comparison.a.variant,
    b: comparison.b.variant,
    comparable: comparison.comparable,
    rows,
    parts: parts.map(({ part, drag, lift }) => ({
      part: part + (drag.a === null ? ` (only ${comparison.b.variant})` : drag.b === null ? ` (only ${comparison.a.variant})` : ""),
      drag: countsText(drag),
      lift: lift ? countsText(lift) : "-",
      verdict: drag.verdict,
    })),
    chart: differenceChart(
      `drag difference ${comparison.b.variant} minus ${comparison.a.variant}, counts`,
      parts.map(({ part, drag }) => ({
        name: part,
        value: 1000 * drag.delta,
        halfWidth: drag.halfWidth === null ? null : 1000 * drag.halfWidth,
      })),
    ),
    remarks: comparison.findings.map((found) => [found.part, found.message, found.remedy].filter(Boolean).join(" ")),
  };
}

function row(label: string, found: Difference, decimals: number, factor: number): ComparisonTable["rows"][number] {
  const scale = (value: number | null) => (value === null ? null : value * factor);
  const halfWidth = found.halfWidth === null ? "" : ` ± ${fixed(found.halfWidth * Math.abs(factor), decimals)}`;
  return {
    quantity: label,
    a: fixed(scale(found.a), decimals),
    b: fixed(scale(found.b), decimals),
    difference: `${signed(scale(found.delta), decimals)}${halfWidth}`,
    verdict: found.verdict,
  };
}

const countsText = (found: Difference): string =>
  `${signed(1000 * found.delta, 1)}${found.halfWidth === null ? " ± ?" : ` ± ${fixed(1000 * found.halfWidth, 1)}`}`;

/** Parts by the size of their drag difference, largest first. */
function partRows(comparison: Comparison): { part: string; drag: Difference; lift: Difference | undefined }[] {
  return comparison.differences
    .filter((each) => each.part !== null && each.name === "cd")
    .map((drag) => ({
      part: drag.part!,
      drag,
      lift: comparison.differences.find((each) => each.part === drag.part && each.name === "cl"),
    }))
    .sort((a, b) => Math.abs(b.drag.delta) - Math.abs(a.drag.delta));
}

function runSection({ record, ledger, window, converged, mesh }: ReportedRun): RunSection {
  const { reference } = record;
  const { whole } = record;
  const cells = (entry: Entry) => [
    estimate(entry.cd, 4),
    fixed((100 * entry.cd.value) / ledger.total.cd.value, 1),
    fixed(entry.cdPressure?.value, 4),
    fixed(entry.cdFriction?.value, 4),
    estimate(entry.cl, 4),
    estimate(entry.drag, 1),
    estimate(entry.lift, 1),
  ];
  const chart = (title: string, label: string, values: Float64Array, mean: Entry["cd"]) => ({
    title,
    svg: historyChart({
      label,
      time: whole.time,
      values,
      first: window.first,
      rows: window.rows,
      mean: mean.value,
      halfWidth: mean.halfWidth,
    }),
  });
  return {
    name: runName(record),
    reference: [
      reference.area === null ? "area unknown" : `reference area ${fixed(reference.area, 4)} m²`,
      reference.speed === null ? "speed unknown" : `${fixed(3.6 * reference.speed, 1)} km/h`,
      reference.density === null ? "density unknown" : `air ${fixed(reference.density, 4)} kg/m³`,
      reference.wheelbase === null ? "no wheelbase" : `wheelbase ${fixed(reference.wheelbase, 3)} m`,
      ...(reference.symmetryFactor === 2 ? ["half model; all numbers are of the whole vehicle"] : []),
    ].join(", "),
    window: `Means over ${window.from} to ${window.to} (${thousands(window.rows)} rows, worth ${fixed(ledger.window.effectiveSamples, 1)} independent samples of the drag).`,
    ledger: [
      ...ledger.parts.map((part) => ({ part: part.name, cells: cells(part) })),
      { part: "whole", cells: cells(ledger.total) },
    ],
    closing: { ok: ledger.closing.ok, message: ledger.closing.message },
    charts: [
      chart("Drag coefficient of the whole", "Cd", whole.cd, ledger.total.cd),
      chart("Lift coefficient of the whole", "Cl", whole.cl, ledger.total.cl),
    ],
    settling: converged.quantities
      .filter(({ part }) => part === null)
      .map((each) => ({
        quantity: each.name,
        verdict: each.verdict,
        cells: [
          fixed(each.mean, 4),
          fixed(each.halfWidth, 4),
          String(each.startUp),
          String(each.rows),
          fixed(each.effectiveSamples, 1),
          each.period === null ? "-" : fixed(each.period, 1),
          each.stillNeeded === null ? "-" : thousands(each.stillNeeded),
        ],
      })),
    mesh,
    remarks: ledger.findings.map((found) =>
      [found.part && `${found.part}:`, found.message, found.remedy].filter(Boolean).join(" "),
    ),
  };
}

function provenanceOf(record: CaseRecord): [string, string][] {
  const rows: [string, string][] = [["case", record.path]];
  for (const [key, source] of Object.entries(record.reference.sources)) rows.push([`reference ${key}`, `from ${source}`]);
  const { card } = record;
  if (card) {
    rows.push(["written by", `${card.tool.name} ${card.tool.version}`], ["templates sha256", card.hashes.templates]);
    for (const input of card.hashes.inputs) rows.push([`${input.path} sha256`, input.sha256]);
  }
  for (const segment of record.segments)
    rows.push([segment.file, `rows ${segment.used} of ${segment.rows}, ${segment.from} to ${segment.to}: ${segment.reason}`]);
  return rows;
}
