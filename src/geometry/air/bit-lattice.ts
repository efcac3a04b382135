import type { Box, Vector3 } from "../vector.js";

/** Points at equal distances along x, y and z, one bit each. Bit i of a row is bit i % 32 of its word i / 32. Mesh unit. */
export interface Lattice {
  /** The first point. */
  origin: Vector3;
  /** Distance of neighbours. */
  step: number;
  /** Points along x, y, z. */
  size: Vector3;
  /** Words of a row along x. */
  rowWords: number;
}

/** Points between the box and the rim of a lattice about it, a fraction more so that faces of the box do not fall on points. */
const MARGIN = 3.381966;

/** The lattice about a box, wider than it by some points on each side. */
export function latticeAbout({ min, max }: Box, step: number): Lattice {
  const origin = min.map((value) => value - MARGIN * step) as Vector3;
  const size = max.map((value, axis) => Math.ceil((value - min[axis]) / step + 2 * MARGIN) + 1) as Vector3;
  return { origin, step, size, rowWords: Math.ceil(size[0] / 32) };
}

/** Points of the lattice about a box with this step. */
export function pointsAbout({ min, max }: Box, step: number): number {
  return max.reduce((product, value, axis) => product * (Math.ceil((value - min[axis]) / step + 2 * MARGIN) + 1), 1);
}

/** Bits for all points: 1 for each of them, 0 for what fills up the words. */
export function allPoints({ size, rowWords }: Lattice): Uint32Array {
  const bits = new Uint32Array(rowWords * size[1] * size[2]).fill(0xffffffff);
  const rest = size[0] % 32;
  if (rest > 0) for (let word = rowWords - 1; word < bits.length; word += rowWords) bits[word] = 2 ** rest - 1;
  return bits;
}

/** The bit of point (i, j, k), which must lie in the lattice. */
export const bitAt = ({ size, rowWords }: Lattice, bits: Uint32Array, i: number, j: number, k: number): number =>
  (bits[(k * size[1] + j) * rowWords + (i >>> 5)] >>> (i & 31)) & 1;

/** Where point (i, j, k) is. */
export const placeAt = ({ origin, step }: Lattice, i: number, j: number, k: number): Vector3 => [
  origin[0] + i * step,
  origin[1] + j * step,
  origin[2] + k * step,
];

/** Numbers of words, as many as there may be. */
export class WordList {
  items = new Uint32Array(1024);
  count = 0;

  push(word: number): void {
    if (this.count === this.items.length) {
      const larger = new Uint32Array(2 * this.items.length);
      larger.set(this.items);
      this.items = larger;
    }
    this.items[this.count++] = word;
  }
}

/** Number of 1 bits of a word. */
export function bitCount(word: number): number {
  const pairs = word - ((word >>> 1) & 0x55555555);
  const fours = (pairs & 0x33333333) + ((pairs >>> 2) & 0x33333333);
  return Math.imul((fours + (fours >>> 4)) & 0x0f0f0f0f, 0x01010101) >>> 24;
}

/**
 * Spreads over points of `free` that are neighbours along x, y or z, 32 at a time, from those that are 1 in `reached`, which must be
 * free and whose words are `from`. Time grows with the number of words that are reached. `touched` gets each word once that had no bit
 * in `reached` before, other than those of `from`. `waiting`: one zero per word, zero again afterwards, for those who spread often.
 */
export function spread(
  { size, rowWords }: Lattice,
  free: Uint32Array,
  reached: Uint32Array,
  from: Iterable<number>,
  { touched, waiting = new Uint8Array(free.length) }: { touched?: WordList; waiting?: Uint8Array } = {},
): void {
  const [, rows, layers] = size;
  const layerWords = rowWords * rows;
  const stack = new WordList();
  const push = (word: number): void => {
    if (waiting[word] === 1) return;
    waiting[word] = 1;
    stack.push(word);
  };
  const take = (word: number, bits: number): void => {
    const fresh = bits & free[word] & ~reached[word];
    if (fresh === 0) return;
    if (touched !== undefined && reached[word] === 0) touched.push(word);
    reached[word] = filled(reached[word] | fresh, free[word]);
    push(word);
  };
  for (const word of from) {
    reached[word] = filled(reached[word], free[word]);
    push(word);
  }
  while (stack.count > 0) {
    const word = stack.items[--stack.count];
    waiting[word] = 0;
    const bits = reached[word];
    const row = Math.floor(word / rowWords);
    const column = word - row * rowWords;
    const layer = Math.floor(row / rows);
    const line = row - layer * rows;
    if (column > 0 && (bits & 1) !== 0) take(word - 1, 0x80000000);
    if (column < rowWords - 1 && bits >>> 31 === 1) take(word + 1, 1);
    if (line > 0) take(word - rowWords, bits);
    if (line < rows - 1) take(word + rowWords, bits);
    if (layer > 0) take(word - layerWords, bits);
    if (layer < layers - 1) take(word + layerWords, bits);
  }
}

/** Bits of `free` that hang together with bits of `some` within a word: parallel prefix (Kogge and Stone, 1973), both ways. */
function filled(some: number, free: number): number {
  let up = some;
  let open = free;
  up |= open & (up << 1);
  open &= open << 1;
  up |= open & (up << 2);
  open &= open << 2;
  up |= open & (up << 4);
  open &= open << 4;
  up |= open & (up << 8);
  open &= open << 8;
  up |= open & (up << 16);
  let down = up;
  open = free;
  down |= open & (down >>> 1);
  open &= open >>> 1;
  down |= open & (down >>> 2);
  open &= open >>> 2;
  down |= open & (down >>> 4);
  open &= open >>> 4;
  down |= open & (down >>> 8);
  open &= open >>> 8;
  down |= open & (down >>> 16);
  return down >>> 0;
}

/** The free points that hang together with the rim of the lattice. */
export function reachedFromRim(lattice: Lattice, free: Uint32Array): Uint32Array {
  const { size, rowWords } = lattice;
  const [columns, rows, layers] = size;
  const reached = new Uint32Array(free.length);
  const words = new WordList();
  const begin = (word: number, bits: number): void => {
    const some = bits & free[word];
    if (some === 0) return;
    reached[word] |= some;
    words.push(word);
  };
  for (let k = 0; k < layers; k++)
    for (let j = 0; j < rows; j++) {
      const row = (k * rows + j) * rowWords;
      const face = k === 0 || k === layers - 1 || j === 0 || j === rows - 1;
      for (let word = row; face && word < row + rowWords; word++) begin(word, 0xffffffff);
      begin(row, 1);
      begin(row + rowWords - 1, 1 << ((columns - 1) & 31));
    }
  spread(lattice, free, reached, words.items.subarray(0, words.count));
  return reached;
}
