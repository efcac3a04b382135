import type { Comparison, Difference, DifferenceVerdict } from "../compare/comparison.js";
import { forcePerCoefficient } from "../ledger/reference.js";
import { counts, number, plusMinus, scaledDifference, signedNumber, standardGravity, typesetSentence } from "./figures.js";
import type { ReportedRun } from "./report-input.js";
import type { Naming } from "./run-names.js";
import { cell, numeric, type Row, type RowGroup, type TableModel, words } from "./table-model.js";

/** One answer of the first screen. */
export interface Answer {
  a: string;
  b: string;
  verdict: DifferenceVerdict;
  /** difference of the drag coefficient in counts, and its half-width */
  delta: string;
  halfWidth: string;
  sentence: string;
  /** for the chart: counts */
  value: number;
  interval: number | null;
}

export interface ComparisonSection {
  title: string;
  table: TableModel;
  parts: TableModel | null;
  /** bars by part, counts, largest first */
  bars: { drag: Bar[]; lift: Bar[] };
  /** how the parts add up */
  sum: string | null;
  remarks: string[];
}

export interface Bar {
  name: string;
  value: number;
  halfWidth: number | null;
}

/** More bars than this are no help; the rest is summed. */
const mostBars = 14;

/** The first line of the page about one comparison. */
export function answerOf(comparison: Comparison, naming: Naming): Answer {
  const drag = comparison.differences.find((each) => each.part === null && each.name === "cd");
  const verdict = drag?.verdict ?? "not-resolved";
  return {
    a: naming.run(comparison.a.path),
    b: naming.run(comparison.b.path),
    verdict,
    delta: signedNumber(drag ? counts(drag.delta) : null, 1),
    halfWidth: plusMinus(drag?.halfWidth == null ? null : counts(drag.halfWidth), 1),
    sentence: sentenceOf(comparison),
    value: drag ? counts(drag.delta) : Number.NaN,
    interval: drag?.halfWidth == null ? null : counts(drag.halfWidth),
  };
}

/** The comparison's own sentence; the names it begins with are said above it. */
function sentenceOf({ sentence, a, b }: Comparison): string {
  const names = `${b.variant} against ${a.variant}: `;
  const rest = sentence.startsWith(names) ? sentence.slice(names.length) : sentence;
  return typesetSentence(rest.charAt(0).toUpperCase() + rest.slice(1));
}

/** Everything the page shows of one comparison. */
export function comparisonSection(comparison: Comparison, runs: ReportedRun[], naming: Naming): ComparisonSection {
  const a = naming.run(comparison.a.path);
  const b = naming.run(comparison.b.path);
  const title = `${b} minus ${a}`;
  const parts = partDifferences(comparison);
  return {
    title,
    table: {
      caption: `${title}: the whole vehicle`,
      corner: "quantity",
      columns: [numeric("A", a), numeric("B", b), numeric("B\u00a0−\u00a0A", "95 % interval"), words("verdict")],
      groups: wholeGroups(comparison, runs, naming),
    },
    parts: parts.length > 0 ? partTable(title, a, b, parts) : null,
    bars: { drag: bars(parts.map(({ drag }) => drag)), lift: bars(parts.flatMap(({ lift }) => (lift ? [lift] : []))) },
    sum: parts.length > 0 ? sumText(comparison, parts) : null,
    remarks: comparison.findings
      .filter(({ severity }) => severity === "note")
      .map(({ part, message, remedy }) => [part === null ? "" : `${part}:`, message, remedy].filter(Boolean).join(" ")),
  };
}

function wholeGroups(comparison: Comparison, runs: ReportedRun[], naming: Naming): RowGroup[] {
  const of = (name: string) => comparison.differences.find((each) => each.part === null && each.name === name);
  const rows = (entries: [string, Difference | undefined, number][]): Row[] =>
    entries.flatMap(([head, found, decimals]) => (found ? [differenceRow(head, found, decimals)] : []));
  const groups: RowGroup[] = [
    {
      title: "Coefficients",
      rows: rows([
        ["Cd", of("cd"), 4],
        ["CdA, m²", of("cda"), 4],
        ["Cl", of("cl"), 4],
        ["Cl, front axle", of("clFront"), 4],
        ["Cl, rear axle", of("clRear"), 4],
        ["Cs", of("cs"), 4],
      ]),
    },
  ];
  // Forces at the axles need the same dynamic pressure and area on both sides.
  const perCoefficient = sharedForce(comparison, runs);
  const newtons = (name: string) => (perCoefficient === null ? undefined : inNewtons(of(name), perCoefficient));
  const forces: [string, Difference | undefined][] = [
    ["drag", of("drag")],
    ["lift", of("lift")],
    ["lift, front axle", newtons("clFront")],
    ["lift, rear axle", newtons("clRear")],
  ];
  const condition = naming.condition(comparison.b.path);
  const at = condition === "" ? "" : ` at ${condition}`;
  const inUnit = (unit: string, factor: number, decimals: number): RowGroup => ({
    title: `Forces${at}, ${unit}`,
    rows: rows(forces.map(([head, found]) => [head, found && scaledDifference(found, factor), decimals])),
  });
  groups.push(inUnit("N", 1, 1), inUnit("kgf", 1 / standardGravity, 2));
  return groups.filter((group) => group.rows.length > 0);
}

const inNewtons = (found: Difference | undefined, perCoefficient: number): Difference | undefined =>
  found && scaledDifference(found, perCoefficient);

function sharedForce({ a, b }: Comparison, runs: ReportedRun[]): number | null {
  const of = (path: string) => {
    const run = runs.find(({ ledger }) => ledger.path === path);
    return run ? forcePerCoefficient(run.ledger.reference) : null;
  };
  const [one, other] = [of(a.path), of(b.path)];
  return one !== null && other !== null && Math.abs(one - other) <= 1e-9 * one ? one : null;
}

const differenceRow = (head: string, found: Difference, decimals: number): Row => ({
  head,
  cells: [
    cell(number(found.a, decimals)),
    cell(number(found.b, decimals)),
    cell(signedNumber(found.delta, decimals), plusMinus(found.halfWidth, decimals)),
    { text: found.verdict, verdict: found.verdict },
  ],
});

interface PartDifference {
  part: string;
  drag: Difference;
  lift: Difference | null;
}

/** Parts by the size of their drag difference, largest first, in counts. */
function partDifferences({ differences }: Comparison): PartDifference[] {
  return differences
    .filter((each) => each.part !== null && each.name === "cd")
    .map((drag) => {
      const lift = differences.find((each) => each.part === drag.part && each.name === "cl");
      return { part: drag.part!, drag: scaledDifference(drag, 1000), lift: lift ? scaledDifference(lift, 1000) : null };
    })
    .sort((one, other) => Math.abs(other.drag.delta) - Math.abs(one.drag.delta));
}

function partTable(title: string, a: string, b: string, parts: PartDifference[]): TableModel {
  const shared = parts.filter(({ drag }) => drag.a !== null && drag.b !== null);
  const single = parts.filter(({ drag }) => drag.a === null || drag.b === null);
  const row = ({ part, drag, lift }: PartDifference): Row => ({
    head: part,
    part,
    ...(drag.a === null ? { note: `only in ${b}` } : drag.b === null ? { note: `only in ${a}` } : {}),
    cells: [
      cell(number(drag.a, 1)),
      cell(number(drag.b, 1)),
      cell(signedNumber(drag.delta, 1), plusMinus(drag.halfWidth, 1)),
      { text: drag.verdict, verdict: drag.verdict },
      cell(signedNumber(lift?.delta, 1), plusMinus(lift?.halfWidth, 1)),
      lift ? { text: lift.verdict, verdict: lift.verdict } : cell("–"),
    ],
  });
  return {
    caption: `${title}, part by part, in counts`,
    corner: "part",
    columns: [
      numeric("drag\u00a0A", a),
      numeric("drag\u00a0B", b),
      numeric("B\u00a0−\u00a0A", "drag"),
      words("verdict"),
      numeric("B\u00a0−\u00a0A", "lift"),
      words("verdict"),
    ],
    groups: [
      { title: null, rows: shared.map(row) },
      { title: "Parts that only one of the two has", rows: single.map(row) },
    ].filter((group) => group.rows.length > 0),
  };
}

function sumText({ differences }: Comparison, parts: PartDifference[]): string {
  const whole = differences.find((each) => each.part === null && each.name === "cd");
  const sum = parts.reduce((total, { drag }) => total + drag.delta, 0);
  return `The parts add up to ${signedNumber(sum, 1)} counts of drag; the whole differs by ${signedNumber(whole ? counts(whole.delta) : null, 1)}.`;
}

function bars(differences: Difference[]): Bar[] {
  const sorted = [...differences].sort((one, other) => Math.abs(other.delta) - Math.abs(one.delta));
  const shown = sorted.length > mostBars + 1 ? sorted.slice(0, mostBars) : sorted;
  const rest = sorted.slice(shown.length);
  const list = shown.map(({ part, delta, halfWidth }) => ({ name: part!, value: delta, halfWidth }));
  if (rest.length > 0)
    list.push({ name: `${rest.length} others together`, value: rest.reduce((sum, { delta }) => sum + delta, 0), halfWidth: null });
  return list;
}
