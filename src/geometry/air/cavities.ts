import type { Box, Vector3 } from "../vector.js";
import type { AirFlood } from "./flood.js";
import { INSIDE } from "./membranes.js";
import { boundsOf, eachSpace, placeIn, sizeOf } from "./spaces.js";

/** A space that air does not reach from outside through ways a cell wide. Mesh unit and axes. */
export interface Cavity {
  /**
   * inside: the surface winds about it, so it is the inside of the body (or of a shell that is turned inside out), which no mesh is
   * wanted in. air: it does not; the body closes it off, and a mesh leaves it out without a word.
   */
  kind: "inside" | "air";
  volume: number;
  /** The volume is good to so much: the layer along the walls is estimated from the area of the clear space. */
  doubt: number;
  /** A place in it, of those that were tried the farthest from walls, and its distance to the nearest one. */
  place: Vector3;
  clearance: number;
  /** Of its clear points: a quarter to three quarters of a cell smaller than the space on each side. */
  bounds: Box;
}

export interface Cavities {
  /** The cell that they are closed at. */
  cell: number;
  /** How many there are of each kind, and their volume together; those without room for a cell are left out. */
  inside: { count: number; volume: number };
  air: { count: number; volume: number };
  /** The largest first, at most twenty of each kind. */
  largest: Cavity[];
}

/** Clear points that a space has at least: room for one cell. */
const LEAST_POINTS = 8;
const MOST_LISTED = 20;
/**
 * Clear points lie a quarter of a cell or more from the walls. That layer's volume is a quarter cell times the area, and the area lies between
 * 1/√3 and 1 of the sides that clear points turn to points that are not: the middle of that, and how far the ends are from it.
 */
const LAYER = (1 + 1 / Math.sqrt(3)) / 2;
const LAYER_DOUBT = (1 - 1 / Math.sqrt(3)) / 2;

/**
 * The closed spaces of a flooded body at the flood's cell: what hangs together and is clear, but was not reached. Take the flood after
 * `leakOf`, which closes holes in it that are narrower than a cell; gaps elsewhere count as closed below half a cell and as
 * open above 1.37 cells, between that it depends on where the lattice lies.
 */
export function enclosedCavities(flood: AirFlood): Cavities {
  const { lattice, clear, reached, about, cell } = flood;
  const { step } = lattice;
  const rest = clear.slice();
  for (let word = 0; word < rest.length; word++) rest[word] &= ~reached[word];
  const sums = { inside: { count: 0, volume: 0 }, air: { count: 0, volume: 0 } };
  const found: Cavity[] = [];
  eachSpace(lattice, rest, (space) => {
    const { points, sides } = sizeOf(lattice, space);
    if (points < LEAST_POINTS) return;
    const layer = (cell / 4) * sides * step ** 2;
    const { place, clearance } = placeIn(flood, space, points);
    const kind = about.depth(place) > INSIDE ? "inside" : "air";
    const volume = points * step ** 3 + LAYER * layer;
    sums[kind].count++;
    sums[kind].volume += volume;
    found.push({ kind, volume, doubt: LAYER_DOUBT * layer, place, clearance, bounds: boundsOf(lattice, space) });
  });
  found.sort((a, b) => b.volume - a.volume || a.place[0] - b.place[0]);
  const listed = { inside: 0, air: 0 };
  return { cell, ...sums, largest: found.filter(({ kind }) => listed[kind]++ < MOST_LISTED) };
}
