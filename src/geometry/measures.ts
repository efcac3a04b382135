import { SteadySums } from "./steady-sum.js";
import type { Box, Vector3 } from "./vector.js";

/** Of a part, a shell or a body. Unit and axes of the vertices. */
export interface Measures {
  triangles: number;
  area: number;
  /** Zeros without triangles. */
  bounds: Box;
  /** Sum of the area vectors (outward, length = area): zero for a closed surface. */
  areaVector: Vector3;
  /** Centroid of the surface; the middle of the bounds where there is no area. */
  areaCentroid: Vector3;
  /** Enclosed volume by the divergence theorem: negative where the surface is inside out, meaningless where it is open. */
  volume: number;
  /** Centroid of the enclosed volume; null where the volume is zero to rounding. */
  volumeCentroid: Vector3 | null;
}

/**
 * Measures of each group of triangles and of all triangles together. `groupOf`: 1 per triangle; triangles of a group that is not
 * below `groups` count for the whole only.
 *
 * Area by half the cross product, volume and its centroid by signed tetrahedra from the middle of the bounding box, which keeps
 * the terms small. None of the results depends on the order of the triangles, to the last bit.
 */
export function measures(
  mesh: { vertices: Float32Array; corners: Uint32Array },
  groupOf: Uint16Array | Uint32Array,
  groups: number,
): { whole: Measures; groups: Measures[] } {
  const { vertices, corners } = mesh;
  const triangles = corners.length / 3;
  const { boxes, largest } = looked(vertices, corners, groupOf, groups);
  const whole = joined(boxes);
  const middle = middleOf(whole);
  const [x0, y0, z0] = middle;
  const reach = Math.max(whole.max[0] - whole.min[0], whole.max[1] - whole.min[1], whole.max[2] - whole.min[2]);
  // Quantities of one dimension share the bound of their terms. Corners are at most √3/2 · reach from the middle.
  const vectors = new SteadySums(4 * (groups + 1), largest, 4 * triangles);
  const moments = new SteadySums(4 * (groups + 1), largest * reach, 4 * triangles);
  const volumes = new SteadySums(3 * (groups + 1), largest * reach ** 2, 3 * triangles);
  const counts = new Uint32Array(groups + 1);
  for (let t = 0; t < triangles; t++) {
    const a = 3 * corners[3 * t];
    const b = 3 * corners[3 * t + 1];
    const c = 3 * corners[3 * t + 2];
    const ax = vertices[a] - x0;
    const ay = vertices[a + 1] - y0;
    const az = vertices[a + 2] - z0;
    const bx = vertices[b] - x0;
    const by = vertices[b + 1] - y0;
    const bz = vertices[b + 2] - z0;
    const cx = vertices[c] - x0;
    const cy = vertices[c + 1] - y0;
    const cz = vertices[c + 2] - z0;
    const ux = vertices[b] - vertices[a];
    const uy = vertices[b + 1] - vertices[a + 1];
    const uz = vertices[b + 2] - vertices[a + 2];
    const vx = vertices[c] - vertices[a];
    const vy = vertices[c + 1] - vertices[a + 1];
    const vz = vertices[c + 2] - vertices[a + 2];
    const nx = uy * vz - uz * vy;
    const ny = uz * vx - ux * vz;
    const nz = ux * vy - uy * vx;
    const area = Math.sqrt(nx * nx + ny * ny + nz * nz);
    const volume = ax * nx + ay * ny + az * nz;
    const sx = ax + bx + cx;
    const sy = ay + by + cy;
    const sz = az + bz + cz;
    const group = Math.min(groupOf[t], groups);
    const g = 4 * group;
    counts[group]++;
    vectors.add(g, area / 2);
    vectors.add(g + 1, nx / 2);
    vectors.add(g + 2, ny / 2);
    vectors.add(g + 3, nz / 2);
    moments.add(g, volume / 6);
    moments.add(g + 1, (area * sx) / 6);
    moments.add(g + 2, (area * sy) / 6);
    moments.add(g + 3, (area * sz) / 6);
    // The tetrahedron's fourth corner is the origin of these coordinates.
    volumes.add(3 * group, (volume * sx) / 24);
    volumes.add(3 * group + 1, (volume * sy) / 24);
    volumes.add(3 * group + 2, (volume * sz) / 24);
  }

  const collect = (members: number[], count: number, bounds: Box): Measures => {
    const of = (sums: SteadySums, stride: number, k: number): number => sums.total(members.map((group) => stride * group + k));
    const area = of(vectors, 4, 0);
    const volume = of(moments, 4, 0);
    const at = (moment: (k: number) => number, weight: number): Vector3 => [
      x0 + moment(0) / weight,
      y0 + moment(1) / weight,
      z0 + moment(2) / weight,
    ];
    return {
      triangles: count,
      area,
      bounds,
      areaVector: [of(vectors, 4, 1), of(vectors, 4, 2), of(vectors, 4, 3)],
      areaCentroid: area > 0 ? at((k) => of(moments, 4, k + 1), area) : middleOf(bounds),
      volume,
      volumeCentroid: Math.abs(volume) > 1e-12 * area * reach ? at((k) => of(volumes, 3, k), volume) : null,
    };
  };
  return {
    whole: collect(
      Array.from({ length: groups + 1 }, (_, group) => group),
      triangles,
      whole,
    ),
    groups: boxes.slice(0, groups).map((bounds, group) => collect([group], counts[group], boundsOrZero(bounds))),
  };
}

const middleOf = ({ min, max }: Box): Vector3 => [(min[0] + max[0]) / 2, (min[1] + max[1]) / 2, (min[2] + max[2]) / 2];

const boundsOrZero = (box: Box): Box => (box.min[0] <= box.max[0] ? box : { min: [0, 0, 0], max: [0, 0, 0] });

function joined(boxes: Box[]): Box {
  const all: Box = { min: [Infinity, Infinity, Infinity], max: [-Infinity, -Infinity, -Infinity] };
  for (const { min, max } of boxes)
    for (let k = 0; k < 3; k++) {
      all.min[k] = Math.min(all.min[k], min[k]);
      all.max[k] = Math.max(all.max[k], max[k]);
    }
  return boundsOrZero(all);
}

/**
 * Bounds of each group, and last those of the triangles of no group, infinite and reversed where there are none; and the largest area
 * of a triangle, twice for good measure.
 */
function looked(
  vertices: Float32Array,
  corners: Uint32Array,
  groupOf: Uint16Array | Uint32Array,
  groups: number,
): { boxes: Box[]; largest: number } {
  const low = new Float64Array(3 * (groups + 1)).fill(Infinity);
  const high = new Float64Array(3 * (groups + 1)).fill(-Infinity);
  let square = 0;
  for (let h = 0, t = 0; h < corners.length; h += 3, t++) {
    const at = 3 * Math.min(groupOf[t], groups);
    const a = 3 * corners[h];
    const b = 3 * corners[h + 1];
    const c = 3 * corners[h + 2];
    for (let axis = 0; axis < 3; axis++) {
      const p = vertices[a + axis];
      const q = vertices[b + axis];
      const r = vertices[c + axis];
      const least = p < q ? Math.min(p, r) : Math.min(q, r);
      const most = p > q ? Math.max(p, r) : Math.max(q, r);
      if (least < low[at + axis]) low[at + axis] = least;
      if (most > high[at + axis]) high[at + axis] = most;
    }
    const ux = vertices[b] - vertices[a];
    const uy = vertices[b + 1] - vertices[a + 1];
    const uz = vertices[b + 2] - vertices[a + 2];
    const vx = vertices[c] - vertices[a];
    const vy = vertices[c + 1] - vertices[a + 1];
    const vz = vertices[c + 2] - vertices[a + 2];
    const nx = uy * vz - uz * vy;
    const ny = uz * vx - ux * vz;
    const nz = ux * vy - uy * vx;
    const size = nx * nx + ny * ny + nz * nz;
    if (size > square) square = size;
  }
  const boxes = Array.from(
    { length: groups + 1 },
    (_, group): Box => ({
      min: [low[3 * group], low[3 * group + 1], low[3 * group + 2]],
      max: [high[3 * group], high[3 * group + 1], high[3 * group + 2]],
    }),
  );
  return { boxes, largest: Math.sqrt(square) };
}
