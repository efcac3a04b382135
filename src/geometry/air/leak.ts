import type { SurfaceMesh } from "../surface-mesh.js";
import type { TriangleTree } from "../triangle-tree.js";
import type { Box, Vector3 } from "../vector.js";
import { bitAt, placeAt, reachedFromRim } from "./bit-lattice.js";
import { clearLattice } from "./clear-lattice.js";
import { type AirFlood, type Cut, floodAir } from "./flood.js";
import { hasBorder, INSIDE, type Membrane, membranesOf } from "./membranes.js";
import { narrowestAt } from "./narrowest.js";
import { eachSpace, placeIn, sizeOf } from "./spaces.js";

/** Where air gets into the inside of a body. Mesh unit and axes. */
export interface Leak {
  /** Edge of the mesh cells that the answer is for: what a ball of this diameter cannot pass counts as closed. */
  cell: number;
  /** The edge that was asked for, where it had to be enlarged. */
  asked?: number;
  /** Whether air gets inside. Where it does and `holes` is empty, the way in was not found. */
  reached: boolean;
  /** The widest way in first, at most six. `width`: diameter of the largest ball that passes, `centre`: where it does. */
  holes: Hole[];
}

export interface Hole {
  centre: Vector3;
  width: number;
  /** The hole may be so much wider than `width`, or, where it is many cells wide, so much narrower. */
  doubt?: number;
}

const MOST_HOLES = 6;
/** Cells along the body's greatest extent where no cell is given. */
const CELLS = 200;
/** Points that are tried for being inside, and how far from the surface they must be: cells, and share of the body's extent. */
const MOST_SAMPLES = 60_000;
const DEEP_SHARE = 1 / 80;
/** Cells along the body above which holes are looked for with larger cells first, and how much larger these are. */
const COARSE = 100;
const COARSER = 4;
/** Steps about a film's points that cover its hole: more than a film ends beside the edges of its hole. */
const COVER = 4;
/** Points about holes whose winding is looked at. */
const MOST_LOOKS = 1_500_000;

/**
 * Whether air gets inside of a body that is meshed with cells of a given edge, and where. Air gets inside where a ball whose diameter is
 * that edge can come from outside, without touching the surface, to a place that the surface winds about more than half a time,
 * either way round.
 *
 * The flood (`floodAir`) finds every way that is 1.37 cells wide or wider, however the lattice lies, and some that are narrower; the
 * film across each hole is then looked up (`membranesOf`) and its narrowest place measured by exact distances, and holes narrower than
 * a cell are closed again. So a hole under one cell is never reported, one over 1.37 cells always; between, round
 * holes in a sheet were found from 1.2 cells on in every place and direction that was tried. A room counts where some place in it is a
 * cell and an eightieth of the body's extent away from its walls: the hollow of a bent sheet is none.
 *
 * Null for a surface so much larger than its box that it cannot be a body's.
 *
 * @param cut plane of a half body (axis and coordinate): no air comes through it
 * @param cell edge of the mesh cells at the surface, mesh unit; a two-hundredth of the greatest extent where it is not given
 */
export function findLeak(
  mesh: SurfaceMesh,
  bounds: Box,
  cut: Cut | null,
  cell?: number,
  limits: { tree?: TriangleTree; mostPoints?: number } = {},
): Leak | null {
  const extent = Math.max(...bounds.max.map((value, axis) => value - bounds.min[axis]));
  if (!(extent > 0)) return { cell: 0, reached: false, holes: [] };
  const flood = floodAir(mesh, bounds, cut, cell ?? extent / CELLS, limits);
  return flood === null ? null : leakOf(flood, mesh);
}

/**
 * The leak of a flood that was made already; `mesh` is the one it was made of. Where the flood went through holes narrower than a cell,
 * these are closed in it: `clear` and `reached` are set anew.
 */
export function leakOf(flood: AirFlood, mesh: SurfaceMesh): Leak {
  const { cell, asked, lattice } = flood;
  const answer = (reached: boolean, holes: Hole[] = []): Leak => ({ cell, ...(asked !== cell && { asked }), reached, holes });
  if (!hasBorder(mesh)) return answer(false);
  const { ways, narrow, lost } = waysIn(flood, mesh);
  for (const { outer } of narrow) for (const point of outer) clearBit(flood, flood.clear, point);
  if (narrow.length > 0) flood.reached = reachedFromRim(lattice, flood.clear);
  const reached = ways.length > 0 || lost.some((point) => isSet(flood, flood.reached, point));
  const holes = ways.map(({ hole }) => hole);
  holes.sort((a, b) => b.width - a.width || a.centre[0] - b.centre[0] || a.centre[1] - b.centre[1]);
  return answer(reached, holes.slice(0, MOST_HOLES));
}

interface Way {
  hole: Hole;
  /** Points of its film. */
  film: Vector3[];
  /** Distance of points of the lattice that the film was found on. */
  step: number;
}

/**
 * The films of a flood: those a cell wide or wider that lead into rooms; those that are narrower; and, where there were too many films to
 * follow all, points inside that air reaches. Holes many cells wide are looked for with larger cells first and then covered, since
 * the film across one has as many points as the hole has squares of a step.
 */
function waysIn(flood: AirFlood, mesh: SurfaceMesh): { ways: Way[]; narrow: Membrane[]; lost: number[] } {
  const { bounds, cut, cell, lattice } = flood;
  const extent = Math.max(...bounds.max.map((value, axis) => value - bounds.min[axis]));
  const ways: Way[] = [];
  let open = flood;
  if (extent > COARSE * cell) {
    const { lattice: wide, clear } = clearLattice(mesh, bounds, (COARSER * cell) / 2, (COARSER * cell) / 4, cut);
    const coarse: AirFlood = { ...flood, cell: COARSER * cell, lattice: wide, clear, reached: reachedFromRim(wide, clear) };
    ways.push(...waysIn(coarse, mesh).ways);
    if (ways.length > 0) {
      const covered = flood.clear.slice();
      for (const way of ways) cover(lattice, covered, way);
      open = { ...flood, clear: covered, reached: reachedFromRim(lattice, covered) };
    }
  }
  const { membranes, complete } = membranesOf(open, mesh, MOST_LOOKS);
  if (membranes.length === 0) return { ways, narrow: [], lost: [] };
  const rooms = complete ? roomsBehind(open, membranes) : { bits: open.reached, inside: deepPoints(open) };
  const narrow: Membrane[] = [];
  for (const membrane of membranes) {
    const hole = narrowestAt(open, membrane.inner);
    if (hole.width < cell) narrow.push(membrane);
    else if (rooms.inside.length > 0 && membrane.inner.some((point) => isSet(open, rooms.bits, point)))
      ways.push({ hole, film: membrane.inner.map((point) => placeAt(lattice, ...splitPoint(open, point))), step: lattice.step });
  }
  return { ways, narrow, lost: complete ? [] : rooms.inside };
}

/** Clears the bits of points about a film, so far that nothing is left open between it and the edges where it ends. */
function cover({ origin, step, size, rowWords }: AirFlood["lattice"], bits: Uint32Array, way: Way): void {
  const reach = COVER * way.step;
  for (const place of way.film) {
    const low = place.map((value, axis) => Math.max(0, Math.ceil((value - reach - origin[axis]) / step)));
    const high = place.map((value, axis) => Math.min(size[axis] - 1, Math.floor((value + reach - origin[axis]) / step)));
    for (let k = low[2]; k <= high[2]; k++)
      for (let j = low[1]; j <= high[1]; j++) {
        const row = (k * size[1] + j) * rowWords;
        for (let i = low[0]; i <= high[0]; i++) bits[row + (i >>> 5)] &= ~(1 << (i & 31));
      }
  }
}

function splitPoint({ lattice: { size } }: AirFlood, point: number): Vector3 {
  return [point % size[0], Math.floor(point / size[0]) % size[1], Math.floor(point / (size[0] * size[1]))];
}

function isSet(flood: AirFlood, bits: Uint32Array, point: number): boolean {
  const [i, j, k] = splitPoint(flood, point);
  return bitAt(flood.lattice, bits, i, j, k) === 1;
}

function wordOf({ size, rowWords }: AirFlood["lattice"], [i, j, k]: Vector3): number {
  return (k * size[1] + j) * rowWords + (i >>> 5);
}

function clearBit(flood: AirFlood, bits: Uint32Array, point: number): void {
  const place = splitPoint(flood, point);
  bits[wordOf(flood.lattice, place)] &= ~(1 << (place[0] & 31));
}

/** Distance from the surface that a place has to have for being a room's. */
const deepOf = ({ cell, bounds }: AirFlood): number =>
  Math.max(cell, DEEP_SHARE * Math.max(...bounds.max.map((value, axis) => value - bounds.min[axis])));

/** Points that air reaches, that the surface winds about, and that are well away from it. Spread evenly over the body's box. */
function deepPoints(flood: AirFlood): number[] {
  const { lattice, reached, about } = flood;
  const { size } = lattice;
  const far = deepOf(flood);
  const stride = Math.max(1, Math.ceil(Math.cbrt((size[0] * size[1] * size[2]) / MOST_SAMPLES)));
  const deep: number[] = [];
  for (let k = stride >> 1; k < size[2]; k += stride)
    for (let j = stride >> 1; j < size[1]; j += stride)
      for (let i = stride >> 1; i < size[0]; i += stride) {
        if (bitAt(lattice, reached, i, j, k) === 0) continue;
        const place = placeAt(lattice, i, j, k);
        if (about.depth(place) > INSIDE && about.distance(place, far) >= far) deep.push((k * size[1] + j) * size[0] + i);
      }
  return deep;
}

/** What air does not reach any more when the films across all holes are closed: the rooms' bits, and one point deep inside of each. */
function roomsBehind(flood: AirFlood, membranes: Membrane[]): { bits: Uint32Array; inside: number[] } {
  const { lattice, reached, about } = flood;
  const open = reached.slice();
  for (const { outer } of membranes) for (const point of outer) clearBit(flood, open, point);
  const outside = reachedFromRim(lattice, open);
  for (let word = 0; word < open.length; word++) open[word] &= ~outside[word];
  const bits = new Uint32Array(open.length);
  const inside: number[] = [];
  const far = deepOf(flood);
  eachSpace(lattice, open, (space) => {
    const { place, clearance } = placeIn(flood, space, sizeOf(lattice, space).points);
    if (clearance < far || about.depth(place) < INSIDE) return;
    for (const word of space.words) bits[word] |= space.own[word];
    const [i, j, k] = place.map((value, axis) => Math.round((value - lattice.origin[axis]) / lattice.step));
    inside.push((k * lattice.size[1] + j) * lattice.size[0] + i);
  });
  return { bits, inside };
}
