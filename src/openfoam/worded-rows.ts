import { cellsOf, numberOf } from "./number-rows.js";
import type { Column, Table, TableLayout } from "./table.js";
import { textLine } from "./table-bytes.js";

/**
 * Rows that hold words beside numbers: solver information, y+ and wall shear per patch, and tables this reader has no layout for.
 */
interface WordedTable {
  columns: Column[];
  words: Table["words"];
  rows: number;
}

const newline = 10;
const hash = 35;

/** One row on its way into the table: cells by column name. */
interface Row {
  time: number;
  numbers: Map<string, number>;
  words: Map<string, string>;
}

/**
 * Reads rows with words from `text[at]` on, until a comment line or the end. A last line without a line end is cut and left out.
 * Missing cells are NaN or "".
 */
export function readWordedRows(
  text: Uint8Array,
  at: number,
  line: number,
  layout: TableLayout,
  names: readonly string[],
  remarks: Table["remarks"],
): { table: WordedTable; at: number; line: number } {
  const parse = layout === "solver-information" ? solverRow(names) : layout === "unknown" ? anyRow(names) : patchRow(names);
  const rows: Row[] = [];
  let odd = 0;
  let firstOdd = 0;
  let unclear = 0;
  let position = at;
  let number = line;
  while (position < text.length && text[position] !== hash) {
    const end = text.indexOf(newline, position);
    const row = textLine(text, position, end < 0 ? text.length : end);
    position = end < 0 ? text.length : end + 1;
    number += 1;
    const cells = cellsOf(row);
    if (cells.length === 0) continue;
    if (end < 0) {
      remarks.push({ code: "cut-last-line", message: `line ${number} has no line end: cut while written, left out` });
      break;
    }
    const time = numberOf(cells[0]!);
    const parsed = time === undefined ? null : parse(cells.slice(1), time);
    if (parsed === null) {
      if (odd === 0) firstOdd = number;
      odd += 1;
    } else {
      if (parsed === "unclear") unclear += 1;
      rows.push(parsed === "unclear" ? { time: time!, numbers: new Map(), words: new Map() } : parsed);
    }
  }
  if (odd > 0) {
    const which = odd === 1 ? "1 row was" : `${odd} rows were`;
    remarks.push({ code: "odd-rows", message: `${which} left out: not of the shape its header tells (first at line ${firstOdd})` });
  }
  if (unclear > 0) {
    remarks.push({
      code: "unclear-groups",
      message: `${unclear} rows hold groups that the header does not name and that cannot be told apart: their cells are missing`,
    });
  }
  return { table: collect(rows, layout, names), at: position, line: number };
}

function collect(rows: readonly Row[], layout: TableLayout, names: readonly string[]): WordedTable {
  const numberNames = new Set<string>();
  const wordNames = new Set<string>();
  if (rows.length === 0) {
    for (const name of names) {
      const isWord = layout === "solver-information" ? /_(?:solver|converged)$/.test(name) : name === "patch";
      (isWord ? wordNames : numberNames).add(name);
    }
  }
  for (const row of rows) {
    for (const name of row.numbers.keys()) numberNames.add(name);
    for (const name of row.words.keys()) wordNames.add(name);
  }
  const columns = [...numberNames].map((name) => ({
    name,
    values: Float64Array.from(rows, (row) => row.numbers.get(name) ?? Number.NaN),
  }));
  return {
    columns: [{ name: "Time", values: Float64Array.from(rows, (row) => row.time) }, ...columns],
    words: [...wordNames].map((name) => ({ name, values: rows.map((row) => row.words.get(name) ?? "") })),
    rows: rows.length,
  };
}

/** Time, patch, then numbers: as many as the header names after `patch`, or three for each (vectors). */
function patchRow(names: readonly string[]): (cells: string[], time: number) => Row | null {
  const quantities = names.filter((name) => name !== "patch");
  const vectors = quantities.flatMap((name) => [`${name}_x`, `${name}_y`, `${name}_z`]);
  return (cells, time) => {
    const numbers = cells.slice(1).map(numberOf);
    const fitting = numbers.length === quantities.length ? quantities : numbers.length === vectors.length ? vectors : null;
    if (fitting === null || numbers.includes(undefined)) return null;
    return {
      time,
      numbers: new Map(fitting.map((name, index) => [name, numbers[index]!])),
      words: new Map([["patch", cells[0]!]]),
    };
  };
}

function anyRow(names: readonly string[]): (cells: string[], time: number) => Row {
  return (cells, time) => {
    const row: Row = { time, numbers: new Map(), words: new Map() };
    cells.forEach((cell, index) => {
      const name = names.length === cells.length ? names[index]! : `column ${index + 2}`;
      const value = cell === "N/A" ? Number.NaN : numberOf(cell);
      if (value === undefined) row.words.set(name, cell);
      else row.numbers.set(name, value);
    });
    return row;
  };
}

/** One field's share of a solver information row: solver word, triples (initial, final, iterations), switch. */
interface Group {
  solver: string;
  numbers: number[];
  converged: string;
}

/** The names of one field in the header: `U_solver`, `Ux_initial`, ..., `U_converged`. */
interface NamedGroup {
  solver: string;
  numbers: string[];
  converged: string;
}

/**
 * Solver information: the header is built once, but a row may hold more groups (a field that was not there when the header was
 * written) or fewer. Groups are read by their own shape and put to the header's by order; where that is not possible in exactly
 * one way the row stays empty instead of being guessed.
 */
function solverRow(names: readonly string[]): (cells: string[], time: number) => Row | "unclear" | null {
  const named: NamedGroup[] = [];
  for (const name of names) {
    if (name.endsWith("_solver")) named.push({ solver: name, numbers: [], converged: "" });
    else if (name.endsWith("_converged") && named.length > 0) named.at(-1)!.converged = name;
    else named.at(-1)?.numbers.push(name);
  }
  return (cells, time) => {
    const groups = solverGroups(cells);
    if (groups === null) return null;
    // A field solved by the `diagonal` solver (density) is the usual one the header does not know.
    const places =
      placing(groups, named) ??
      placing(
        groups.filter((group) => group.solver !== "diagonal"),
        named,
      );
    if (places === null) return "unclear";
    const row: Row = { time, numbers: new Map(), words: new Map() };
    for (const [name, group] of places) {
      row.words.set(name.solver, group.solver);
      row.words.set(name.converged, group.converged);
      name.numbers.forEach((cell, index) => {
        row.numbers.set(cell, group.numbers[index]!);
      });
    }
    return row;
  };
}

function solverGroups(cells: readonly string[]): Group[] | null {
  const groups: Group[] = [];
  let open: Group | null = null;
  for (const cell of cells) {
    if (open === null) open = { solver: cell, numbers: [], converged: "" };
    else if (cell === "true" || cell === "false") {
      groups.push({ ...open, converged: cell });
      open = null;
    } else {
      const value = numberOf(cell);
      if (value === undefined) return null;
      open.numbers.push(value);
    }
  }
  return open === null && groups.every((group) => group.numbers.length % 3 === 0) ? groups : null;
}

/**
 * The only order-keeping way to put the shorter list of groups into the longer one so that shapes agree; null when there is none
 * or more.
 */
function placing(groups: readonly Group[], named: readonly NamedGroup[]): [NamedGroup, Group][] | null {
  const [few, many] = groups.length <= named.length ? [groups, named] : [named, groups];
  // ways[i][j]: ways (0, 1, or 2 for more) to place the few from i on into the many from j on.
  const ways = Array.from({ length: few.length + 1 }, () => new Uint8Array(many.length + 1));
  ways[few.length]!.fill(1);
  const alike = (i: number, j: number): boolean => few[i]!.numbers.length === many[j]!.numbers.length;
  for (let i = few.length - 1; i >= 0; i -= 1) {
    for (let j = many.length - 1; j >= 0; j -= 1) {
      ways[i]![j] = Math.min(2, ways[i]![j + 1]! + (alike(i, j) ? ways[i + 1]![j + 1]! : 0));
    }
  }
  if (ways[0]![0] !== 1) return null;
  const pairs: [NamedGroup, Group][] = [];
  for (let i = 0, j = 0; i < few.length; j += 1) {
    if (!alike(i, j) || ways[i + 1]![j + 1] === 0) continue;
    pairs.push(few === groups ? [many[j] as NamedGroup, few[i] as Group] : [few[i] as NamedGroup, many[j] as Group]);
    i += 1;
  }
  return pairs;
}

/**
 * A residual row with cells `N/A`: up to Foundation 12 a vector that was not solved writes one N/A for all its components, so the
 * row is shorter than the header. Returns Time and one number per name (NaN for N/A); null when the cells cannot be put to the
 * names.
 */
export function shortResidualRow(cells: readonly string[], names: readonly string[]): number[] | null {
  const time = numberOf(cells[0] ?? "");
  if (time === undefined) return null;
  const row = [time];
  let missing = names.length + 1 - cells.length;
  let name = 0;
  for (const cell of cells.slice(1)) {
    if (name === names.length) return null;
    const value = cell === "N/A" ? Number.NaN : numberOf(cell);
    if (value === undefined) return null;
    row.push(value);
    name += 1;
    if (cell !== "N/A" || missing <= 0) continue;
    const vector = /^(.+)[xyz]$/.exec(names[name - 1]!)?.[1];
    while (
      missing > 0 &&
      vector !== undefined &&
      name < names.length &&
      /^[xyz]$/.test(names[name]!.slice(vector.length)) &&
      names[name]!.startsWith(vector)
    ) {
      row.push(Number.NaN);
      name += 1;
      missing -= 1;
    }
  }
  return name === names.length && missing === 0 ? row : null;
}
