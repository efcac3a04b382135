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

/** A connected set of open edges: the border of a hole or of a sheet. Mesh unit and axes. */
export interface OpenBorder {
  edges: number;
  centre: Vector3;
  /** Diagonal of its bounding box. */
  span: number;
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
  /** Largest first, at most ten. */
  borders: OpenBorder[];
  borderCount: number;
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
  const unsound = new Uint8Array(shells.count);
  const openEdges: number[] = [];
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
    if (repeats(mesh, h)) note(duplicate, t, () => triangleMiddle(mesh, t));
    for (let end = h + 3; h < end; h++) {
      const other = ring[h];
      if (other > h && ring[other] === h) {
        if (corners[other] !== corners[h]) continue;
        const edge = h;
        note(flipped, t, () => edgeMiddle(mesh, edge));
      } else if (other === h) {
        const edge = h;
        note(open, t, () => edgeMiddle(mesh, edge));
        openEdges.push(h);
      } else {
        if (other < h && ring[other] === h) continue;
        if (!isLowest(ring, h)) continue;
        const edge = h;
        note(nonManifold, t, () => edgeMiddle(mesh, edge));
      }
      unsound[shells.shellOf[t]] = 1;
    }
  }
  const closedShells = unsound.reduce((sum, value) => sum + (value === 0 ? 1 : 0), 0);
  const insideOut = none();
  if (closedShells > 0) noteInsideOut(mesh, shells, unsound, insideOut);
  const borders = bordersOf(mesh, openEdges);
  return {
    open,
    nonManifold,
    flipped,
    degenerate,
    duplicate,
    shells,
    insideOut,
    closedShells,
    borders: borders.slice(0, MOST_PLACES),
    borderCount: borders.length,
  };
}

/** Whether no half-edge of the ring is below `h`. */
function isLowest(ring: Uint32Array, h: number): boolean {
  for (let other = ring[h]; other !== h; other = ring[other]) if (other < h) return false;
  return true;
}

/** Whether an earlier triangle has the same vertices: it shares every edge, so one edge tells. */
function repeats({ corners, ring }: SurfaceMesh, h: number): boolean {
  const third = corners[h + 2];
  for (let other = ring[h]; other !== h; other = ring[other])
    if (other < h && corners[nextInTriangle(nextInTriangle(other))] === third) return true;
  return false;
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

/** Open edges that hang together by vertices, the widest first. */
function bordersOf({ vertices, corners }: SurfaceMesh, openEdges: number[]): OpenBorder[] {
  const parent = new Map<number, number>();
  const root = (vertex: number): number => {
    let at = vertex;
    for (let above = parent.get(at) as number; above !== at; above = parent.get(at) as number) {
      parent.set(at, parent.get(above) as number);
      at = above;
    }
    return at;
  };
  for (const h of openEdges) {
    const a = corners[h];
    const b = corners[nextInTriangle(h)];
    if (!parent.has(a)) parent.set(a, a);
    if (!parent.has(b)) parent.set(b, b);
    parent.set(root(a), root(b));
  }
  const found = new Map<number, { edges: number; low: Vector3; high: Vector3 }>();
  for (const h of openEdges) {
    const key = root(corners[h]);
    let border = found.get(key);
    if (border === undefined) {
      border = { edges: 0, low: [Infinity, Infinity, Infinity], high: [-Infinity, -Infinity, -Infinity] };
      found.set(key, border);
    }
    border.edges++;
    for (const vertex of [corners[h], corners[nextInTriangle(h)]])
      for (let axis = 0; axis < 3; axis++) {
        const value = vertices[3 * vertex + axis];
        border.low[axis] = Math.min(border.low[axis], value);
        border.high[axis] = Math.max(border.high[axis], value);
      }
  }
  return [...found.values()]
    .map(({ edges, low, high }) => ({
      edges,
      centre: low.map((value, axis) => (value + high[axis]) / 2) as Vector3,
      span: Math.hypot(high[0] - low[0], high[1] - low[1], high[2] - low[2]),
    }))
    .sort((a, b) => b.span - a.span || b.edges - a.edges);
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
