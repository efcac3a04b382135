import type { SurfaceMesh } from "../surface-mesh.js";
import type { Box, Vector3 } from "../vector.js";
import { MARGIN, type WallGrid, wallGrid, windingNumber } from "./wall-grid.js";

/** Where air gets into the inside of a body. Mesh unit and axes. */
export interface Leak {
  /** Edge of the cubes that were used: holes narrower than this count as closed. */
  cell: number;
  /** Whether air gets inside. */
  reached: boolean;
  /** The widest way in first; `width` to about two cells. At most six. */
  holes: { centre: Vector3; width: number }[];
}

/** Cells along the body's greatest extent, 3 cm on a car; fewer where that makes too many of them. */
const CELLS = 160;
const MOST_CELLS = 400_000;
/** Area of a body's surface, in squares of its greatest extent, above which it is rubble. */
const MOST_AREA = 100;
const MOST_HOLES = 6;
/** Points that are tried for being inside lie at least so many cells away from the surface. */
const CLEAR = 2;
const MOST_PROBES = 400;
const INSIDE = 0.5;
/** Clearance of cells that no wall is connected with. */
const FAR = 0xffff;

/**
 * Floods the air around a body through its holes. A point is inside where the surface winds about it more than half a time, which
 * holes do not change much. Of all ways from outside to the inside the widest is found, and the narrowest place of that way is the hole.
 * The hole is then filled, and the rest is tried again, six times at most.
 *
 * Null for a surface so much larger than its box that it cannot be a body's.
 *
 * @param cells along the body's greatest extent
 * @param cut plane of a half body (axis and coordinate): no air comes through it
 */
export function findLeak(mesh: SurfaceMesh, bounds: Box, cut: { axis: number; plane: number } | null, cells = CELLS): Leak | null {
  const extent = Math.max(...bounds.max.map((value, axis) => value - bounds.min[axis]));
  if (!(extent > 0)) return { cell: 0, reached: false, holes: [] };
  if (areaOf(mesh) > MOST_AREA * extent ** 2) return null;
  const volume = bounds.max.reduce((product, value, axis) => product * Math.max(value - bounds.min[axis], extent / 50), 1);
  const grid = wallGrid(mesh, bounds, Math.max(extent / cells, Math.cbrt(volume / MOST_CELLS)));
  if (cut !== null) closeCut(grid, bounds, cut);
  let clearance = clearances(grid);
  const probes = insideProbes(grid, clearance, cut);
  const margin = marginOf(grid.size);
  const holes: Leak["holes"] = [];
  while (probes.length > 0 && holes.length < MOST_HOLES) {
    const way = widestWay(grid, clearance, margin, probes);
    if (way === null) break;
    holes.push({ centre: middleOf(grid, way.narrowest), width: (2 * way.width - 1) * grid.cell });
    mark(grid.size, grid.wall, way.narrowest, Math.ceil(1.5 * way.width) + 1);
    clearance = clearances(grid);
  }
  return { cell: grid.cell, reached: holes.length > 0, holes };
}

function areaOf({ vertices, corners }: SurfaceMesh): number {
  let sum = 0;
  for (let h = 0; h < corners.length; h += 3) {
    const a = 3 * corners[h];
    const b = 3 * corners[h + 1];
    const c = 3 * corners[h + 2];
    const ux = vertices[b] - vertices[a];
    const uy = vertices[b + 1] - vertices[a + 1];
    const uz = vertices[b + 2] - vertices[a + 2];
    const vx = vertices[c] - vertices[a];
    const vy = vertices[c + 1] - vertices[a + 1];
    const vz = vertices[c + 2] - vertices[a + 2];
    sum += Math.sqrt((uy * vz - uz * vy) ** 2 + (uz * vx - ux * vz) ** 2 + (ux * vy - uy * vx) ** 2) / 2;
  }
  return sum;
}

/** Makes the grid's margin beyond the cut a wall. */
function closeCut({ origin, size, cell, wall }: WallGrid, bounds: Box, { axis, plane }: { axis: number; plane: number }): void {
  const low = Math.abs(plane - bounds.min[axis]) < Math.abs(plane - bounds.max[axis]);
  const stride = axis === 0 ? 1 : axis === 1 ? size[0] : size[0] * size[1];
  for (let at = 0; at < wall.length; at++) {
    const middle = origin[axis] + ((Math.floor(at / stride) % size[axis]) + 0.5) * cell;
    if (low ? middle < plane : middle > plane) wall[at] = 1;
  }
}

function placeOf(size: Vector3, at: number): Vector3 {
  return [at % size[0], Math.floor(at / size[0]) % size[1], Math.floor(at / (size[0] * size[1]))];
}

/** 1 for the cells beyond the body's box. */
function marginOf([columns, rows, layers]: Vector3): Uint8Array {
  const margin = new Uint8Array(columns * rows * layers).fill(1);
  for (let k = MARGIN; k < layers - MARGIN; k++)
    for (let j = MARGIN; j < rows - MARGIN; j++) {
      const row = (k * rows + j) * columns;
      margin.fill(0, row + MARGIN, row + columns - MARGIN);
    }
  return margin;
}

const middleOf = ({ origin, size, cell }: WallGrid, at: number): Vector3 =>
  placeOf(size, at).map((value, axis) => origin[axis] + (value + 0.5) * cell) as Vector3;

/**
 * Cells in the clear that the surface winds about. Those farthest from any wall are tried first, and none that is nearer to one tried
 * before than to the wall: a few balls fill every room. Every other cell along each axis is enough.
 */
function insideProbes(grid: WallGrid, clearance: Uint16Array, cut: { axis: number; plane: number } | null): number[] {
  const [columns, rows, layers] = grid.size;
  const byClearance: number[][] = [];
  for (let k = MARGIN; k < layers - MARGIN; k += 2)
    for (let j = MARGIN; j < rows - MARGIN; j += 2)
      for (let i = MARGIN; i < columns - MARGIN; i += 2) {
        const at = (k * rows + j) * columns + i;
        const clear = clearance[at];
        if (clear < CLEAR || clear === FAR) continue;
        if (byClearance[clear] === undefined) byClearance[clear] = [];
        byClearance[clear].push(at);
      }
  const taken = new Uint8Array(clearance.length);
  const probes: number[] = [];
  let tried = 0;
  for (let clear = byClearance.length - 1; clear >= CLEAR; clear--)
    for (const at of byClearance[clear] ?? []) {
      if (taken[at] === 1 || tried === MOST_PROBES) continue;
      tried++;
      mark(grid.size, taken, at, clear);
      const point = middleOf(grid, at);
      let winding = windingNumber(grid, point);
      if (cut !== null) {
        // The missing half winds about the point as this half winds about its mirror image.
        point[cut.axis] = 2 * cut.plane - point[cut.axis];
        winding += windingNumber(grid, point);
      }
      if (winding > INSIDE) probes.push(at);
    }
  return probes;
}

/** Offsets of the six neighbours; the grid's outermost cells are never walls of the body, so an index cannot run over unnoticed. */
const neighbours = ([columns, rows]: Vector3): number[] => [-1, 1, -columns, columns, -columns * rows, columns * rows];

/** Steps from each cell to the nearest wall, across cell sides; 0 in walls. Far from any wall, and at the grid's rim, it is large. */
function clearances({ size, wall }: WallGrid): Uint16Array {
  const clearance = new Uint16Array(wall.length).fill(FAR);
  const queue = new Uint32Array(wall.length);
  let end = 0;
  for (let at = 0; at < wall.length; at++)
    if (wall[at] === 1) {
      clearance[at] = 0;
      queue[end++] = at;
    }
  const steps = neighbours(size);
  for (let head = 0; head < end; head++) {
    const at = queue[head];
    for (let k = 0; k < 6; k++) {
      const next = at + steps[k];
      if (next < 0 || next >= wall.length || clearance[next] !== FAR) continue;
      clearance[next] = clearance[at] + 1;
      queue[end++] = next;
    }
  }
  return clearance;
}

/**
 * The widest way from beyond the body's box to any of the probes: the clearance at its narrowest place, and that place. Null where
 * there is no way. Cells wait in lists by the width of the way to them, and the widest is taken first (Dijkstra, 1959, for the widest
 * path), so the first probe that is taken ends the search.
 */
function widestWay(
  { size, wall }: WallGrid,
  clearance: Uint16Array,
  margin: Uint8Array,
  probes: number[],
): { width: number; narrowest: number } | null {
  const wanted = new Uint8Array(wall.length);
  for (const probe of probes) wanted[probe] = 1;
  const way = new Uint16Array(wall.length);
  const narrowest = new Uint32Array(wall.length);
  let widest = 1;
  for (let at = 0; at < wall.length; at++) if (clearance[at] !== FAR && clearance[at] > widest) widest = clearance[at];
  const waiting: number[][] = Array.from({ length: widest + 1 }, () => []);
  for (let at = 0; at < wall.length; at++)
    if (wall[at] === 0 && margin[at] === 1) {
      way[at] = widest;
      narrowest[at] = at;
      waiting[widest].push(at);
    }
  const steps = neighbours(size);
  for (let wide = widest; wide > 0; wide--)
    for (let at = waiting[wide].pop(); at !== undefined; at = waiting[wide].pop()) {
      // It may have been reached by a wider way since.
      if (way[at] !== wide) continue;
      if (wanted[at] === 1) return { width: wide, narrowest: narrowest[at] };
      for (let k = 0; k < 6; k++) {
        const next = at + steps[k];
        if (next < 0 || next >= wall.length || wall[next] === 1) continue;
        // Beyond the body's box there is nothing to be narrow.
        const clear = margin[next] === 1 ? widest : clearance[next];
        const narrow = clear < wide;
        const there = narrow ? clear : wide;
        if (there <= way[next]) continue;
        way[next] = there;
        narrowest[next] = narrow ? next : narrowest[at];
        waiting[there].push(next);
      }
    }
  return null;
}

/** Sets the cells within `radius` of a cell to 1. */
function mark(size: Vector3, cells: Uint8Array, centre: number, radius: number): void {
  const [x, y, z] = placeOf(size, centre);
  for (let k = Math.max(0, z - radius); k <= Math.min(size[2] - 1, z + radius); k++)
    for (let j = Math.max(0, y - radius); j <= Math.min(size[1] - 1, y + radius); j++)
      for (let i = Math.max(0, x - radius); i <= Math.min(size[0] - 1, x + radius); i++)
        if ((i - x) ** 2 + (j - y) ** 2 + (k - z) ** 2 <= radius ** 2) cells[(k * size[1] + j) * size[0] + i] = 1;
}
