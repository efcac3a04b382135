import type { Vector3 } from "../geometry/vector.js";
import { numberOf } from "./number-rows.js";
import type { TableLayout } from "./table.js";

/** What the comment lines above the rows of a table say. */
export interface TableHeader {
  /** First comment line when it is neither a value nor the column line; "" without one. */
  title: string;
  values: Record<string, number | string | Vector3>;
  /** Text after `Time` of the column line; null when there is no column line. */
  columnText: string | null;
}

const columnLine = /^#\s*Time(?:\s+(.*))?$/;

/** Reads comment lines (each starting with `#`, without line end). The last `# Time` line names the columns. */
export function parseHeader(lines: readonly string[]): TableHeader {
  const header: TableHeader = { title: "", values: {}, columnText: null };
  for (const line of lines) {
    const text = line.trimEnd();
    const columns = columnLine.exec(text);
    if (columns !== null) {
      header.columnText = columns[1] ?? "";
      continue;
    }
    const colon = text.indexOf(":");
    const key = text.slice(1, Math.max(1, colon)).trim();
    if (key !== "") header.values[key] = headerValue(text.slice(colon + 1).trim());
    else if (header.title === "" && header.columnText === null) header.title = text.replace(/^#\s*/, "");
  }
  return header;
}

function headerValue(text: string): number | string | Vector3 {
  const vector = /^\(\s*(\S+)\s+(\S+)\s+(\S+)\s*\)$/.exec(text);
  if (vector !== null) {
    const parts = [vector[1]!, vector[2]!, vector[3]!].map(numberOf);
    if (parts.every((part) => part !== undefined)) return parts as Vector3;
  }
  return numberOf(text) ?? text.replace(/\t/g, " ").trim();
}

/**
 * Column names after Time. Cells are parted by blanks outside brackets; a bracket with several names is a vector whose names take
 * what stands before the bracket (`0:(total_x total_y total_z)` gives `0:total_x`, ...). `CofR` stands for a vector. Version 2.2
 * glues its last two names (`Cl(f)Cl(r)`); 2.3 to 3.0.0 name every column twice.
 */
export function columnNames(columnText: string): { names: string[]; twice: boolean } {
  const names: string[] = [];
  for (const [cell] of columnText.matchAll(/(?:[^\s()]+|\([^()]*\))+/g)) {
    const inside = /^([^()]*)\(([^()]*)\)$/.exec(cell);
    const vector = inside !== null && /\s/.test(inside[2]!.trim()) ? inside : null;
    const glued = /^([^()]+\(f\))([^()]+\(r\))$/.exec(cell);
    if (vector !== null) for (const inner of vector[2]!.trim().split(/\s+/)) names.push(vector[1]! + inner);
    else if (glued !== null) names.push(glued[1]!, glued[2]!);
    else if (cell === "CofR") names.push("CofR_x", "CofR_y", "CofR_z");
    else names.push(cell);
  }
  const half = names.length / 2;
  const twice =
    names.length > 0 && Number.isInteger(half) && names.slice(0, half).every((name, index) => name === names[half + index]);
  return { names: twice ? names.slice(0, half) : names, twice };
}

const isCoefficient = (name: string): boolean => /^C(?:[dls]|m|m(?:Roll|Pitch|Yaw))(?:\([fr]\))?$/.test(name);

/**
 * What the table holds, from its header text; `name` (the file's own name) decides only between force and moment where a title is
 * missing. Folder names are free text of the user and say nothing.
 */
export function layoutOf(header: TableHeader, name: string): TableLayout {
  const title = header.title.trim();
  const columns = header.columnText ?? "";
  if ("bins" in header.values || /\bbins$/i.test(title)) return "bins";
  if (/^Force(?: and moment)? coefficients$/.test(title)) return "coefficients";
  if (title === "Forces" || /^(?:CofR\s+)?forces\(/.test(columns)) return "forces";
  if (title === "Force") return "forces";
  if (title === "Moment") return "moments";
  if (title === "Residuals") return "residuals";
  if (title === "Solver information") return "solver-information";
  if (/^y\+/.test(title)) return "y-plus";
  if (title === "Wall shear stress") return "wall-shear";
  const { names } = columnNames(columns);
  if (names.length > 0 && names.every(isCoefficient)) return "coefficients";
  if (names[0] === "total_x" && names.includes("pressure_x")) return /^(?:local)?moment/i.test(name) ? "moments" : "forces";
  return "unknown";
}
