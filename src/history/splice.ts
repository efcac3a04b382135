import { type Finding, finding } from "../finding.js";
import type { Table, TableLayout } from "../openfoam/table.js";
import { checkHistory } from "./checks.js";
import type { History, Segment } from "./history.js";
import { type Piece, pickRows, stackTables } from "./pieces.js";

/** A file that cannot be read as a table: it is named in the segments, never passed over. */
export interface RefusedFile {
  file: string;
  reason: string;
}

/** Layouts whose columns and reference values must agree before two files are one history. */
const physical = new Set<TableLayout>(["coefficients", "forces", "moments", "bins"]);
/**
 * Two files are a jump apart when the first row of the later differs from the earlier by this share of the earlier's whole range.
 */
const jump = 0.5;
/** Relative difference of two header values that only comes from printing them with another precision. */
const printing = 2e-6;

interface Node {
  piece: Piece;
  parent: Node | null;
  root: Node;
  reason: string;
  /** set when the piece cannot take part at all */
  excluded: boolean;
}

/**
 * Joins all files of one table into one history. Folders count by their number; of two files in one folder the suffixed one is the
 * newer run. A file continues the run that reaches its first row and whose values it takes up, if columns and reference values
 * agree; where times overlap the later start wins. A run that starts anew (from the initial field, or with another reference) is
 * not joined: the newest run is the history, the others are left out and named.
 *
 * @param pieces all files of the table, in any order
 * @param refused files that could not be read
 */
export function splice(object: string, table: string, pieces: readonly Piece[], refused: readonly RefusedFile[] = []): History {
  const ordered = [...pieces].sort((a, b) => a.folderTime - b.folderTime || Number(a.suffixed) - Number(b.suffixed));
  const findings: Finding[] = refused.map(({ file, reason }) =>
    finding(
      "refused-file",
      "warning",
      `${file} was left out: ${reason}`,
      "Remove the file or copy it again from where the solver ran.",
    ),
  );
  const nodes: Node[] = [];
  for (const piece of ordered) nodes.push(place(piece, nodes, ordered, findings));
  const taking = nodes.filter((node) => !node.excluded);
  const newest = taking.findLast((node) => node.parent === null);
  const leaf = taking.findLast((node) => node.root === newest);
  const chain: Node[] = [];
  for (let node = leaf ?? null; node !== null; node = node.parent) chain.unshift(node);
  if (newest !== undefined) nameOtherRuns(taking, newest, chain, findings);

  const used = new Map<Node, Table>();
  chain.forEach((node, index) => {
    const next = chain[index + 1];
    const time = node.piece.table.columns[0]!.values;
    const first = index === 0 ? meaninglessRows(node, findings) : 0;
    let last = node.piece.table.rows;
    if (next !== undefined) {
      const limit = next.piece.from - 1e-9 * Math.abs(next.piece.from);
      while (last > 0 && time[last - 1]! >= limit) last -= 1;
    }
    const count = Math.max(0, last - first);
    used.set(
      node,
      pickRows(
        node.piece.table,
        Int32Array.from({ length: count }, (_, row) => first + row),
      ),
    );
    node.reason = chainReason(node, next, first, node.piece.table.rows - last);
  });
  const stacked = stackTables([...used.values()]);
  const model = leaf?.piece.table ?? ordered.at(-1)?.table;
  const segments: Segment[] = nodes.map((node) => ({
    file: node.piece.file,
    from: node.piece.from,
    to: node.piece.to,
    rows: node.piece.fileRows,
    used: used.get(node)?.rows ?? 0,
    reason: [node.reason, node.piece.remark].filter((text) => text !== "").join("; "),
  }));
  for (const { file, reason } of refused) segments.push({ file, from: Number.NaN, to: Number.NaN, rows: 0, used: 0, reason });
  const history: History = {
    object,
    table,
    layout: model?.layout ?? "unknown",
    dialect: model?.dialect ?? "",
    header: model?.header ?? {},
    columns: stacked.rows > 0 ? stacked.columns : (model?.columns.map(({ name }) => ({ name, values: new Float64Array(0) })) ?? []),
    words: stacked.words,
    rows: stacked.rows,
    segments,
    findings,
  };
  findings.push(...chain.flatMap((node) => tableFindings(node.piece)), ...checkHistory(history));
  return history;
}

function place(piece: Piece, before: readonly Node[], all: readonly Piece[], findings: Finding[]): Node {
  const node: Node = { piece, parent: null, root: null as unknown as Node, reason: "", excluded: false };
  node.root = node;
  if (piece.table.rows === 0) node.reason = "no complete row";
  else if (writtenAfterwards(piece, all)) node.reason = "written afterwards from stored fields (-postProcess), not by the run";
  if (node.reason !== "") {
    node.excluded = true;
    return node;
  }
  const reached = before.filter(
    (other) => !other.excluded && other.piece.folderTime < piece.folderTime && reaches(other.piece, piece),
  );
  const joinable: Node[] = [];
  for (const other of reached) {
    const difference = differences(other.piece.table, piece.table);
    if (difference === "") joinable.push(other);
    else {
      findings.push(
        finding(
          "reference-changes",
          "warning",
          `${piece.file} was not joined to ${other.piece.file}: ${difference}`,
          "Compare results on one reference only: run the case again, or read one file with `dragledger history`.",
        ),
      );
    }
  }
  let parent: Node | null = null;
  let nearest = Number.POSITIVE_INFINITY;
  for (const other of joinable) {
    const distance = distanceAtJoint(other, piece);
    // Of runs that fit equally well the later one is continued.
    if (distance <= nearest * 10 + 0.02) {
      parent = other;
      nearest = Math.min(nearest, distance);
    }
  }
  if (parent === null) return node;
  // Replacing another run from its very start is no continuation.
  const replacesAll = parent.piece.to >= piece.from && rowsBefore(parent, piece.from) <= 2;
  const startsAnew = replacesAll || distanceAtJoint(parent, piece) > jump;
  if (!startsAnew) {
    node.parent = parent;
    node.root = parent.root;
  }
  return node;
}

/** Written by `-postProcess`: rows at the folder's time and sparser than, and within, the rows of another file. */
function writtenAfterwards(piece: Piece, all: readonly Piece[]): boolean {
  if (piece.from !== piece.folderTime || piece.folderTime === 0) return false;
  return all.some((other) => {
    if (other === piece || other.folderTime >= piece.folderTime) return false;
    if (!(other.from <= piece.from && other.to >= piece.to)) return false;
    return piece.from === piece.to || piece.step >= 2 * other.step;
  });
}

/** The rows of `earlier` come up to the first row of `later`, give or take one step. */
function reaches(earlier: Piece, later: Piece): boolean {
  if (!(earlier.from < later.from)) return false;
  const step = Math.max(...[earlier.step, later.step].filter((each) => !Number.isNaN(each)));
  const gap = later.from - earlier.to;
  return gap <= (Number.isFinite(step) ? 1.5 * step : Math.max(0, later.from - later.folderTime) * 1.5);
}

/** What keeps two tables from being one history, in words; "" when nothing does. */
function differences(a: Table, b: Table): string {
  if (a.layout !== b.layout) return `one holds ${a.layout}, the other ${b.layout}`;
  if (!physical.has(a.layout)) return "";
  const names = (table: Table): string =>
    table.columns
      .map((column) => column.name)
      .sort()
      .join(" ");
  if (names(a) !== names(b)) return "their columns differ";
  for (const key of new Set([...Object.keys(a.header), ...Object.keys(b.header)])) {
    const [old, now] = [a.header[key], b.header[key]];
    if (old !== undefined && now !== undefined && same(old, now)) continue;
    return `${key} is ${show(old)} in the one and ${show(now)} in the other`;
  }
  return "";
}

const show = (value: Table["header"][string] | undefined): string =>
  value === undefined ? "missing" : Array.isArray(value) ? `(${value.join(" ")})` : String(value);

function same(a: Table["header"][string], b: Table["header"][string]): boolean {
  if (typeof a === "number" && typeof b === "number") return Math.abs(a - b) <= printing * Math.max(Math.abs(a), Math.abs(b));
  if (Array.isArray(a) && Array.isArray(b)) {
    const size = Math.max(...a.map(Math.abs), ...b.map(Math.abs));
    return a.every((part, axis) => Math.abs(part - b[axis]!) <= printing * size);
  }
  return a === b;
}

const lineage = (node: Node): Node[] => (node.parent === null ? [node] : [...lineage(node.parent), node]);

function rowsBefore(node: Node, time: number): number {
  let rows = 0;
  for (const { piece } of lineage(node)) for (const each of piece.table.columns[0]!.values) if (each < time) rows += 1;
  return rows;
}

/**
 * How far the first row of a piece lies from the run it might continue: the median over the columns of the difference to the row
 * before (or at) that time, as a share of the column's range over that run. A continued run is near 0; one that starts anew from
 * the initial field is near 1, because the start-up spans the range.
 */
function distanceAtJoint(node: Node, piece: Piece): number {
  if (!physical.has(piece.table.layout)) return 0;
  const time = node.piece.table.columns[0]!.values;
  let row = time.length - 1;
  while (row > 0 && time[row]! > piece.from) row -= 1;
  const shares: number[] = [];
  for (const { name, values } of piece.table.columns.slice(1)) {
    let least = Number.POSITIVE_INFINITY;
    let most = Number.NEGATIVE_INFINITY;
    let value = Number.NaN;
    for (const each of lineage(node)) {
      const column = each.piece.table.columns.find((other) => other.name === name)!.values;
      for (const other of column) {
        if (other < least) least = other;
        if (other > most) most = other;
      }
      value = column[row]!;
    }
    if (most - least > 1e-12 * Math.max(Math.abs(most), Math.abs(least)))
      shares.push(Math.abs(values[0]! - value) / (most - least));
  }
  shares.sort((a, b) => a - b);
  return shares[Math.floor(shares.length / 2)] ?? 0;
}

/** Rows at the start that hold no result: exact zeros before the first values, and the row of the initial field. */
function meaninglessRows(node: Node, findings: Finding[]): number {
  const { table, file, from, folderTime } = node.piece;
  if (table.layout !== "coefficients" && table.layout !== "forces" && table.layout !== "moments") return 0;
  const isZero = (row: number): boolean => table.columns.slice(1).every(({ values }) => values[row] === 0);
  let zeros = 0;
  while (zeros < table.rows && isZero(zeros)) zeros += 1;
  if (zeros === table.rows) return 0;
  if (zeros > 0) {
    findings.push(
      finding(
        "leading-zeros",
        zeros > 1 ? "warning" : "note",
        `${file} starts with ${zeros} rows of exact zeros before real values: the set-up was changed while running; they were left out`,
        "Check that the values after them come from one unchanged set-up.",
        { count: zeros },
      ),
    );
    return zeros;
  }
  const foundation =
    table.dialect === "F3" || table.dialect === "F4" || table.dialect.startsWith("C3") || table.dialect.startsWith("C4");
  return foundation && from === 0 && folderTime === 0 && table.rows > 1 ? 1 : 0;
}

function chainReason(node: Node, next: Node | undefined, skipped: number, replaced: number): string {
  const parts = [node.parent === null ? "start of the run" : `continues ${node.parent.piece.file}`];
  if (skipped > 0) {
    parts.push(skipped === 1 ? "its first row (start field) was left out" : `its first ${skipped} rows (zeros) were left out`);
  }
  if (next !== undefined && replaced > 0)
    parts.push(`${replaced} rows from time ${next.piece.from} on were replaced by ${next.piece.file}`);
  return parts.join("; ");
}

function nameOtherRuns(nodes: readonly Node[], newest: Node, chain: readonly Node[], findings: Finding[]): void {
  const left = nodes.filter((node) => !chain.includes(node));
  for (const node of left) {
    if (node.root === newest) node.reason = "a branch of the run that was given up: a later start took over";
    else {
      node.reason =
        node.parent === null ? "another run, older than the one used" : `continues ${node.parent.piece.file}, an older run`;
      if (node.piece.folderTime > newest.piece.folderTime) node.reason += ", although its folder is later";
    }
  }
  if (left.length > 0) {
    findings.push(
      finding(
        "several-runs",
        "warning",
        `${left.length} of ${nodes.length} files belong to other runs and were left out; the newest run starts with ${newest.piece.file}`,
        "Check that this is the run you mean; to read another one give its file to `dragledger history`.",
        { count: left.length },
      ),
    );
  }
}

/** What was odd about a file, as findings. */
export function tableFindings(piece: Piece): Finding[] {
  const found = piece.table.remarks.map(({ code, message }) =>
    finding(code, "warning", `${piece.file}: ${message}`, "Look at the file; results from the other rows stand."),
  );
  if (piece.remark !== "") {
    found.push(finding("time-order", "note", `${piece.file}: ${piece.remark}`, "Keep each run in its own file."));
  }
  return found;
}
