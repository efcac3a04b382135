/**
 * Reading a long coefficient table (1 million rows, 13 columns): this project's reader against splitting lines and calling
 * Number() on every cell, in turns in one process so that both see the same machine. Prints medians of processor and wall time
 * and their ratio.
 *
 *   npx tsx tests/bench/history.bench.ts [rows] [digits after the point]
 */
import { readTables } from "../../src/openfoam/read-table.js";
import { MinimalStandard } from "../helpers/random.js";

const rows = Number(process.argv[2] ?? 1_000_000);
const precision = Number(process.argv[3] ?? 6);
const rounds = 5;
const names = ["Cd", "Cs", "Cl", "CmRoll", "CmPitch", "CmYaw", "Cd(f)", "Cd(r)", "Cs(f)", "Cs(r)", "Cl(f)", "Cl(r)"];

/** As the solver prints it: at least two digits in the exponent. */
const printed = (value: number): string => value.toExponential(precision).replace(/e([+-])(\d)$/, "e$10$2");

function table(): Uint8Array {
  const random = new MinimalStandard(1);
  const different = Array.from({ length: 5000 }, () => names.map(() => printed(random.uniform() - 0.5)).join("\t"));
  const lines = [`# Force coefficients\n# magUInf     : 3.0e+01\n#\n# Time        \t${names.join("\t")}\n`];
  for (let row = 1; row <= rows; row += 1) lines.push(`${String(row).padEnd(14)}\t${different[row % 5000]}\n`);
  return Buffer.from(lines.join(""));
}

function bySplitting(bytes: Uint8Array): Float64Array[] {
  const columns = Array.from({ length: 13 }, () => new Float64Array(rows));
  let row = 0;
  for (const line of Buffer.from(bytes.buffer, bytes.byteOffset, bytes.length).toString("latin1").split("\n")) {
    if (line === "" || line.startsWith("#")) continue;
    const cells = line.split("\t");
    for (let column = 0; column < 13; column += 1) columns[column]![row] = Number(cells[column]);
    row += 1;
  }
  return columns;
}

interface Took {
  processor: number;
  wall: number;
}

function timed<T>(work: () => T): { result: T; took: Took } {
  const before = process.cpuUsage();
  const start = performance.now();
  const result = work();
  const wall = performance.now() - start;
  const used = process.cpuUsage(before);
  return { result, took: { processor: (used.user + used.system) / 1000, wall } };
}

const median = (values: number[]): number => values.sort((a, b) => a - b)[Math.floor(values.length / 2)]!;

const bytes = table();
const own: Took[] = [];
const split: Took[] = [];
for (let round = 0; round < rounds; round += 1) {
  const mine = timed(() => readTables(bytes, "coefficient.dat")[0]!.columns.map(({ values }) => values));
  const theirs = timed(() => bySplitting(bytes));
  mine.result.forEach((values, column) => {
    for (let row = 0; row < rows; row += 1)
      if (values[row] !== theirs.result[column]![row]) throw new Error(`row ${row}, column ${column} differ`);
  });
  own.push(mine.took);
  split.push(theirs.took);
}
console.log(`${rows} rows, 13 columns, ${(bytes.length / 1e6).toFixed(0)} MB, medians of ${rounds}, ms`);
for (const kind of ["processor", "wall"] as const) {
  const [mine, theirs] = [median(own.map((took) => took[kind])), median(split.map((took) => took[kind]))];
  console.log(
    `${kind.padEnd(10)} reader ${mine.toFixed(0).padStart(6)}  split and Number ${theirs.toFixed(0).padStart(6)}  ratio ${(theirs / mine).toFixed(2)}`,
  );
}
