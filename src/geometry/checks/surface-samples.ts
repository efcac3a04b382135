import type { SurfaceMesh } from "../surface-mesh.js";

/** Points on the triangles of a body that stand for its area, part by part. Mesh unit and axes. */
export interface SurfaceSamples {
  /** 1 per sample: its triangle */
  triangles: Uint32Array;
  /** 3 per sample */
  points: Float64Array;
  /** 1 per sample: the area it stands for; the samples of a part add up to the part's area */
  areas: Float64Array;
  /** 1 per part: area of its triangles */
  areaOfPart: Float64Array;
  /** Triangles that have samples, and how many triangles there are. */
  sampledTriangles: number;
  triangleCount: number;
}

/** Triangles that are sampled at most, shared out among the parts: small ones in full, the rest in equal numbers. */
export const MOST_SAMPLED = 200_000;
/** Points that large triangles are given at most, per part, beyond one each. */
const POINTS_OF_PART = 2000;
/** Rows of points in a triangle at most. */
const MOST_ROWS = 40;

/**
 * Samples a surface: the middle of each triangle; of triangles larger than a square of `spacing` the middles of the triangles that it
 * falls into when its sides are cut into equal parts. Parts with too many triangles for their share are sampled by a hash of the
 * corners' coordinates, so that the choice depends neither on chance nor on the order of the triangles. Triangles without area have
 * none.
 *
 * @param spacing 1 per part: distance of points that is close enough
 */
export function surfaceSamples(mesh: SurfaceMesh, parts: number, spacing: ArrayLike<number>, most = MOST_SAMPLED): SurfaceSamples {
  const { vertices, corners, partOf } = mesh;
  const triangleCount = partOf.length;
  const area = (t: number): number => triangleArea(vertices, corners, t);
  const counts = new Uint32Array(parts);
  const areaOfPart = new Float64Array(parts);
  for (let t = 0; t < triangleCount; t++) {
    counts[partOf[t]]++;
    areaOfPart[partOf[t]] += area(t);
  }
  // Bound of the hash below which a triangle is taken.
  const bound = shares(counts, most).map((share, part) => (share >= counts[part] ? 2 ** 32 : (share / counts[part]) * 2 ** 32));
  const areaOfPoint = Array.from(areaOfPart, (sum, part) => Math.max(spacing[part] ** 2, sum / POINTS_OF_PART));
  const bits = new Uint32Array(vertices.buffer, vertices.byteOffset, vertices.length);
  const taken = (t: number): boolean => bound[partOf[t]] >= 2 ** 32 || triangleHash(bits, corners, t) < bound[partOf[t]];
  const rowsOf = (t: number): number => Math.max(1, Math.min(MOST_ROWS, Math.ceil(Math.sqrt(area(t) / areaOfPoint[partOf[t]]))));
  let count = 0;
  let sampledTriangles = 0;
  const areaTaken = new Float64Array(parts);
  for (let t = 0; t < triangleCount; t++) {
    if (!taken(t)) continue;
    const own = area(t);
    if (own === 0) continue;
    areaTaken[partOf[t]] += own;
    sampledTriangles++;
    count += rowsOf(t) ** 2;
  }
  const triangles = new Uint32Array(count);
  const points = new Float64Array(3 * count);
  const areas = new Float64Array(count);
  for (let t = 0, k = 0; t < triangleCount; t++) {
    if (!taken(t)) continue;
    const own = area(t);
    if (own === 0) continue;
    const rows = rowsOf(t);
    const each = (own * (areaOfPart[partOf[t]] / areaTaken[partOf[t]])) / rows ** 2;
    const a = 3 * corners[3 * t];
    const b = 3 * corners[3 * t + 1];
    const c = 3 * corners[3 * t + 2];
    // Small triangle (i, j) has its middle a third of a step inside; those upside down two thirds.
    for (let i = 0; i < rows; i++)
      for (let j = 0; i + j < rows; j++)
        for (let down = 0; down < (i + j + 1 < rows ? 2 : 1); down++, k++) {
          const u = (i + (1 + down) / 3) / rows;
          const v = (j + (1 + down) / 3) / rows;
          triangles[k] = t;
          areas[k] = each;
          for (let axis = 0; axis < 3; axis++)
            points[3 * k + axis] =
              vertices[a + axis] + u * (vertices[b + axis] - vertices[a + axis]) + v * (vertices[c + axis] - vertices[a + axis]);
        }
  }
  return { triangles, points, areas, areaOfPart, sampledTriangles, triangleCount };
}

/** Numbers that add up to `most` at most: each part gets what it has, or the same as all others that have more. */
function shares(counts: Uint32Array, most: number): number[] {
  const order = Array.from(counts, (_, part) => part).sort((a, b) => counts[a] - counts[b]);
  const share = new Array<number>(counts.length).fill(0);
  let left = most;
  order.forEach((part, k) => {
    share[part] = Math.min(counts[part], left / (order.length - k));
    left -= share[part];
  });
  return share;
}

function triangleArea(vertices: Float32Array, corners: Uint32Array, t: number): number {
  const a = 3 * corners[3 * t];
  const b = 3 * corners[3 * t + 1];
  const c = 3 * corners[3 * t + 2];
  const ux = vertices[b] - vertices[a];
  const uy = vertices[b + 1] - vertices[a + 1];
  const uz = vertices[b + 2] - vertices[a + 2];
  const vx = vertices[c] - vertices[a];
  const vy = vertices[c + 1] - vertices[a + 1];
  const vz = vertices[c + 2] - vertices[a + 2];
  const x = uy * vz - uz * vy;
  const y = uz * vx - ux * vz;
  const z = ux * vy - uy * vx;
  return Math.sqrt(x * x + y * y + z * z) / 2;
}

/** 32 bits from the coordinates of the corners, whichever comes first (the finaliser of MurmurHash3, Appleby, 2011). */
function triangleHash(bits: Uint32Array, corners: Uint32Array, t: number): number {
  let sum = 0;
  for (let h = 3 * t; h < 3 * t + 3; h++) {
    const at = 3 * corners[h];
    sum = (sum + mixed(Math.imul(mixed(Math.imul(mixed(bits[at]), 31) + bits[at + 1]), 31) + bits[at + 2])) | 0;
  }
  return mixed(sum) >>> 0;
}

function mixed(value: number): number {
  let h = value;
  h = Math.imul(h ^ (h >>> 16), 0x85ebca6b);
  h = Math.imul(h ^ (h >>> 13), 0xc2b2ae35);
  return h ^ (h >>> 16);
}
