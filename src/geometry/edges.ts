/** In place of the next half-edge for the edges of a triangle that has a vertex twice: they are no edges. */
export const NO_EDGE = 0xffffffff;

/**
 * All edges of a surface as rings of half-edges. Half-edge 3·t + k runs from corner k of triangle t to its next corner. Half-edges
 * with the same two ends, in either direction, form a ring: entry h names the next one, in ascending order, the last names the
 * first. So an open edge names itself, an edge of two triangles is a ring of two, an edge where more meet a longer one. Each
 * edge is met exactly once at its lowest half-edge, the one whose predecessor is not below it.
 *
 * `corners`: 3 per triangle, vertex numbers below `vertices`. Returns one entry per half-edge; `NO_EDGE` for triangles with a
 * vertex twice. Half-edges are sorted into buckets by their lower vertex (counting sort), then linked by their upper one.
 */
export function edgeRings(corners: Uint32Array, vertices: number): Uint32Array {
  const count = corners.length;
  const start = new Uint32Array(vertices + 1);
  for (let h = 0; h < count; h += 3) {
    const a = corners[h];
    const b = corners[h + 1];
    const c = corners[h + 2];
    if (a === b || b === c || c === a) continue;
    start[Math.min(a, b)]++;
    start[Math.min(b, c)]++;
    start[Math.min(c, a)]++;
  }
  let sum = 0;
  for (let v = 0; v <= vertices; v++) {
    sum += start[v];
    start[v] = sum;
  }
  // Filled from the back, so that a bucket ends up in ascending order and `start` at its beginning.
  const bucket = new Uint32Array(sum);
  for (let h = count - 3; h >= 0; h -= 3) {
    const a = corners[h];
    const b = corners[h + 1];
    const c = corners[h + 2];
    if (a === b || b === c || c === a) continue;
    bucket[--start[Math.min(c, a)]] = h + 2;
    bucket[--start[Math.min(b, c)]] = h + 1;
    bucket[--start[Math.min(a, b)]] = h;
  }
  const ring = new Uint32Array(count).fill(NO_EDGE);
  let upper = new Uint32Array(64);
  let linked = new Uint8Array(64);
  for (let v = 0; v < vertices; v++) {
    const from = start[v];
    const to = start[v + 1];
    const size = to - from;
    if (size > SMALL) {
      linkLarge(bucket.subarray(from, to), corners, v, ring);
      continue;
    }
    if (size > upper.length) {
      upper = new Uint32Array(SMALL);
      linked = new Uint8Array(SMALL);
    }
    for (let k = 0; k < size; k++) {
      upper[k] = otherEnd(corners, bucket[from + k], v);
      linked[k] = 0;
    }
    for (let k = 0; k < size; k++) {
      if (linked[k] === 1) continue;
      const key = upper[k];
      const first = bucket[from + k];
      let last = first;
      for (let j = k + 1; j < size; j++) {
        if (upper[j] !== key) continue;
        linked[j] = 1;
        const h = bucket[from + j];
        ring[last] = h;
        last = h;
      }
      ring[last] = first;
    }
  }
  return ring;
}

/** Buckets up to this size are searched pair by pair; the hub of a large fan is sorted. */
const SMALL = 64;

function otherEnd(corners: Uint32Array, h: number, vertex: number): number {
  const from = corners[h];
  return from === vertex ? corners[nextInTriangle(h)] : from;
}

function linkLarge(bucket: Uint32Array, corners: Uint32Array, vertex: number, ring: Uint32Array): void {
  const upper = (h: number): number => otherEnd(corners, h, vertex);
  const order = bucket.slice().sort((g, h) => upper(g) - upper(h) || g - h);
  let first = 0;
  for (let k = 1; k <= order.length; k++) {
    if (k < order.length && upper(order[k]) === upper(order[first])) {
      ring[order[k - 1]] = order[k];
      continue;
    }
    ring[order[k - 1]] = order[first];
    first = k;
  }
}

/** The half-edge that follows `h` around its triangle. */
export const nextInTriangle = (h: number): number => (h % 3 === 2 ? h - 2 : h + 1);
