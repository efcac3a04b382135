import { SurfaceAbout } from "../air/winding.js";
import { NO_EDGE } from "../edges.js";
import { measures } from "../measures.js";
import type { SurfaceMesh } from "../surface-mesh.js";
import { type Box, dot, type Vector3 } from "../vector.js";

/** Which triangles to turn over, and what could not be decided. */
export interface Orientation {
  /** 1 per triangle: 1 where the order of its corners is to be turned. */
  turn: Uint8Array;
  /** Patches of triangles that cannot be made to face one way, as a strip with a half twist; their first triangles. */
  oneSided: number[];
  /** Closed patches that face inwards inside of another: walls of cavities, which is right for them; their first triangles. */
  cavities: number[];
}

/** A patch: triangles that hang together by edges of exactly two. */
interface Patch {
  first: number;
  triangles: number;
  closed: boolean;
  oneSided: boolean;
}

const MOST_SAMPLES = 16;
const INSIDE = 0.5;
const ASIDE = 1e-3;

/**
 * Makes the triangles of each patch face one way, and closed patches face outwards. A patch hangs together by edges of two triangles;
 * across an edge where more meet nothing can be told. In an open patch the sense of the larger area stands. A closed
 * patch of negative volume is turned over unless all of it lies inside of others (generalised winding number, Jacobson, Kavan and
 * Sorkine-Hornung, 2013): that is how the wall of a cavity has to face. From the outside inwards, so that a body that is inside
 * out as a whole is turned before what is in it is judged.
 */
export function orient(mesh: SurfaceMesh): Orientation {
  const { corners, partOf } = mesh;
  const triangles = partOf.length;
  const turn = new Uint8Array(triangles);
  const patchOf = new Uint32Array(triangles).fill(NO_EDGE);
  const patches = patchesOf(mesh, turn, patchOf);
  keepLargerSense(mesh, patches, patchOf, turn);
  const turned = corners.slice();
  for (let t = 0; t < triangles; t++) if (turn[t] === 1) swap(turned, t);
  const { groups } = measures({ vertices: mesh.vertices, corners: turned }, patchOf, patches.length);
  let waiting = patches.flatMap((patch, k) => (patch.closed && !patch.oneSided && groups[k].volume < 0 ? [k] : []));
  const cavities: number[] = [];
  const samples = samplesOf(mesh, patchOf, patches.length, waiting);
  while (waiting.length > 0) {
    const outer = unheld(
      waiting,
      groups.map(({ bounds }) => bounds),
    );
    // Two boxes that are the same hold each other: then all are looked at at once.
    const now = outer.length > 0 ? outer : waiting;
    const about = new SurfaceAbout({ vertices: mesh.vertices, corners: turned });
    const turning = new Set<number>();
    for (const k of now)
      if (liesInside(about, mesh, turned, samples.get(k)!)) cavities.push(patches[k].first);
      else turning.add(k);
    if (turning.size > 0)
      for (let t = 0; t < triangles; t++)
        if (turning.has(patchOf[t])) {
          turn[t] ^= 1;
          swap(turned, t);
        }
    const done = new Set(now);
    waiting = waiting.filter((k) => !done.has(k));
  }
  return { turn, oneSided: patches.filter(({ oneSided }) => oneSided).map(({ first }) => first), cavities };
}

function swap(corners: Uint32Array, t: number): void {
  const second = corners[3 * t + 1];
  corners[3 * t + 1] = corners[3 * t + 2];
  corners[3 * t + 2] = second;
}

/** Strictly. */
const holds = (outer: Box, inner: Box): boolean =>
  outer.min.every((value, axis) => value < inner.min[axis] && outer.max[axis] > inner.max[axis]);

/**
 * Those of `patches` whose box lies in no other's, ascending. Swept along x with the boxes that are open there, so that thousands
 * of small shells beside each other are not compared pair by pair.
 */
function unheld(patches: number[], boxes: Box[]): number[] {
  const order = patches.slice().sort((a, b) => boxes[a].min[0] - boxes[b].min[0] || a - b);
  const found: number[] = [];
  let open: number[] = [];
  for (const k of order) {
    open = open.filter((other) => boxes[other].max[0] > boxes[k].min[0]);
    if (!open.some((other) => holds(boxes[other], boxes[k]))) found.push(k);
    open.push(k);
  }
  return found.sort((a, b) => a - b);
}

/** The first triangles with area of each patch that is asked for, `MOST_SAMPLES` at most, in one pass over all. */
function samplesOf(
  { vertices, corners }: SurfaceMesh,
  patchOf: Uint32Array,
  patches: number,
  asked: number[],
): Map<number, number[]> {
  const samples = new Map<number, number[]>(asked.map((k) => [k, []]));
  const wanted = new Uint8Array(patches);
  for (const k of asked) wanted[k] = 1;
  for (let t = 0; t < patchOf.length && asked.length > 0; t++) {
    const patch = patchOf[t];
    if (patch === NO_EDGE || wanted[patch] === 0) continue;
    const normal = doubleArea(vertices, corners, t);
    if (Math.sqrt(dot(normal, normal)) === 0) continue;
    const list = samples.get(patch)!;
    list.push(t);
    if (list.length === MOST_SAMPLES) wanted[patch] = 0;
  }
  return samples;
}

/** Walks over each patch from its first triangle; `turn` becomes 1 where a triangle faces the other way than the first. */
function patchesOf({ corners, ring, partOf }: SurfaceMesh, turn: Uint8Array, patchOf: Uint32Array): Patch[] {
  const patches: Patch[] = [];
  const stack = new Uint32Array(partOf.length);
  for (let start = 0; start < partOf.length; start++) {
    if (patchOf[start] !== NO_EDGE || ring[3 * start] === NO_EDGE) continue;
    const number = patches.length;
    const patch: Patch = { first: start, triangles: 0, closed: true, oneSided: false };
    patches.push(patch);
    let top = 0;
    stack[top++] = start;
    patchOf[start] = number;
    while (top > 0) {
      const t = stack[--top];
      patch.triangles++;
      for (let h = 3 * t; h < 3 * t + 3; h++) {
        const other = ring[h];
        if (other === h || ring[other] !== h) {
          patch.closed = false;
          continue;
        }
        const next = (other / 3) | 0;
        // Neighbours run along their edge in opposite directions when they face the same way.
        const wanted = corners[other] === corners[h] ? turn[t] ^ 1 : turn[t];
        if (patchOf[next] === NO_EDGE) {
          patchOf[next] = number;
          turn[next] = wanted;
          stack[top++] = next;
        } else if (turn[next] !== wanted) patch.oneSided = true;
      }
    }
  }
  return patches;
}

/** Turns round the choice of each patch where the triangles to be turned have the larger area; one-sided patches stay as they are. */
function keepLargerSense(mesh: SurfaceMesh, patches: Patch[], patchOf: Uint32Array, turn: Uint8Array): void {
  const { vertices, corners } = mesh;
  const kept = new Float64Array(patches.length);
  const turning = new Float64Array(patches.length);
  for (let t = 0; t < turn.length; t++) {
    if (patchOf[t] === NO_EDGE) continue;
    const area = Math.hypot(...doubleArea(vertices, corners, t));
    if (turn[t] === 1) turning[patchOf[t]] += area;
    else kept[patchOf[t]] += area;
  }
  for (let t = 0; t < turn.length; t++) {
    const patch = patchOf[t];
    if (patch === NO_EDGE || patches[patch].oneSided) turn[t] = 0;
    else if (turning[patch] > kept[patch]) turn[t] ^= 1;
  }
}

function doubleArea(vertices: Float32Array, corners: Uint32Array, t: number): Vector3 {
  const [a, b, c] = [3 * corners[3 * t], 3 * corners[3 * t + 1], 3 * corners[3 * t + 2]];
  const u: Vector3 = [0, 1, 2].map((k) => vertices[b + k] - vertices[a + k]) as Vector3;
  const v: Vector3 = [0, 1, 2].map((k) => vertices[c + k] - vertices[a + k]) as Vector3;
  return [u[1] * v[2] - u[2] * v[1], u[2] * v[0] - u[0] * v[2], u[0] * v[1] - u[1] * v[0]];
}

/**
 * Whether a closed patch that faces inwards lies inside of others with all the places that are looked at: just outside of the middle of
 * its triangles, where it does not wind itself.
 */
function liesInside(about: SurfaceAbout, { vertices }: SurfaceMesh, corners: Uint32Array, samples: number[]): boolean {
  for (const t of samples) {
    const middle = [0, 1, 2].map(
      (k) => (vertices[3 * corners[3 * t] + k] + vertices[3 * corners[3 * t + 1] + k] + vertices[3 * corners[3 * t + 2] + k]) / 3,
    ) as Vector3;
    const normal = doubleArea(vertices, corners, t);
    const size = Math.sqrt(dot(normal, normal));
    // It faces inwards, so outside is against the normal: a thousandth of the triangle's own size away.
    const step = (ASIDE * Math.sqrt(size)) / size;
    if (!(about.winding(middle.map((value, k) => value - step * normal[k]) as Vector3) > INSIDE)) return false;
  }
  return samples.length > 0;
}
