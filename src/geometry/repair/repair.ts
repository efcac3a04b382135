import { edgeRings } from "../edges.js";
import { type SurfaceMesh, surfaceMesh } from "../surface-mesh.js";
import { topologyOf } from "../topology.js";
import type { TriangleSet } from "../triangle-set.js";
import type { Vector3 } from "../vector.js";
import { closeCracks } from "./cracks.js";
import { findDoubles } from "./doubles.js";
import { orient } from "./orient.js";

/** One kind of change in one part, or something that was seen and left. Places in the unit and axes of the file, up to ten. */
export interface RepairNote {
  kind:
    | "cracks-closed"
    | "degenerate-removed"
    | "duplicates-removed"
    | "turned-over"
    | "holes-left"
    | "non-manifold-left"
    | "opposite-duplicates-left"
    | "flat-left"
    | "one-sided-left"
    | "cavities-left";
  /** Name of the part; null for the body. */
  part: string | null;
  /** Vertices of cracks, edges of holes and of non-manifold edges, triangles of all others. */
  count: number;
  places: Vector3[];
  message: string;
}

export interface Repaired {
  set: TriangleSet;
  changes: RepairNote[];
  /** What is still not right, because nothing certain can be done about it. */
  left: RepairNote[];
}

const MOST_PLACES = 10;

/**
 * Repairs what is safe and certain about a body, and nothing else; the input is not touched. Triangles with a corner twice and second
 * copies of triangles are removed (of copies in two parts the first stays); cracks between open edges whose corners differ by rounding
 * only are closed (`closeCracks`); triangles are made to face one way within each patch, and closed patches outwards (`orient`). Parts, names and the order of the triangles stay, unit and axes too. Repairing the result again changes nothing.
 *
 * Holes are not filled, crossing walls not cut, triangles without area between three different corners not removed: what is right there
 * only the author of the body knows. They are listed in `left`.
 *
 * @param tolerance width of cracks that are closed, in the unit of the file; eight times the rounding of the largest coordinate to
 * 32 bits where it is not given, 2 µm on a car in metres
 */
export function repair(set: TriangleSet, { tolerance }: { tolerance?: number } = {}): Repaired {
  const mesh = surfaceMesh(set);
  const changes: RepairNote[] = [];
  // Copies go first, since they hide the open edges of cracks beside them; a closed crack can show further copies.
  const first = findDoubles(mesh);
  const single = without(mesh, [...first.degenerate, ...first.duplicate]);
  const cracks = closeCracks(single, tolerance ?? usualTolerance(mesh.vertices));
  const welded: SurfaceMesh =
    cracks.joined.length === 0
      ? single
      : { ...single, corners: cracks.corners, ring: edgeRings(cracks.corners, mesh.vertices.length / 3) };
  const second = cracks.joined.length === 0 ? { degenerate: [], duplicate: [] } : findDoubles(welded);
  const kept = without(welded, [...second.degenerate, ...second.duplicate]);
  if (cracks.joined.length > 0)
    changes.push({
      kind: "cracks-closed",
      part: null,
      count: cracks.joined.length,
      places: cracks.joined.slice(0, MOST_PLACES).map((vertex) => vertexAt(mesh, vertex)),
      message: `${cracks.joined.length} corners on open edges were joined to others within the tolerance: ${cracks.openBefore - cracks.openAfter} of ${cracks.openBefore} open edges are closed.`,
    });
  const removed = (kind: "degenerate" | "duplicate"): Tally => tallied(welded, second[kind], tallied(mesh, first[kind]));
  changes.push(
    ...notes(set, removed("degenerate"), "degenerate-removed", (n) => `${n} triangles with a corner twice were removed.`),
    ...notes(set, removed("duplicate"), "duplicates-removed", (n) => `${n} second copies of triangles were removed.`),
  );
  const { turn, oneSided, cavities } = orient(kept);
  const turned: number[] = [];
  for (let t = 0; t < turn.length; t++) if (turn[t] === 1) turned.push(t);
  changes.push(
    ...notes(
      set,
      tallied(kept, turned),
      "turned-over",
      (n) => `${n} triangles were turned over, to face as their neighbours do and outwards.`,
    ),
  );
  const corners = kept.corners.slice();
  for (const t of turned) {
    corners[3 * t + 1] = kept.corners[3 * t + 2];
    corners[3 * t + 2] = kept.corners[3 * t + 1];
  }
  const result: SurfaceMesh = { ...kept, corners, ring: edgeRings(corners, kept.vertices.length / 3) };
  return {
    set: changes.length === 0 ? set : { ...set, positions: positionsOf(result), partOf: result.partOf },
    changes,
    left: [
      ...whatIsLeft(set, result),
      ...notes(
        set,
        tallied(kept, oneSided),
        "one-sided-left",
        (n) => `${n} patches have one side only, like a strip with a half twist: no way to face is right.`,
      ),
      ...notes(
        set,
        tallied(kept, cavities),
        "cavities-left",
        (n) => `${n} closed shells face inwards inside of others: walls of cavities, and right if they are meant.`,
      ),
    ],
  };
}

function usualTolerance(vertices: Float32Array): number {
  let largest = 0;
  for (let k = 0; k < vertices.length; k++) largest = Math.max(largest, Math.abs(vertices[k]));
  return largest > 0 ? 8 * 2 ** (Math.floor(Math.log2(largest)) - 24) : 0;
}

const vertexAt = ({ vertices }: SurfaceMesh, vertex: number): Vector3 => [
  vertices[3 * vertex],
  vertices[3 * vertex + 1],
  vertices[3 * vertex + 2],
];

function middleOf(mesh: SurfaceMesh, t: number): Vector3 {
  const [a, b, c] = [0, 1, 2].map((k) => vertexAt(mesh, mesh.corners[3 * t + k]));
  return [0, 1, 2].map((axis) => (a[axis] + b[axis] + c[axis]) / 3) as Vector3;
}

/** Triangles by part: how many, and where. */
type Tally = Map<number, { count: number; places: Vector3[] }>;

function tallied(mesh: SurfaceMesh, triangles: number[], into: Tally = new Map()): Tally {
  for (const t of triangles) {
    const part = mesh.partOf[t];
    const entry = into.get(part) ?? { count: 0, places: [] };
    entry.count++;
    if (entry.places.length < MOST_PLACES) entry.places.push(middleOf(mesh, t));
    into.set(part, entry);
  }
  return into;
}

/** One note for each part of a tally, in the order of the parts. */
function notes({ parts }: TriangleSet, tally: Tally, kind: RepairNote["kind"], message: (count: number) => string): RepairNote[] {
  return [...tally]
    .sort(([a], [b]) => a - b)
    .map(([part, { count, places }]) => ({ kind, part: parts[part].name, count, places, message: message(count) }));
}

/** The mesh without some of its triangles; vertices stay, also those that nothing uses any more. */
function without(mesh: SurfaceMesh, triangles: number[]): SurfaceMesh {
  if (triangles.length === 0) return mesh;
  const gone = new Uint8Array(mesh.partOf.length);
  for (const t of triangles) gone[t] = 1;
  const partOf = mesh.partOf.filter((_, t) => gone[t] === 0);
  const corners = mesh.corners.filter((_, h) => gone[(h / 3) | 0] === 0);
  return { ...mesh, corners, partOf, ring: edgeRings(corners, mesh.vertices.length / 3) };
}

function positionsOf({ vertices, corners }: SurfaceMesh): Float32Array {
  const positions = new Float32Array(3 * corners.length);
  for (let h = 0; h < corners.length; h++)
    for (let axis = 0; axis < 3; axis++) positions[3 * h + axis] = vertices[3 * corners[h] + axis];
  return positions;
}

function whatIsLeft(set: TriangleSet, mesh: SurfaceMesh): RepairNote[] {
  const topology = topologyOf(mesh, set.parts.length);
  const { opposite } = findDoubles(mesh);
  const found: RepairNote[] = [];
  const add = (kind: RepairNote["kind"], count: number, places: Vector3[], message: string): void => {
    if (count > 0) found.push({ kind, part: null, count, places, message });
  };
  const { open, nonManifold, degenerate, borderCount } = topology;
  add(
    "holes-left",
    open.count,
    open.places,
    `${open.count} edges of ${borderCount} borders are open: holes or sheets, which only the author of the body can close.`,
  );
  add(
    "non-manifold-left",
    nonManifold.count,
    nonManifold.places,
    `${nonManifold.count} edges join more than two triangles: which walls are inner ones cannot be told.`,
  );
  add(
    "flat-left",
    degenerate.count,
    degenerate.places,
    `${degenerate.count} triangles have no area between three different corners: without them their neighbours would no longer meet.`,
  );
  add(
    "opposite-duplicates-left",
    opposite.length,
    opposite.slice(0, MOST_PLACES).map((t) => middleOf(mesh, t)),
    `${opposite.length} triangles lie on another one that faces the other way: a sheet without thickness, or solids that touch.`,
  );
  return found;
}
