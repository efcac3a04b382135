import { inputProblem } from "../errors.js";
import { blockColumns, type ForceBlocks, forceBlocks, totalFirstNames } from "./force-columns.js";
import { cellsOf, numberOf, readNumberRows } from "./number-rows.js";
import type { Column, Table, TableLayout } from "./table.js";
import { textBytes, textLine } from "./table-bytes.js";
import { columnNames, layoutOf, parseHeader, type TableHeader } from "./table-header.js";
import { readWordedRows, shortResidualRow } from "./worded-rows.js";

const newline = 10;
const hash = 35;

/** Rows under one header, before the parts of a file are joined. */
interface Section {
  layout: TableLayout;
  dialect: string;
  header: Table["header"];
  columns: Column[];
  words: Table["words"];
  /** `forces.dat` holds the moments in the same rows */
  moments: Column[] | null;
  rows: number;
}

type Remark = Table["remarks"][number];

/**
 * Reads a table that a function object of the solver wrote: coefficients, forces, moments, residuals, solver information, y+, wall
 * shear, bins, or any other with a `# Time` line. The layout comes from the header text and the shape of the rows, never from a
 * folder or a version. gzip is accepted.
 *
 * Forces and moments get the columns Time, total_x.. pressure_x.. viscous_x.. [porous_x..] in every dialect; a `forces.dat`, which
 * holds both, gives two tables, forces first. Units are the solver's (N, N m, or per unit density: nothing in the file tells).
 *
 * @param name file name for messages; its last part decides between force and moment only where a title is missing
 * @throws Problem (input) when the bytes are no table: empty, NUL bytes, storage pointer, no header and no numbers
 */
export function readTables(bytes: Uint8Array, name: string): Table[] {
  const text = textBytes(bytes, name);
  const baseName = name.split(/[\\/]/).at(-1)!;
  const remarks: Remark[] = [];
  const sections: Section[] = [];
  let at = 0;
  let line = 0;
  let previous: TableHeader | null = null;
  while (at < text.length) {
    const comments: string[] = [];
    while (at < text.length) {
      const end = lineEnd(text, at);
      if (text[at] === hash) comments.push(textLine(text, at, end));
      else if (!isBlank(text, at, end)) break;
      at = end + 1;
      line += 1;
    }
    const header = parseHeader(comments);
    if (header.columnText === null && previous !== null) header.columnText = previous.columnText;
    if (header.title === "" && previous !== null) header.title = previous.title;
    header.values = { ...previous?.values, ...header.values };
    previous = header;
    const read = readSection(text, at, line, header, baseName, remarks);
    sections.push(read.section);
    at = read.at;
    line = read.line;
  }
  if (sections.every((section) => section.layout === "unknown") && previous?.columnText == null) {
    throw inputProblem({
      code: "no-table",
      message: "no header line starts with '# Time': this is no table of a function object",
      where: name,
      remedy: "Give a table such as postProcessing/<object>/<time>/coefficient.dat.",
    });
  }
  const kept = sections.filter((section) => section.rows > 0);
  if (kept.length === 0) {
    remarks.push({ code: "no-rows", message: "the table has a header but no complete row" });
    kept.push(sections[0]!);
  }
  return joinSections(kept, remarks);
}

/** The first table of a file (the forces of a `forces.dat`); see `readTables`. */
export function readTable(bytes: Uint8Array, name: string): Table {
  return readTables(bytes, name)[0]!;
}

const lineEnd = (text: Uint8Array, at: number): number => {
  const end = text.indexOf(newline, at);
  return end < 0 ? text.length : end;
};

function isBlank(text: Uint8Array, from: number, to: number): boolean {
  for (let at = from; at < to; at += 1) if (text[at]! > 32) return false;
  return true;
}

/** Up to five lines of rows from `at` on, without a last line that has no line end. */
function firstRows(text: Uint8Array, at: number): string[] {
  const rows: string[] = [];
  for (let start = at; start < text.length && text[start] !== hash && rows.length < 5; ) {
    const end = text.indexOf(newline, start);
    if (end < 0) break;
    const row = textLine(text, start, end).trim();
    if (row !== "") rows.push(row);
    start = end + 1;
  }
  return rows;
}

function readSection(
  text: Uint8Array,
  at: number,
  line: number,
  header: TableHeader,
  name: string,
  remarks: Remark[],
): { section: Section; at: number; line: number } {
  const layout = layoutOf(header, name);
  const { names, twice } = columnNames(header.columnText ?? "");
  const first = firstRows(text, at);
  const section: Section = { layout, dialect: "", header: header.values, columns: [], words: [], moments: null, rows: 0 };
  const worded =
    layout === "solver-information" ||
    layout === "y-plus" ||
    layout === "wall-shear" ||
    (layout === "unknown" && first.some((row) => cellsOf(row).some((cell) => numberOf(cell) === undefined && cell !== "N/A")));
  if (worded) {
    const read = readWordedRows(text, at, line, layout, names, remarks);
    return { section: { ...section, ...read.table }, at: read.at, line: read.line };
  }
  const width = layout === "residuals" ? names.length + 1 : commonWidth(first, names.length + 1);
  const dropped = { count: 0, line: 0, cells: 0 };
  const read = readNumberRows(text, at, width, (row, rowLine) => {
    const cells = cellsOf(row);
    const numbers = layout === "residuals" ? shortResidualRow(cells, names) : cells.map(cellValue);
    if (numbers !== null && numbers.length === width && !numbers.includes(undefined)) return numbers as number[];
    if (dropped.count === 0) Object.assign(dropped, { line: line + rowLine, cells: cells.length });
    dropped.count += 1;
    return null;
  });
  if (dropped.count > 0) {
    const which = dropped.count === 1 ? "1 row was" : `${dropped.count} rows were`;
    remarks.push({
      code: "odd-rows",
      message: `${which} left out: not ${width} numbers (line ${dropped.line} has ${dropped.cells} cells)`,
    });
  }
  if (read.cut)
    remarks.push({ code: "cut-last-line", message: `line ${line + read.lines} has no line end: cut while written, left out` });
  section.rows = read.rows;
  const cells = read.columns.map((values) => values.subarray(0, read.rows));
  nameColumns(section, cells, { names, twice, first: first[0] ?? "", header, name }, remarks);
  return { section, at: read.at, line: line + read.lines };
}

function cellValue(cell: string): number | undefined {
  return cell === "N/A" ? Number.NaN : numberOf(cell);
}

/** The number of cells that most of the first rows have; the header's count when there are no rows. */
function commonWidth(rows: readonly string[], headerWidth: number): number {
  const counts = new Map<number, number>();
  for (const row of rows) {
    const cells = cellsOf(row).length;
    counts.set(cells, (counts.get(cells) ?? 0) + 1);
  }
  let width = headerWidth;
  let most = 0;
  for (const [cells, count] of counts) {
    if (count > most) {
      width = cells;
      most = count;
    }
  }
  return width;
}

interface Naming {
  names: string[];
  twice: boolean;
  /** the first row's text: its brackets tell the dialect */
  first: string;
  header: TableHeader;
  name: string;
}

function nameColumns(section: Section, cells: Float64Array[], naming: Naming, remarks: Remark[]): void {
  const { names, header } = naming;
  const time: Column = { name: "Time", values: cells[0]! };
  let after = cells.slice(1);
  if (section.layout === "forces" || section.layout === "moments") {
    const front: Column[] = [time];
    // A moving body's rotation centre stands between the time and the forces.
    if (/^\s*CofR\b/.test(header.columnText ?? "")) {
      front.push(...["x", "y", "z"].map((axis, index) => ({ name: `CofR_${axis}`, values: after[index]! })));
      after = after.slice(3);
    }
    const totalFirst =
      header.title !== "Forces" && !/\bforces\(/.test(header.columnText ?? "") ? totalFirstNames(after.length) : null;
    if (totalFirst !== null) {
      section.dialect = naming.first.includes("(") ? "F5" : "F6";
      section.columns = [...front, ...totalFirst.map((name, index) => ({ name, values: after[index]! }))];
      return;
    }
    const blocks = forceBlocks(after.length);
    if (blocks !== null) {
      section.dialect = blockDialect(naming.first, blocks);
      nameBlocks(section, front, after, blocks);
      return;
    }
    section.layout = "unknown";
  }
  if (section.layout === "coefficients") section.dialect = coefficientDialect(naming);
  let columns = names;
  if (section.rows > 0 && columns.length !== after.length) {
    if (names.length > 0 && after.length === 3 * names.length) {
      columns = names.flatMap((name) => [`${name}_x`, `${name}_y`, `${name}_z`]);
    } else {
      // Names that may be shifted would give a plausible wrong value.
      columns = after.map((_, index) => `column ${index + 2}`);
      remarks.push({
        code: "header-mismatch",
        message: `the header names ${names.length + 1} columns but the rows hold ${after.length + 1} numbers: the columns have no names`,
      });
      if (section.layout === "coefficients") {
        section.layout = "unknown";
        section.dialect = "";
      }
    }
  }
  section.columns = [time, ...columns.map((name, index) => ({ name, values: after[index] ?? new Float64Array(0) }))];
}

function blockDialect(firstRow: string, blocks: ForceBlocks): string {
  const brackets = firstRow.replace(/\s+/g, "");
  if (brackets.includes("(((")) return "F1";
  if (brackets.includes("),(")) return "F2";
  return blocks.parts === 3 ? "F3" : "F4";
}

/** Columns of a `forces.dat`; values in a local system stand further right in the row, or in a second row of the same time. */
function nameBlocks(section: Section, front: Column[], cells: Float64Array[], blocks: ForceBlocks): void {
  const share = blocks.parts * 3;
  let [lead, main] = [front, cells.slice(0, 2 * share)];
  let local = blocks.local ? cells.slice(2 * share) : null;
  const time = front[0]!.values;
  const paired = time.length >= 2 && time.length % 2 === 0 && time.every((each, row) => each === time[row - (row % 2)]);
  if (local === null && paired) {
    const everyOther = (values: Float64Array, start: number): Float64Array =>
      Float64Array.from({ length: values.length / 2 }, (_, row) => values[2 * row + start]!);
    lead = front.map(({ name, values }) => ({ name, values: everyOther(values, 0) }));
    local = main.map((values) => everyOther(values, 1));
    main = main.map((values) => everyOther(values, 0));
    section.rows /= 2;
  }
  section.columns = [...lead, ...blockColumns(main.slice(0, share))];
  section.moments = [...lead, ...blockColumns(main.slice(share))];
  if (local !== null) {
    section.columns.push(...blockColumns(local.slice(0, share), "local_"));
    section.moments.push(...blockColumns(local.slice(share), "local_"));
  }
}

/** Which program family wrote a coefficient table, as far as its header tells. */
function coefficientDialect({ names, twice, header, name }: Naming): string {
  if (header.title === "Force and moment coefficients") return "C7";
  if (header.title === "") return names[0] === "Cm" ? "C2" : "C1";
  if (names.includes("CmRoll")) return "C6";
  if (twice) return "C3";
  if (/^coefficient/i.test(name)) return "C5";
  return /^forceCoeffs/i.test(name) ? "C4" : "C4 or C5";
}

/** Joins the parts of a file (a header can come again, with other columns) by column name; a missing cell is NaN. */
function joinSections(sections: readonly Section[], remarks: Remark[]): Table[] {
  const first = sections[0]!;
  const alike = sections.filter((section) => section.layout === first.layout);
  if (alike.length < sections.length) {
    remarks.push({
      code: "mixed-layouts",
      message: `the file holds tables of several kinds: only its ${first.layout} rows were read`,
    });
  }
  if (alike.some((section) => JSON.stringify(section.header) !== JSON.stringify(first.header))) {
    remarks.push({
      code: "header-changes",
      message: "header values change inside the file: it was put together from several runs",
    });
  }
  const rows = alike.reduce((sum, section) => sum + section.rows, 0);
  const table: Table = {
    layout: first.layout,
    dialect: first.dialect,
    header: alike.at(-1)!.header,
    columns: joinColumns(alike.map((section) => ({ columns: section.columns, rows: section.rows }))),
    words: joinWords(alike),
    rows,
    remarks,
  };
  if (first.moments === null) return [table];
  const moments = alike.map((section) => ({ columns: section.moments ?? [], rows: section.rows }));
  return [table, { ...table, layout: "moments", columns: joinColumns(moments) }];
}

function joinColumns(pieces: readonly { columns: Column[]; rows: number }[]): Column[] {
  if (pieces.length === 1) return pieces[0]!.columns;
  const rows = pieces.reduce((sum, piece) => sum + piece.rows, 0);
  const joined = new Map<string, Float64Array>();
  let offset = 0;
  for (const piece of pieces) {
    for (const column of piece.columns) {
      let values = joined.get(column.name);
      if (values === undefined) joined.set(column.name, (values = new Float64Array(rows).fill(Number.NaN)));
      values.set(column.values, offset);
    }
    offset += piece.rows;
  }
  return [...joined].map(([name, values]) => ({ name, values }));
}

function joinWords(sections: readonly Section[]): Table["words"] {
  const names = [...new Set(sections.flatMap((section) => section.words.map((column) => column.name)))];
  return names.map((name) => ({
    name,
    values: sections.flatMap(
      (section) => section.words.find((column) => column.name === name)?.values ?? Array<string>(section.rows).fill(""),
    ),
  }));
}
