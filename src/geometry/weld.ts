/** Corners joined to vertices. */
export interface Welded {
  /** 3 per vertex: x y z, the input's unit and axes; in the order in which the triangles first use them. */
  vertices: Float32Array;
  /** 3 per triangle: vertex numbers, in the order of the triangle's corners. */
  corners: Uint32Array;
}

const MINUS_ZERO = 0x80000000 | 0;
const EMPTY = -1;

/**
 * Joins corners whose three coordinates are the same numbers (0 and -0 are). Nothing is moved: corners that differ in the last
 * bit stay apart and show up as open edges. `positions`: 9 per triangle, finite.
 *
 * Open addressing with linear probing over the three words of a corner; a table entry is a vertex number.
 */
export function weld(positions: Float32Array): Welded {
  const count = positions.length / 3;
  const corners = new Uint32Array(count);
  // A closed surface has half as many vertices as triangles.
  let room = Math.max(16, Math.ceil(count / 6) + 16);
  let vertices = new Float32Array(3 * room);
  let words = new Int32Array(vertices.buffer);
  let table = emptyTable(room);
  let mask = table.length - 1;
  const source = new Int32Array(positions.buffer, positions.byteOffset, positions.length);
  let used = 0;
  for (let corner = 0, at = 0; corner < count; corner++, at += 3) {
    let x = source[at];
    let y = source[at + 1];
    let z = source[at + 2];
    if (x === MINUS_ZERO) x = 0;
    if (y === MINUS_ZERO) y = 0;
    if (z === MINUS_ZERO) z = 0;
    let slot = hash(x, y, z) & mask;
    let vertex = table[slot];
    while (vertex !== EMPTY) {
      const v = 3 * vertex;
      if (words[v] === x && words[v + 1] === y && words[v + 2] === z) break;
      slot = (slot + 1) & mask;
      vertex = table[slot];
    }
    if (vertex === EMPTY) {
      if (used === room) {
        room = Math.min(count, 2 * room);
        const larger = new Float32Array(3 * room);
        larger.set(vertices);
        vertices = larger;
        words = new Int32Array(vertices.buffer);
        table = filledTable(words, used, room);
        mask = table.length - 1;
        slot = hash(x, y, z) & mask;
        while (table[slot] !== EMPTY) slot = (slot + 1) & mask;
      }
      vertex = used++;
      table[slot] = vertex;
      const v = 3 * vertex;
      words[v] = x;
      words[v + 1] = y;
      words[v + 2] = z;
    }
    corners[corner] = vertex;
  }
  return { vertices: vertices.subarray(0, 3 * used), corners };
}

function hash(x: number, y: number, z: number): number {
  let h = Math.imul(x, 0x9e3779b1) ^ Math.imul(y, 0x85ebca77) ^ Math.imul(z, 0xc2b2ae3d);
  h = Math.imul(h ^ (h >>> 15), 0x2c1b3c6d);
  return h ^ (h >>> 13);
}

/** Twice the room at least, so that a probe is short. */
function emptyTable(room: number): Int32Array {
  let size = 32;
  while (size < 2 * room) size *= 2;
  return new Int32Array(size).fill(EMPTY);
}

function filledTable(words: Int32Array, used: number, room: number): Int32Array {
  const table = emptyTable(room);
  const mask = table.length - 1;
  for (let vertex = 0; vertex < used; vertex++) {
    let slot = hash(words[3 * vertex], words[3 * vertex + 1], words[3 * vertex + 2]) & mask;
    while (table[slot] !== EMPTY) slot = (slot + 1) & mask;
    table[slot] = vertex;
  }
  return table;
}
