import Table from "cli-table3";

export interface TableColumn {
  title: string;
  /** Numbers stand right. */
  align?: "left" | "right";
}

const blank = {
  top: "",
  "top-mid": "",
  "top-left": "",
  "top-right": "",
  bottom: "",
  "bottom-mid": "",
  "bottom-left": "",
  "bottom-right": "",
  left: "",
  "left-mid": "",
  mid: "",
  "mid-mid": "",
  right: "",
  "right-mid": "",
  middle: "  ",
};

/** A table without frames: a head line, then rows; two blanks between columns. */
export function table(columns: TableColumn[], rows: string[][], emphasise: (text: string) => string = (text) => text): string {
  const drawn = new Table({
    chars: blank,
    style: { head: [], border: [], "padding-left": 0, "padding-right": 0, compact: true },
    head: columns.map(({ title }) => emphasise(title)),
    colAligns: columns.map(({ align }) => align ?? "left"),
  });
  drawn.push(...rows);
  return drawn
    .toString()
    .split("\n")
    .map((line) => line.trimEnd())
    .join("\n");
}

/** Rows as CSV (RFC 4180): quoted where needed, and never a cell that a spreadsheet would take for a formula. */
export function csv(titles: string[], rows: (string | number | null)[][]): string {
  return [titles, ...rows].map((row) => row.map(csvCell).join(",")).join("\r\n") + "\r\n";
}

function csvCell(cell: string | number | null): string {
  if (cell === null) return "";
  if (typeof cell === "number") return Number.isFinite(cell) ? String(cell) : "";
  const safe = /^[=+\-@\t\r]/.test(cell) ? `'${cell}` : cell;
  return /[",\r\n]/.test(safe) ? `"${safe.replaceAll('"', '""')}"` : safe;
}

/** Rows as a Markdown table; bars in cells are escaped. */
export function markdown(columns: TableColumn[], rows: string[][]): string {
  const line = (cells: string[]) => `| ${cells.map((cell) => cell.replaceAll("|", "\\|").replaceAll("\n", " ")).join(" | ")} |`;
  const rule = columns.map(({ align }) => (align === "right" ? "--:" : ":--"));
  return [line(columns.map(({ title }) => title)), line(rule), ...rows.map(line)].join("\n") + "\n";
}
