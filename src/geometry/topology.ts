import { type OpenBorder, openBorders } from "./checks/open-loops.js";
import { COPY, copiesOf } from "./copies.js";
import { NO_EDGE, nextInTriangle } from "./edges.js";
import { measures } from "./measures.js";
import { type Shells, shellsOf } from "./shells.js";
import type { SurfaceMesh } from "./surface-mesh.js";
import type { Vector3 } from "./vector.js";

/** How often something was found, where (up to ten places, mesh unit and axes), and how often in each part. */
export interface Occurrence {
  count: number;
  places: Vector3[];
  /** 1 per part */
  perPart: Uint32Array;
}

export interface MeshTopology {
  /** Edges of one triangle. */
  open: Occurrence;
  /** Edges of three triangles or more. */
  nonManifold: Occurrence;
  /** Edges whose two triangles face opposite ways. */
  flipped: Occurrence;
  /** Triangles without area. */
  degenerate: Occurrence;
  /** Triangles with the same three vertices as an earlier one. */
  duplicate: Occurrence;
  shells: Shells;
  /** Shells that are closed and consistent, yet enclose a negative volume. Places are the shells' surface centroids. */
  insideOut: Occurrence;
  /** Shells without open, non-manifold or flipped edges. */
  closedShells: number;
  /** Longest first, at most a hundred. */
  borders: OpenBorder[];
  borderCount: number;
  /** 1 per part: borders that run along it. */
  bordersPerPart: Uint32Array;
  /** 1 per part: edges of a single triangle when the part is looked at without the others; more than its open edges where it is joined to others. */
  openAlone: Uint32Array;
}

/** Topology of one part. An edge between two parts counts as joined: the body decides. */
export interface PartTopology {
  openEdges: number;
  /** Edges that would be open if the part were alone. */
  openAlone: number;
  borders: number;
  nonManifoldEdges: number;
  flippedEdges: number;
  degenerate: number;
  duplicate: number;
  insideOut: number;
}

/** The same counts part by part, one entry per part. An edge of several parts that is not open is counted with its first triangle's. */
export function topologyByPart(topology: MeshTopology): PartTopology[] {
  return Array.from(topology.openAlone, (openAlone, part) => ({
    openEdges: topology.open.perPart[part],
    openAlone,
    borders: topology.bordersPerPart[part],
    nonManifoldEdges: topology.nonManifold.perPart[part],
    flippedEdges: topology.flipped.perPart[part],
    degenerate: topology.degenerate.perPart[part],
    duplicate: topology.duplicate.perPart[part],
    insideOut: topology.insideOut.perPart[part],
  }));
}

const MOST_PLACES = 10;

/** What keeps a surface from being the skin of a solid. One pass over the edges, one over the triangles. `parts`: number of parts. */
export function topologyOf(mesh: SurfaceMesh, parts: number): MeshTopology {
  const { corners, ring } = mesh;
  const none = (): Occurrence => ({ count: 0, places: [], perPart: new Uint32Array(parts) });
  const open = none();
  const nonManifold = none();
  const flipped = none();
  const degenerate = none();
  const duplicate = none();
  const shells = shellsOf(mesh);
  const copies = copiesOf(mesh);
  /** 1 for half-edges of an edge of three triangles or more that has been counted. */
  const seen = new Uint8Array(ring.length);
  const unsound = new Uint8Array(shells.count);
  const openAlone = new Uint32Array(parts);
  const note = (into: Occurrence, triangle: number, place: () => Vector3): void => {
    into.count++;
    into.perPart[mesh.partOf[triangle]]++;
    if (into.places.length < MOST_PLACES) into.places.push(place());
  };
  for (let t = 0, h = 0; h < ring.length; t++) {
    if (isFlat(mesh, t)) note(degenerate, t, () => triangleMiddle(mesh, t));
    if (ring[h] === NO_EDGE) {
      h += 3;
      continue;
    }
    if (copies[t] !== COPY.none) note(duplicate, t, () => triangleMiddle(mesh, t));
    for (let end = h + 3; h < end; h++) {
      const other = ring[h];
      if (other > h && ring[other] === h) {
        const beyond = mesh.partOf[(other / 3) | 0];
        if (beyond !== mesh.partOf[t]) {
          openAlone[mesh.partOf[t]]++;
          openAlone[beyond]++;
        }
        if (corners[other] !== corners[h]) continue;
        const edge = h;
        note(flipped, t, () => edgeMiddle(mesh, edge));
      } else if (other === h) {
        const edge = h;
        note(open, t, () => edgeMiddle(mesh, edge));
        openAlone[mesh.partOf[t]]++;
      } else {
        if (other < h && ring[other] === h) continue;
        if (isOnlyOfPart(mesh, h)) openAlone[mesh.partOf[t]]++;
        if (seen[h] === 1) continue;
        // The first of its ring that is met is its lowest.
        for (let at = ring[h]; at !== h; at = ring[at]) seen[at] = 1;
        const edge = h;
        note(nonManifold, t, () => edgeMiddle(mesh, edge));
      }
      unsound[shells.shellOf[t]] = 1;
    }
  }
  const closedShells = unsound.reduce((sum, value) => sum + (value === 0 ? 1 : 0), 0);
  const insideOut = none();
  if (closedShells > 0) noteInsideOut(mesh, shells, unsound, insideOut);
  const borders = openBorders(mesh, openEdges(ring, open.count), parts);
  return {
    open,
    nonManifold,
    flipped,
    degenerate,
    duplicate,
    shells,
    insideOut,
    closedShells,
    borders: borders.longest,
    borderCount: borders.count,
    bordersPerPart: borders.perPart,
    openAlone,
  };
}

/** Half-edges that are alone, ascending. */
function openEdges(ring: Uint32Array, count: number): Uint32Array {
  const found = new Uint32Array(count);
  if (count === 0) return found;
  for (let h = 0, k = 0; h < ring.length; h++) if (ring[h] === h) found[k++] = h;
  return found;
}

/** Whether no other half-edge of the ring belongs to a triangle of the same part. */
function isOnlyOfPart({ ring, partOf }: SurfaceMesh, h: number): boolean {
  const part = partOf[(h / 3) | 0];
  for (let other = ring[h]; other !== h; other = ring[other]) if (partOf[(other / 3) | 0] === part) return false;
  return true;
}

/** Whether the triangle is no higher than the rounding of its coordinates to float32: its area and normal mean nothing. */
function isFlat({ vertices, corners }: SurfaceMesh, t: number): boolean {
  const a = 3 * corners[3 * t];
  const b = 3 * corners[3 * t + 1];
  const c = 3 * corners[3 * t + 2];
  if (a === b || b === c || c === a) return true;
  const ux = vertices[b] - vertices[a];
  const uy = vertices[b + 1] - vertices[a + 1];
  const uz = vertices[b + 2] - vertices[a + 2];
  const vx = vertices[c] - vertices[a];
  const vy = vertices[c + 1] - vertices[a + 1];
  const vz = vertices[c + 2] - vertices[a + 2];
  const nx = uy * vz - uz * vy;
  const ny = uz * vx - ux * vz;
  const nz = ux * vy - uy * vx;
  const wx = vx - ux;
  const wy = vy - uy;
  const wz = vz - uz;
  const longest = Math.max(ux * ux + uy * uy + uz * uz, vx * vx + vy * vy + vz * vz, wx * wx + wy * wy + wz * wz);
  const largest = Math.max(Math.abs(vertices[a]), Math.abs(vertices[a + 1]), Math.abs(vertices[a + 2]));
  const rounding = largest * 2 ** -24;
  return nx * nx + ny * ny + nz * nz <= rounding * rounding * longest;
}

function noteInsideOut(mesh: SurfaceMesh, shells: Shells, unsound: Uint8Array, into: Occurrence): void {
  const { groups } = measures(mesh, shells.shellOf, shells.count);
  const seen = new Uint8Array(shells.count);
  for (let t = 0; t < shells.shellOf.length; t++) {
    const shell = shells.shellOf[t];
    if (shell === NO_EDGE || seen[shell] === 1) continue;
    seen[shell] = 1;
    if (unsound[shell] === 1 || groups[shell].volume >= 0) continue;
    into.count++;
    into.perPart[mesh.partOf[t]]++;
    if (into.places.length < MOST_PLACES) into.places.push(groups[shell].areaCentroid);
  }
}

const vertexAt = ({ vertices }: SurfaceMesh, v: number): Vector3 => [vertices[3 * v], vertices[3 * v + 1], vertices[3 * v + 2]];

function edgeMiddle(mesh: SurfaceMesh, h: number): Vector3 {
  const a = vertexAt(mesh, mesh.corners[h]);
  const b = vertexAt(mesh, mesh.corners[nextInTriangle(h)]);
  return [(a[0] + b[0]) / 2, (a[1] + b[1]) / 2, (a[2] + b[2]) / 2];
}

function triangleMiddle(mesh: SurfaceMesh, t: number): Vector3 {
  const [a, b, c] = [0, 1, 2].map((k) => vertexAt(mesh, mesh.corners[3 * t + k]));
  return [(a[0] + b[0] + c[0]) / 3, (a[1] + b[1] + c[1]) / 3, (a[2] + b[2] + c[2]) / 3];
}
