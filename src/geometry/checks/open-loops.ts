import { nextInTriangle } from "../edges.js";
import type { SurfaceMesh } from "../surface-mesh.js";
import type { Vector3 } from "../vector.js";

/** A connected set of open edges: the border of a hole or of a sheet. Mesh unit and axes. */
export interface OpenBorder {
  edges: number;
  /** Sum of its edges. */
  length: number;
  /** Middle of its bounding box. */
  centre: Vector3;
  /** Diagonal of its bounding box. */
  span: number;
  /** Whether it runs back into itself everywhere; it does not where it ends at an edge of three triangles. */
  closed: boolean;
  /** Numbers of the parts whose triangles it runs along, ascending. */
  parts: number[];
}

export interface OpenBorders {
  count: number;
  /** Longest first, at most a hundred. */
  longest: OpenBorder[];
  /** 1 per part: borders that run along it. */
  perPart: Uint32Array;
}

const MOST_BORDERS = 100;

/**
 * Gathers open half-edges into borders: those that hang together by vertices. Lengths are summed along the order of the edges.
 *
 * @param openEdges half-edges without a second triangle, ascending
 * @param parts number of parts
 */
export function openBorders({ vertices, corners, partOf }: SurfaceMesh, openEdges: Uint32Array, parts: number): OpenBorders {
  if (openEdges.length === 0) return { count: 0, longest: [], perPart: new Uint32Array(parts) };
  const parent = new Int32Array(vertices.length / 3).fill(-1);
  // Open edges at the vertex; a border is closed where there is an even number at each.
  const degree = new Uint32Array(vertices.length / 3);
  const root = (vertex: number): number => {
    let at = vertex;
    while (parent[at] !== at) at = parent[at] = parent[parent[at]];
    return at;
  };
  for (const h of openEdges) {
    const a = corners[h];
    const b = corners[nextInTriangle(h)];
    if (parent[a] < 0) parent[a] = a;
    if (parent[b] < 0) parent[b] = b;
    degree[a]++;
    degree[b]++;
    const [p, q] = [root(a), root(b)];
    if (p < q) parent[q] = p;
    else parent[p] = q;
  }
  const numberOf = new Int32Array(vertices.length / 3).fill(-1);
  let count = 0;
  for (const h of openEdges) {
    const vertex = root(corners[h]);
    if (numberOf[vertex] < 0) numberOf[vertex] = count++;
  }
  const edges = new Uint32Array(count);
  const lengths = new Float64Array(count);
  const low = new Float64Array(3 * count).fill(Infinity);
  const high = new Float64Array(3 * count).fill(-Infinity);
  const open = new Uint8Array(count);
  const perPart = new Uint32Array(parts);
  // Most borders run along one part; only the further ones are put into a set.
  const firstPart = new Int32Array(count).fill(-1);
  const further = new Set<number>();
  for (const h of openEdges) {
    const ends = [corners[h], corners[nextInTriangle(h)]];
    const border = numberOf[root(ends[0])];
    edges[border]++;
    lengths[border] += Math.hypot(...[0, 1, 2].map((axis) => vertices[3 * ends[0] + axis] - vertices[3 * ends[1] + axis]));
    const part = partOf[(h / 3) | 0];
    if (firstPart[border] < 0) {
      firstPart[border] = part;
      perPart[part]++;
    } else if (firstPart[border] !== part && !further.has(65536 * border + part)) {
      further.add(65536 * border + part);
      perPart[part]++;
    }
    for (const vertex of ends) {
      if (degree[vertex] % 2 === 1) open[border] = 1;
      for (let axis = 0; axis < 3; axis++) {
        const value = vertices[3 * vertex + axis];
        if (value < low[3 * border + axis]) low[3 * border + axis] = value;
        if (value > high[3 * border + axis]) high[3 * border + axis] = value;
      }
    }
  }
  const span = (k: number): number => Math.hypot(...[0, 1, 2].map((axis) => high[3 * k + axis] - low[3 * k + axis]));
  const least = count > MOST_BORDERS ? lengths.slice().sort()[count - MOST_BORDERS] : 0;
  const long: number[] = [];
  for (let k = 0; k < count; k++) if (lengths[k] >= least) long.push(k);
  const order = long
    .sort((a, b) => lengths[b] - lengths[a] || edges[b] - edges[a] || low[3 * a] - low[3 * b] || a - b)
    .slice(0, MOST_BORDERS);
  const partsOf = new Map(order.map((k): [number, number[]] => [k, [firstPart[k]]]));
  for (const key of further) partsOf.get(Math.floor(key / 65536))?.push(key % 65536);
  const longest = order.map(
    (k): OpenBorder => ({
      edges: edges[k],
      length: lengths[k],
      centre: [0, 1, 2].map((axis) => (low[3 * k + axis] + high[3 * k + axis]) / 2) as Vector3,
      span: span(k),
      closed: open[k] === 0,
      parts: (partsOf.get(k) as number[]).sort((a, b) => a - b),
    }),
  );
  return { count, longest, perPart };
}
