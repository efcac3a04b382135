import type { Box, Vector3 } from "../vector.js";
import { bitCount, type Lattice, placeAt, spread, WordList } from "./bit-lattice.js";
import type { AirFlood } from "./flood.js";

/** Points of a lattice that hang together along x, y and z. */
export interface Space {
  /** Its bits; all others are 0. Only good while it is visited, as `words` is. */
  own: Uint32Array;
  /** The words with bits of it, each once. */
  words: Uint32Array;
}

/** Visits the spaces that the points of `rest` form, in the order of their first words; `rest` is all 0 afterwards. */
export function eachSpace(lattice: Lattice, rest: Uint32Array, visit: (space: Space) => void): void {
  const own = new Uint32Array(rest.length);
  const list = new WordList();
  const waiting = new Uint8Array(rest.length);
  for (let first = 0; first < rest.length; first++)
    while (rest[first] !== 0) {
      list.count = 0;
      list.push(first);
      own[first] = rest[first] & -rest[first];
      spread(lattice, rest, own, [first], { touched: list, waiting });
      const words = list.items.subarray(0, list.count);
      visit({ own, words });
      for (const word of words) {
        rest[word] &= ~own[word];
        own[word] = 0;
      }
    }
}

/** Points of a space that are tried for its place. */
const MOST_TRIED = 300;

/** Points of a space, and how many of their neighbours are not of it. */
export function sizeOf({ size, rowWords }: Lattice, { own, words }: Space): { points: number; sides: number } {
  const layer = rowWords * size[1];
  let points = 0;
  let sides = 0;
  for (const word of words) {
    const bits = own[word];
    const count = bitCount(bits);
    points += count;
    // A space is never at the rim of the lattice, so its words have neighbours along y and z, and those along x are of its row or empty.
    const up = (bits << 1) | (own[word - 1] >>> 31);
    const down = (bits >>> 1) | (own[word + 1] << 31);
    for (const beside of [up, down, own[word - rowWords], own[word + rowWords], own[word - layer], own[word + layer]])
      sides += count - bitCount(bits & beside);
  }
  return { points, sides };
}

/** The box of a space's points. */
export function boundsOf(lattice: Lattice, { own, words }: Space): Box {
  const { size, rowWords } = lattice;
  const low = [Infinity, Infinity, Infinity];
  const high = [-Infinity, -Infinity, -Infinity];
  for (const word of words) {
    const bits = own[word];
    const row = Math.floor(word / rowWords);
    const i = 32 * (word - row * rowWords);
    const least = [i + 31 - Math.clz32(bits & -bits), row % size[1], Math.floor(row / size[1])];
    const most = [i + 31 - Math.clz32(bits), least[1], least[2]];
    for (let axis = 0; axis < 3; axis++) {
      if (least[axis] < low[axis]) low[axis] = least[axis];
      if (most[axis] > high[axis]) high[axis] = most[axis];
    }
  }
  return { min: placeAt(lattice, low[0], low[1], low[2]), max: placeAt(lattice, high[0], high[1], high[2]) };
}

/** Of points spread over the space the one that is farthest from the surface. */
export function placeIn(
  { lattice, about }: AirFlood,
  { own, words }: Space,
  points: number,
): { place: Vector3; clearance: number } {
  const { size, rowWords } = lattice;
  const stride = Math.max(1, Math.floor(points / MOST_TRIED));
  let place: Vector3 = [0, 0, 0];
  let clearance = -1;
  let wait = stride >> 1;
  for (const word of words) {
    const count = bitCount(own[word]);
    if (wait >= count) {
      wait -= count;
      continue;
    }
    const row = Math.floor(word / rowWords);
    for (let bits = own[word]; bits !== 0; bits &= bits - 1) {
      if (wait-- > 0) continue;
      wait = stride - 1;
      const i = 32 * (word - row * rowWords) + 31 - Math.clz32(bits & -bits);
      const there = placeAt(lattice, i, row % size[1], Math.floor(row / size[1]));
      const distance = about.distance(there);
      if (distance <= clearance) continue;
      clearance = distance;
      place = there;
    }
  }
  return { place, clearance };
}
