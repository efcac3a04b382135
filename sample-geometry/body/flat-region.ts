/** A point of the plane, metres. */
export type Point = [number, number];

export interface FlatMesh {
  /** The boundary first, in its order, then the points inside. */
  points: Point[];
  /** Indices into `points`, counter-clockwise. */
  triangles: [number, number, number][];
}

const SMOOTHING_ROUNDS = 4;

/**
 * Fills a region of the plane with near-equilateral triangles: a triangular lattice of the given spacing inside, joined to the
 * boundary by Delaunay triangulation (Bowyer 1981, Watson 1981) and evened out by moving each inner point to the mean of its
 * neighbours.
 *
 * `boundary` runs counter-clockwise, each corner once; its sides are kept as they are.
 *
 * @throws when a side of the boundary is not an edge of the result (spacing too wide for a narrow place).
 */
export function fillRegion(boundary: Point[], spacing: number): FlatMesh {
  let points = [...boundary, ...latticeInside(boundary, spacing)];
  let triangles = trianglesInside(points, boundary);
  for (let round = 0; round < SMOOTHING_ROUNDS; round++) {
    points = evenedOut(points, triangles, boundary.length);
    triangles = trianglesInside(points, boundary);
  }
  requireSides(triangles, boundary);
  return { points, triangles };
}

/** Points between two ends (neither included), no farther apart than `spacing`. */
export function pointsBetween(from: Point, to: Point, spacing: number): Point[] {
  const pieces = Math.ceil(Math.hypot(to[0] - from[0], to[1] - from[1]) / spacing);
  return Array.from({ length: pieces - 1 }, (_, k) => {
    const share = (k + 1) / pieces;
    return [from[0] + share * (to[0] - from[0]), from[1] + share * (to[1] - from[1])];
  });
}

function latticeInside(boundary: Point[], spacing: number): Point[] {
  const xs = boundary.map((p) => p[0]);
  const ys = boundary.map((p) => p[1]);
  const [left, bottom] = [Math.min(...xs), Math.min(...ys)];
  const rowHeight = (spacing * Math.sqrt(3)) / 2;
  const found: Point[] = [];
  for (let row = 1; bottom + row * rowHeight < Math.max(...ys); row++) {
    for (let column = 0; left + column * spacing < Math.max(...xs); column++) {
      const point: Point = [left + (column + (row % 2 === 0 ? 0.25 : 0.75)) * spacing, bottom + row * rowHeight];
      if (isInside(point, boundary) && distanceToSides(point, boundary) > 0.6 * spacing) found.push(point);
    }
  }
  return found;
}

function isInside(point: Point, boundary: Point[]): boolean {
  let inside = false;
  for (let k = 0; k < boundary.length; k++) {
    const a = boundary[k];
    const b = boundary[(k + 1) % boundary.length];
    if (a[1] > point[1] !== b[1] > point[1] && point[0] < a[0] + ((point[1] - a[1]) / (b[1] - a[1])) * (b[0] - a[0]))
      inside = !inside;
  }
  return inside;
}

function distanceToSides(point: Point, boundary: Point[]): number {
  let least = Number.POSITIVE_INFINITY;
  for (let k = 0; k < boundary.length; k++) {
    const a = boundary[k];
    const b = boundary[(k + 1) % boundary.length];
    const [dx, dy] = [b[0] - a[0], b[1] - a[1]];
    const along = ((point[0] - a[0]) * dx + (point[1] - a[1]) * dy) / (dx * dx + dy * dy);
    const share = Math.max(0, Math.min(1, along));
    least = Math.min(least, Math.hypot(point[0] - a[0] - share * dx, point[1] - a[1] - share * dy));
  }
  return least;
}

function trianglesInside(points: Point[], boundary: Point[]): [number, number, number][] {
  return delaunay(points).filter(([a, b, c]) => {
    const centre: Point = [(points[a][0] + points[b][0] + points[c][0]) / 3, (points[a][1] + points[b][1] + points[c][1]) / 3];
    return isInside(centre, boundary);
  });
}

/** Inserts the points one by one; each removes the triangles whose circumcircle holds it and fans out over the hole. */
function delaunay(points: Point[]): [number, number, number][] {
  const far = 1e3;
  const all: Point[] = [...points, [-far, -far], [far, -far], [0, far]];
  const n = points.length;
  let triangles: [number, number, number][] = [[n, n + 1, n + 2]];
  points.forEach((point, index) => {
    const open = new Map<string, [number, number]>();
    const kept: [number, number, number][] = [];
    for (const triangle of triangles) {
      if (!circumcircleHolds(all, triangle, point)) {
        kept.push(triangle);
        continue;
      }
      for (let side = 0; side < 3; side++) {
        const [from, to] = [triangle[side], triangle[(side + 1) % 3]];
        // An edge that both its triangles give up is inside the hole.
        if (!open.delete(`${to} ${from}`)) open.set(`${from} ${to}`, [from, to]);
      }
    }
    for (const [from, to] of open.values()) kept.push([from, to, index]);
    triangles = kept;
  });
  return triangles.filter((triangle) => triangle.every((corner) => corner < n));
}

function circumcircleHolds(points: Point[], triangle: [number, number, number], point: Point): boolean {
  const [a, b, c] = triangle.map((corner) => [points[corner][0] - point[0], points[corner][1] - point[1]]);
  const [a2, b2, c2] = [a, b, c].map((side) => side[0] * side[0] + side[1] * side[1]);
  const terms = [a2 * (b[0] * c[1] - c[0] * b[1]), -b2 * (a[0] * c[1] - c[0] * a[1]), c2 * (a[0] * b[1] - b[0] * a[1])];
  // Four corners on one circle are common here; rounding must not decide differently for neighbouring triangles.
  const doubt = 1e-12 * terms.reduce((sum, term) => sum + Math.abs(term), 0);
  return terms[0] + terms[1] + terms[2] > doubt;
}

function evenedOut(points: Point[], triangles: [number, number, number][], fixed: number): Point[] {
  const sums = points.map(() => [0, 0, 0]);
  for (const triangle of triangles) {
    for (let k = 0; k < 3; k++) {
      const other = points[triangle[(k + 1) % 3]];
      const sum = sums[triangle[k]];
      sum[0] += other[0];
      sum[1] += other[1];
      sum[2]++;
    }
  }
  return points.map((point, k) => (k < fixed || sums[k][2] === 0 ? point : [sums[k][0] / sums[k][2], sums[k][1] / sums[k][2]]));
}

function requireSides(triangles: [number, number, number][], boundary: Point[]): void {
  const edges = new Set(triangles.flatMap(([a, b, c]) => [`${a} ${b}`, `${b} ${c}`, `${c} ${a}`]));
  boundary.forEach((point, k) => {
    if (!edges.has(`${k} ${(k + 1) % boundary.length}`))
      throw new Error(`The side of the region that begins at ${point} was not kept.`);
  });
}
