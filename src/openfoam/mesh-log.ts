import type { Box, Vector3 } from "../geometry/vector.js";
import { FatalText, logLines } from "./log-lines.js";
import { numberOf } from "./number-rows.js";

/** What the mesh checker found: the last time block of its log. */
export interface MeshCheck {
  /** true: `Mesh OK.`; false: checks failed; null: the log ends before a result */
  ok: boolean | null;
  failedChecks: number;
  /** time blocks in the log, and how many of them failed */
  blocks: number;
  failedBlocks: number;
  points: number | null;
  faces: number | null;
  cells: number | null;
  /** cells by shape: hexahedra, prisms, polyhedra, ... */
  shapes: Record<string, number>;
  patches: { name: string; faces: number; points: number; topology: string }[];
  /** separate regions of cells; more than one means pockets that the flow does not reach */
  regions: number | null;
  /** metres */
  bounds: Box | null;
  maxAspectRatio: number | null;
  minVolume: number | null;
  maxVolume: number | null;
  totalVolume: number | null;
  /** degrees */
  maxNonOrthogonality: number | null;
  averageNonOrthogonality: number | null;
  /** faces above 70 degrees: a note, not a failure */
  severelyNonOrthogonal: number;
  maxSkewness: number | null;
  /** texts of failed checks (`***`) and of notes (`*`) */
  failures: string[];
  notes: string[];
  fatal: string | null;
}

const emptyCheck = (): Omit<MeshCheck, "blocks" | "failedBlocks" | "fatal"> => ({
  ok: null,
  failedChecks: 0,
  points: null,
  faces: null,
  cells: null,
  shapes: {},
  patches: [],
  regions: null,
  bounds: null,
  maxAspectRatio: null,
  minVolume: null,
  maxVolume: null,
  totalVolume: null,
  maxNonOrthogonality: null,
  averageNonOrthogonality: null,
  severelyNonOrthogonal: 0,
  maxSkewness: null,
  failures: [],
  notes: [],
});

const number = "([-+.\\deE]+)";
const patchRow = /^(\S+)\s+(\d+)\s+(\d+)\s+(ok|multiply|single|closed|non-closed|\S.*)$/;
const boundingBox = new RegExp(`bounding box \\(${number} ${number} ${number}\\) \\(${number} ${number} ${number}\\)`);
const volumes = new RegExp(`Min volume = ${number}\\. Max volume = ${number}\\.\\s+Total volume = ${number}\\.`);
const orthogonality = new RegExp(`Mesh non-orthogonality Max: ${number} average: ${number}`);

/**
 * Reads the log of the mesh checker. Several time blocks: the last one counts. `Mesh OK.` does not mean that the body is in the
 * mesh; look at the patches.
 *
 * @throws Problem (input) for an empty file or bytes that are no text
 */
export function readCheckMesh(log: Uint8Array | string, name: string): MeshCheck {
  let check = emptyCheck();
  let blocks = 0;
  let failedBlocks = 0;
  let table: "shapes" | "patches" | null = null;
  const fatal = new FatalText();
  for (const line of logLines(log, name)) {
    if (fatal.take(line)) continue;
    const text = line.text.trim();
    if (text === "Mesh stats") {
      blocks += 1;
      check = emptyCheck();
    } else if (text === "") table = null;
    else if (text.startsWith("Overall number of cells of each type")) table = "shapes";
    else if (/^Patch\s+Faces\s+Points/.test(text)) table = "patches";
    else if (table === "shapes") {
      const shape = /^([a-z ]+):\s+(\d+)$/.exec(text);
      if (shape === null) table = null;
      else check.shapes[shape[1]!] = Number(shape[2]);
    } else if (table === "patches") {
      const row = patchRow.exec(text);
      // A line ".*" of newer versions sums the table up.
      if (row !== null && row[1] !== '".*"') {
        check.patches.push({ name: row[1]!, faces: Number(row[2]), points: Number(row[3]), topology: row[4]! });
      }
    } else if (text === "Mesh OK.") check.ok = true;
    else if (/^Failed \d+ mesh checks/.test(text)) {
      check.ok = false;
      check.failedChecks = Number(/\d+/.exec(text)![0]);
      failedBlocks += 1;
    } else takeValue(check, text);
  }
  fatal.close();
  return { ...check, blocks, failedBlocks, fatal: fatal.message };
}

function takeValue(check: ReturnType<typeof emptyCheck>, text: string): void {
  if (text.startsWith("***")) check.failures.push(text.slice(3));
  else if (text.startsWith("*")) check.notes.push(text.slice(1));
  const count = /^(points|faces|cells):\s+(\d+)/.exec(text);
  if (count !== null) check[count[1] as "points" | "faces" | "cells"] = Number(count[2]);
  else if (text.startsWith("Number of regions:")) check.regions = Number(/\d+/.exec(text)?.[0] ?? Number.NaN);
  else if (text.includes("Number of severely non-orthogonal"))
    check.severelyNonOrthogonal = Number(/faces: (\d+)/.exec(text)?.[1] ?? 0);
  else if (text.includes("bounding box")) {
    const box = boundingBox.exec(text)?.slice(1).map(Number);
    if (box !== undefined) check.bounds = { min: box.slice(0, 3) as Vector3, max: box.slice(3) as Vector3 };
  } else if (text.includes("aspect ratio")) check.maxAspectRatio = valueAfter(text, "aspect ratio =") ?? check.maxAspectRatio;
  else if (text.includes("skewness")) check.maxSkewness = valueAfter(text, "skewness =") ?? check.maxSkewness;
  else if (text.startsWith("Min volume")) {
    const found = volumes.exec(text)?.slice(1).map(Number);
    if (found !== undefined) [check.minVolume, check.maxVolume, check.totalVolume] = found as [number, number, number];
  } else if (text.startsWith("Mesh non-orthogonality")) {
    const found = orthogonality.exec(text)?.slice(1).map(Number);
    if (found !== undefined) [check.maxNonOrthogonality, check.averageNonOrthogonality] = found as [number, number];
  }
}

/** The number behind a text, as in `Max skewness = 3.17 OK.` or `***Max skewness = 8.18, 32 faces`. */
function valueAfter(text: string, before: string): number | null {
  const at = text.indexOf(before);
  if (at < 0) return null;
  return (
    numberOf(
      text
        .slice(at + before.length)
        .trim()
        .split(/[\s,]/)[0]!
        .replace(/\.$/, ""),
    ) ?? null
  );
}

/** Layers on one patch as the mesher reached them. */
export interface PatchLayers {
  patch: string;
  faces: number;
  /** asked; null when the log does not hold the first table */
  wanted: number | null;
  /** mean over the faces, fractional */
  layers: number;
  /** metres */
  thickness: number;
  /** percent of the thickness asked */
  share: number;
}

/** What the mesher's log says. */
export interface MesherLog {
  finished: boolean;
  /** faces left with an error; 0 for a good mesh, null before the end */
  illegalFaces: number | null;
  /** of the last phase that is done */
  phase: "refined" | "snapped" | "layers" | null;
  cells: number | null;
  faces: number | null;
  points: number | null;
  /** cells per refinement level, index = level */
  levels: number[];
  layers: PatchLayers[];
  /** The cell limit stopped the refinement: the mesh is coarser than asked. */
  limitReached: boolean;
  seconds: number | null;
  fatal: string | null;
}

const meshLine = /^(Refined|Snapped|Layer) mesh : cells:(\d+)\s+faces:(\d+)\s+points:(\d+)/;
const phases = { Refined: "refined", Snapped: "snapped", Layer: "layers" } as const;
const limitLine = /No cells marked for refinement since reached limit|since reaching my cell limit|^Reached refinement limit\.?$/;

/**
 * Reads the log of the mesher (snappyHexMesh of both families).
 *
 * @throws Problem (input) for an empty file or bytes that are no text
 */
export function readMesherLog(log: Uint8Array | string, name: string): MesherLog {
  const mesh: MesherLog = {
    finished: false,
    illegalFaces: null,
    phase: null,
    cells: null,
    faces: null,
    points: null,
    levels: [],
    layers: [],
    limitReached: false,
    seconds: null,
    fatal: null,
  };
  const wanted = new Map<string, number>();
  let table: "levels" | "wanted" | "reached" | null = null;
  const fatal = new FatalText();
  for (const line of logLines(log, name)) {
    if (fatal.take(line)) continue;
    const { text } = line;
    if (table === "levels") {
      const level = /^\s+(\d+)\s+(\d+)$/.exec(text);
      if (level !== null) {
        mesh.levels[Number(level[1])] = Number(level[2]);
        continue;
      }
      table = null;
    }
    if (table !== null) {
      if (text.trim() === "") table = null;
      else layerRow(text, table, wanted, mesh);
      continue;
    }
    const counts = meshLine.exec(text);
    if (counts !== null) {
      mesh.phase = phases[counts[1] as keyof typeof phases];
      [mesh.cells, mesh.faces, mesh.points] = counts.slice(2).map(Number) as [number, number, number];
    } else if (text.startsWith("Cells per refinement level")) {
      table = "levels";
      mesh.levels = [];
    } else if (/^patch\s+faces\s+layers/.test(text)) {
      table = text.includes("avg thickness") ? "wanted" : "reached";
      if (table === "reached") mesh.layers = [];
    } else if (limitLine.test(text)) mesh.limitReached = true;
    else if (text.startsWith("Finished meshing without any errors")) mesh.illegalFaces = 0;
    else if (text.startsWith("Finished meshing with ")) mesh.illegalFaces = Number(/with (\d+)/.exec(text)?.[1] ?? Number.NaN);
    else if (text.startsWith("Finished meshing in")) {
      mesh.finished = true;
      mesh.seconds = valueAfter(text, "=");
    }
  }
  fatal.close();
  mesh.fatal = fatal.message;
  // A level that no table row names has no cells.
  mesh.levels = Array.from(mesh.levels, (cells) => cells ?? 0);
  return mesh;
}

/**
 * `patch faces layers ...`: before, thickness asked; after, layers reached (newest versions: also the target), thickness in m and
 * in percent.
 */
function layerRow(text: string, table: "wanted" | "reached", wanted: Map<string, number>, mesh: MesherLog): void {
  const cells = text.trim().split(/\s+/);
  const [patch, ...rest] = cells;
  const numbers = rest.map(numberOf);
  if (patch === undefined || numbers.includes(undefined) || numbers.length < 4) return;
  const values = numbers as number[];
  if (table === "wanted") wanted.set(patch, values[1]!);
  else {
    mesh.layers.push({
      patch,
      faces: values[0]!,
      wanted: values.length > 4 ? values[2]! : (wanted.get(patch) ?? null),
      layers: values[1]!,
      thickness: values.at(-2)!,
      share: values.at(-1)!,
    });
  }
}
