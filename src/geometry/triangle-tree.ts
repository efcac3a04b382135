/** A tree of boxes about the triangles of a surface, for pairs that meet (`eachMeetingPair`) and for rays (`RayCaster`). */
export interface TriangleTree {
  /** Triangles along a space-filling curve; leaf k holds `order[LEAF · k, LEAF · (k + 1))`. */
  order: Uint32Array;
  /** 6 per triangle, in that order: least x y z, greatest x y z. */
  boxes: Float32Array;
  /** Power of two. Node 1 is the root, node k has the children 2k and 2k + 1, leaf k is node `leaves` + k. */
  leaves: number;
  /** 6 per node, as `boxes`; empty nodes have their least above their greatest. */
  nodes: Float32Array;
  /** Least and greatest corner of the whole, and its greatest extent. Mesh unit. */
  low: number[];
  high: number[];
  extent: number;
}

/** Triangles of a leaf. */
export const LEAF = 4;
/** A run of triangles with one code is put in order again by a finer grid when it is longer than this. */
const LONG_RUN = 16;
const MOST_PAIRS = { each: 200, more: 5e6 };

/**
 * Builds the tree: triangles are sorted by the Morton code of their box's middle (Lauterbach and others, 2009), 10 bits an axis,
 * again in the bounds of its own for each cell that holds many; then boxes are joined from the leaves up. Time and memory grow with the
 * number of triangles.
 *
 * `vertices`: 3 per vertex; `corners`: 3 per triangle.
 */
export function triangleTree({ vertices, corners }: { vertices: Float32Array; corners: Uint32Array }): TriangleTree {
  const triangles = corners.length / 3;
  const unsorted = boxesOf(vertices, corners);
  const order = new Uint32Array(triangles);
  for (let t = 0; t < triangles; t++) order[t] = t;
  sortAlongCurve(unsorted, order);
  const boxes = new Float32Array(6 * triangles);
  for (let k = 0; k < triangles; k++) {
    const from = 6 * order[k];
    for (let i = 0; i < 6; i++) boxes[6 * k + i] = unsorted[from + i];
  }
  let leaves = 1;
  while (LEAF * leaves < triangles) leaves *= 2;
  const nodes = new Float32Array(12 * leaves);
  for (let at = 0; at < nodes.length; at += 6) {
    nodes[at] = nodes[at + 1] = nodes[at + 2] = Infinity;
    nodes[at + 3] = nodes[at + 4] = nodes[at + 5] = -Infinity;
  }
  for (let k = 0; k < triangles; k++) widen(nodes, 6 * (leaves + ((k / LEAF) | 0)), boxes, 6 * k);
  for (let node = 2 * leaves - 1; node > 1; node--) widen(nodes, 6 * (node >> 1), nodes, 6 * node);
  const low = [nodes[6], nodes[7], nodes[8]];
  const high = [nodes[9], nodes[10], nodes[11]];
  const extent = triangles === 0 ? 0 : Math.max(...high.map((value, axis) => value - low[axis]));
  return { order, boxes, leaves, nodes, low, high, extent };
}

/** Makes the box at `to` reach about the box at `at`. */
function widen(nodes: Float32Array, to: number, boxes: Float32Array, at: number): void {
  if (boxes[at] < nodes[to]) nodes[to] = boxes[at];
  if (boxes[at + 1] < nodes[to + 1]) nodes[to + 1] = boxes[at + 1];
  if (boxes[at + 2] < nodes[to + 2]) nodes[to + 2] = boxes[at + 2];
  if (boxes[at + 3] > nodes[to + 3]) nodes[to + 3] = boxes[at + 3];
  if (boxes[at + 4] > nodes[to + 4]) nodes[to + 4] = boxes[at + 4];
  if (boxes[at + 5] > nodes[to + 5]) nodes[to + 5] = boxes[at + 5];
}

/** 6 per triangle: least x y z, greatest x y z. */
function boxesOf(vertices: Float32Array, corners: Uint32Array): Float32Array {
  const boxes = new Float32Array(2 * corners.length);
  for (let h = 0, to = 0; h < corners.length; h += 3, to += 6) {
    const a = 3 * corners[h];
    const b = 3 * corners[h + 1];
    const c = 3 * corners[h + 2];
    for (let axis = 0; axis < 3; axis++) {
      const p = vertices[a + axis];
      const q = vertices[b + axis];
      const r = vertices[c + axis];
      boxes[to + axis] = Math.min(p, q, r);
      boxes[to + 3 + axis] = Math.max(p, q, r);
    }
  }
  return boxes;
}

/** Ten bits spread to every third place. */
const spread = Uint32Array.from({ length: 1024 }, (_, value) => {
  let bits = 0;
  for (let k = 0; k < 10; k++) bits |= ((value >> k) & 1) << (3 * k);
  return bits;
});

/** Sorts the triangles named in `order` by the Morton code of their boxes' middles; equal ones keep their order. */
function sortAlongCurve(boxes: Float32Array, order: Uint32Array): void {
  const low = [Infinity, Infinity, Infinity];
  const high = [-Infinity, -Infinity, -Infinity];
  const count = order.length;
  for (let k = 0; k < count; k++)
    for (let axis = 0, at = 6 * order[k]; axis < 3; axis++, at++) {
      const twice = boxes[at] + boxes[at + 3];
      if (twice < low[axis]) low[axis] = twice;
      if (twice > high[axis]) high[axis] = twice;
    }
  const scale = low.map((value, axis) => (high[axis] > value ? 1023.999 / (high[axis] - value) : 0));
  if (scale.every((value) => value === 0)) return;
  const [sx, sy, sz] = scale;
  const [lx, ly, lz] = low;
  let codes = new Uint32Array(count);
  for (let k = 0; k < count; k++) {
    const at = 6 * order[k];
    const x = (sx * (boxes[at] + boxes[at + 3] - lx)) | 0;
    const y = (sy * (boxes[at + 1] + boxes[at + 4] - ly)) | 0;
    const z = (sz * (boxes[at + 2] + boxes[at + 5] - lz)) | 0;
    codes[k] = spread[x] | (spread[y] << 1) | (spread[z] << 2);
  }
  // Radix sort, three passes of ten bits.
  let from: Uint32Array = order;
  let to: Uint32Array = new Uint32Array(count);
  let nextCodes = new Uint32Array(count);
  const start = new Uint32Array(1024);
  for (let shift = 0; shift < 30; shift += 10) {
    start.fill(0);
    for (let k = 0; k < count; k++) start[(codes[k] >>> shift) & 1023]++;
    let sum = 0;
    for (let digit = 0; digit < 1024; digit++) {
      const size = start[digit];
      start[digit] = sum;
      sum += size;
    }
    for (let k = 0; k < count; k++) {
      const place = start[(codes[k] >>> shift) & 1023]++;
      to[place] = from[k];
      nextCodes[place] = codes[k];
    }
    [from, to] = [to, from === order ? new Uint32Array(count) : from];
    [codes, nextCodes] = [nextCodes, codes];
  }
  order.set(from);
  for (let first = 0, k = 1; k <= count; k++) {
    if (k < count && codes[k] === codes[first]) continue;
    if (k - first > LONG_RUN) sortAlongCurve(boxes, order.subarray(first, k));
    first = k;
  }
}

/**
 * Calls `visit` once for each pair of triangles whose boxes are nowhere farther apart than `margin`, in the order of the tree: parts of
 * the tree whose boxes are farther apart are left out as a whole. Ends early, and returns false, after 200 pairs a triangle and 5
 * million more: surfaces have about nine, only triangles thrown together have so many.
 */
export function eachMeetingPair(tree: TriangleTree, margin: number, visit: (s: number, t: number) => void): boolean {
  const { order, boxes, leaves, nodes } = tree;
  const triangles = order.length;
  let left = MOST_PAIRS.each * triangles + MOST_PAIRS.more;
  const within = (leaf: number): void => {
    const end = Math.min(triangles, LEAF * (leaf + 1));
    for (let p = LEAF * leaf; p < end; p++) tryAgainst(p, p + 1, end);
  };
  const tryAgainst = (p: number, from: number, end: number): void => {
    const a = 6 * p;
    const x0 = boxes[a] - margin;
    const y0 = boxes[a + 1] - margin;
    const z0 = boxes[a + 2] - margin;
    const x1 = boxes[a + 3] + margin;
    const y1 = boxes[a + 4] + margin;
    const z1 = boxes[a + 5] + margin;
    for (let q = from, b = 6 * from; q < end; q++, b += 6)
      if (
        x0 <= boxes[b + 3] &&
        boxes[b] <= x1 &&
        y0 <= boxes[b + 4] &&
        boxes[b + 1] <= y1 &&
        z0 <= boxes[b + 5] &&
        boxes[b + 2] <= z1
      ) {
        left--;
        visit(order[p], order[q]);
      }
  };
  // Both nodes are of one level.
  const between = (m: number, n: number): void => {
    const a = 6 * m;
    const b = 6 * n;
    if (
      nodes[a] - margin > nodes[b + 3] ||
      nodes[b] - margin > nodes[a + 3] ||
      nodes[a + 1] - margin > nodes[b + 4] ||
      nodes[b + 1] - margin > nodes[a + 4] ||
      nodes[a + 2] - margin > nodes[b + 5] ||
      nodes[b + 2] - margin > nodes[a + 5]
    )
      return;
    if (left < 0) return;
    if (m < leaves) {
      between(2 * m, 2 * n);
      between(2 * m, 2 * n + 1);
      between(2 * m + 1, 2 * n);
      between(2 * m + 1, 2 * n + 1);
      return;
    }
    const from = LEAF * (n - leaves);
    const to = Math.min(triangles, from + LEAF);
    const end = Math.min(triangles, LEAF * (m - leaves + 1));
    for (let p = LEAF * (m - leaves); p < end; p++) {
      const c = 6 * p;
      if (
        boxes[c] - margin <= nodes[b + 3] &&
        nodes[b] - margin <= boxes[c + 3] &&
        boxes[c + 1] - margin <= nodes[b + 4] &&
        nodes[b + 1] - margin <= boxes[c + 4] &&
        boxes[c + 2] - margin <= nodes[b + 5] &&
        nodes[b + 2] - margin <= boxes[c + 5]
      )
        tryAgainst(p, from, to);
    }
  };
  const inside = (node: number): void => {
    if (node >= leaves) {
      within(node - leaves);
      return;
    }
    inside(2 * node);
    inside(2 * node + 1);
    between(2 * node, 2 * node + 1);
  };
  inside(1);
  return left >= 0;
}
