import { readFile } from "node:fs/promises";
import { join } from "node:path";
import type { RunCard } from "../case/run-card.js";
import { Problem } from "../errors.js";
import { type BoundaryPatch, boundaryPatches } from "../openfoam/boundary.js";
import { parseDictionary } from "../openfoam/dictionary.js";
import { readCheckMesh, readMesherLog } from "../openfoam/mesh-log.js";
import { printable } from "../study/message-text.js";

/** What was found in a finished mesh: `trouble` makes it useless, remarks are worth knowing. */
export interface MeshVerdict {
  cells: number;
  trouble: string | null;
  remarks: string[];
}

const boundaryName = "constant/polyMesh/boundary";
const always = ["inlet", "outlet", "ground"];
/** Cells made over cells predicted, beyond which something is likely to be wrong with the body or the plan. */
const tooMany = 1.4;
const tooFew = 0.6;

/**
 * Judges a mesh by what stands in it, because the mesher reports none of these as errors: a keep-point inside the body, millimetres
 * taken as metres and a part that was lost all end with "Mesh OK.".
 */
export function judgeMesh(
  patches: Pick<BoundaryPatch, "name" | "faces">[],
  cells: number,
  card: Pick<RunCard, "parts" | "mesh" | "body">,
): MeshVerdict {
  const faces = new Map(patches.map((patch) => [patch.name, patch.faces]));
  const missing = (names: string[]) => names.filter((name) => !faces.get(name));
  const lost = missing(card.parts.map((part) => part.patch));
  const bounds = missing(always);
  const remarks: string[] = [];
  const predicted = card.mesh.predictedCells;
  if (predicted > 0 && cells > 0 && (cells > tooMany * predicted || cells < tooFew * predicted)) {
    const many = cells > predicted;
    remarks.push(
      `The mesh has ${cells} cells where ${Math.round(predicted)} were predicted: ${many ? "the inside of the body may be meshed too (a hole in a part), or thin parts take more cells" : "refinement may have stopped early"}.`,
    );
  }
  return { cells, trouble: troubleOf(bounds, lost, card), remarks };
}

function troubleOf(bounds: string[], lost: string[], card: Pick<RunCard, "parts" | "mesh" | "body">): string | null {
  const count = card.parts.length;
  if (bounds.length > 0 && lost.length < count) {
    return `the mesh has no faces on ${bounds.join(", ")}: it is the inside of the body, because the keep-point (locationInMesh) lies inside a part; check \`body.unit\`, travel and up, then prepare again`;
  }
  if (bounds.length > 0) return `the mesh has no faces on ${bounds.join(", ")} and on no part of the body; prepare the case again`;
  if (lost.length === 0) return null;
  if (lost.length === count) {
    const size = card.body.bounds.max.map((high, axis) => (high - card.body.bounds.min[axis]!).toPrecision(3)).join(" x ");
    return `no part of the body is in the mesh: the body is outside the domain or too small for its cells (body ${size} m, cells of ${card.mesh.baseCell} m before refinement); a wrong unit does this, check \`body.unit\` in the study`;
  }
  const names = card.parts.filter((part) => lost.includes(part.patch)).map((part) => printable(part.name));
  const shown = names.length > 5 ? `${names.slice(0, 5).join(", ")} and ${names.length - 5} more` : names.join(", ");
  return `no faces in the mesh for ${names.length === 1 ? "part" : `${names.length} parts`} ${shown}: smaller than the cells there, hidden inside another part, or outside the domain; use a finer mesh or leave ${names.length === 1 ? "it" : "them"} out`;
}

/** Reads the finished mesh of a case and its logs, and judges it. */
export async function checkMeshOf(casePath: string, card: Pick<RunCard, "parts" | "mesh" | "body">): Promise<MeshVerdict> {
  const mesh = join(casePath, "constant", "polyMesh");
  const boundary = await readFile(join(mesh, "boundary"), "utf8").catch(() => null);
  if (boundary === null) return { cells: 0, trouble: `${boundaryName} was not written`, remarks: [] };
  const cells = await cellsOf(join(mesh, "owner"));
  const verdict = judgeMesh(boundaryPatches(parseDictionary(boundary, boundaryName), boundaryName), cells, card);
  const mesher = await readLog(join(casePath, "log.snappyHexMesh"), readMesherLog);
  if (mesher?.limitReached) {
    verdict.remarks.push(
      "Refinement stopped at the limit of cells: the mesh is coarser than planned (log.snappyHexMesh). Raise maxGlobalCells.",
    );
  }
  const failed = (await readLog(join(casePath, "log.checkMesh"), readCheckMesh))?.failedChecks ?? 0;
  if (failed > 0) {
    verdict.remarks.push(
      `checkMesh: ${failed} ${failed === 1 ? "check" : "checks"} of the mesh failed (log.checkMesh, lines with ***). The run goes on; look at the places before trusting small differences.`,
    );
  }
  return verdict;
}

/** A log as its reader understands it; null for one that is missing, empty or no text. */
async function readLog<Log>(path: string, reader: (bytes: Uint8Array, name: string) => Log): Promise<Log | null> {
  const bytes = await readFile(path).catch(() => null);
  if (bytes === null) return null;
  try {
    return reader(bytes, path);
  } catch (error) {
    if (error instanceof Problem) return null;
    throw error;
  }
}

/** Number of cells from the note in the header of polyMesh/owner; 0 when it is not there. */
async function cellsOf(owner: string): Promise<number> {
  const text = await readFile(owner, "latin1").catch(() => "");
  return Number(/nCells:\s*(\d+)/.exec(text.slice(0, 4096))?.[1] ?? 0);
}
