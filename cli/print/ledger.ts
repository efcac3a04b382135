import type { Entry, LedgerRun } from "../../src/ledger/ledger.js";
import { estimate, fixed, shortPath } from "../../src/number-text.js";
import { printFindings } from "./findings.js";
import type { Printer } from "./printer.js";
import { csv, markdown, type TableColumn, table } from "./table.js";

export const countNote = "1 count = 0.001 of a coefficient; ± is the half-width of the 95 % interval of the mean.";

const numberColumn = (title: string): TableColumn => ({ title, align: "right" });

const partColumns: TableColumn[] = [
  { title: "part" },
  ...["Cd", "share %", "pressure", "friction", "Cl", "drag N", "lift N"].map(numberColumn),
];

function partRow(name: string, entry: Entry, total: Entry): string[] {
  return [
    name,
    estimate(entry.cd, 4),
    fixed((100 * entry.cd.value) / total.cd.value, 1),
    fixed(entry.cdPressure?.value, 4),
    fixed(entry.cdFriction?.value, 4),
    estimate(entry.cl, 4),
    estimate(entry.drag, 1),
    estimate(entry.lift, 1),
  ];
}

const partRows = (run: LedgerRun): string[][] => [
  ...run.parts.map((part) => partRow(part.name, part, run.total)),
  partRow("whole", run.total, run.total),
];

export function printLedger(print: Printer, runs: LedgerRun[]): void {
  for (const run of runs) {
    print.heading(`${run.variant}  ${run.condition}`);
    if (run.recorded) print.line(print.colours.yellow(`  recorded results: ${run.recorded}`));
    print.line(`  ${shortPath(run.path, process.cwd())}`);
    print.line(`  reference: ${referenceText(run)}`);
    print.line(
      `  window: ${run.window.from} to ${run.window.to}, ${run.window.rows} rows, ${fixed(run.window.effectiveSamples, 1)} effective samples`,
    );
    print.line();
    print.line(table(partColumns, partRows(run), print.colours.bold));
    const { total } = run;
    if (total.clFront && total.clRear)
      print.line(`axles: front lift Cl ${estimate(total.clFront, 4)}, rear lift Cl ${estimate(total.clRear, 4)}`);
    if (total.cdWind && total.csWind)
      print.line(
        `wind axes: Cd ${estimate(total.cdWind, 4)} along the air, side force Cs ${estimate(total.csWind, 4)}; the table has the vehicle's axes, Cs ${estimate(total.cs, 4)}`,
      );
    if (total.cda) print.line(`CdA: ${estimate(total.cda, 4)} m²`);
    print.line(`${run.closing.ok ? print.colours.green("closes") : print.colours.red("does not close")}: ${run.closing.message}`);
    printFindings(print, run.findings);
  }
  print.line();
  print.line(countNote);
}

function referenceText({ reference }: LedgerRun): string {
  const parts = [
    reference.area === null ? "area unknown" : `area ${fixed(reference.area, 4)} m²`,
    reference.speed === null ? "speed unknown" : `speed ${fixed(reference.speed, 2)} m/s`,
    reference.density === null ? "density unknown" : `density ${fixed(reference.density, 4)} kg/m³`,
    reference.wheelbase === null ? "no wheelbase" : `wheelbase ${fixed(reference.wheelbase, 3)} m`,
    ...(reference.symmetryFactor === 2 ? ["half model, forces doubled"] : []),
  ];
  return parts.join(", ");
}

const csvKeys = [
  "cd",
  "cl",
  "cs",
  "clFront",
  "clRear",
  "cm",
  "cdPressure",
  "cdFriction",
  "cda",
  "drag",
  "lift",
  "side",
  "cdWind",
  "csWind",
] as const;

/** One row per run and part; values and half-widths in columns of their own. */
export function ledgerCsv(runs: LedgerRun[]): string {
  const titles = ["path", "variant", "condition", "recorded", "part", ...csvKeys.flatMap((key) => [key, `${key}HalfWidth`])];
  const row = (run: LedgerRun, name: string, entry: Entry) => [
    run.path,
    run.variant,
    run.condition,
    run.recorded ?? "",
    name,
    ...csvKeys.flatMap((key) => [entry[key]?.value ?? null, entry[key]?.halfWidth ?? null]),
  ];
  return csv(
    titles,
    runs.flatMap((run) => [...run.parts.map((part) => row(run, part.name, part)), row(run, "whole", run.total)]),
  );
}

export function ledgerMarkdown(runs: LedgerRun[]): string {
  const blocks = runs.map(
    (run) =>
      `### ${run.variant} ${run.condition}\n\n${run.recorded ? `Recorded results: ${run.recorded}\n\n` : ""}Reference: ${referenceText(run)}.\n\n` +
      `${markdown(partColumns, partRows(run))}\n${run.closing.message}\n`,
  );
  return `${blocks.join("\n")}\n${countNote}\n`;
}
