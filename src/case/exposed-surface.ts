import type { TriangleSet } from "../geometry/triangle-set.js";
import type { Box, Vector3 } from "../geometry/vector.js";

/** What the flow touches of a body, as far as cells of the given size can tell. */
export interface ExposedSurface {
  /** m², one per part of the set: what of its surface faces air that is open to the outside */
  areas: Float64Array;
  /** m³ that the air cannot reach */
  enclosed: number;
  /** m: edge of the cells that this was found with; larger than asked when a finer grid would be too large */
  cell: number;
}

const UNKNOWN = 0;
const SURFACE = 1;
const AIR = 2;

/** Bytes of the grid; finer cells tell no more than a prediction of cell counts needs. */
const mostCells = 8_000_000;
/** Empty cells around the body that the air comes in through. */
const margin = 2;
/** Spacing of the points that a triangle is sampled with, in cells: no cell side is crossed unseen (see `exposedSurface`). */
const spacing = 0.6;
/** How far off the surface, in cells, air is looked for: the surface itself fills the first. */
const looks = [1, 1.8];

/**
 * Area per part that the air reaches, and the volume that it does not. `set` in case axes (metres, ground at z = 0); `cell` in metres;
 * `side` looks only at y > 0 (1) or y < 0 (-1), the plane y = 0 being a wall as in a half model, or at all (0).
 *
 * The surface is sampled with points into a grid of cubes, the air flows in from around (never through the ground), and a point counts
 * when there is air off its outer side, or off either side with `bothSides` (for bodies whose triangles are not closed shells). Walls
 * inside other parts, which a mesh never sees, drop out. Points are dense enough that no two neighbouring cell centres have surface
 * between them while both cells are empty: within 0.35 cells of every point of the surface there is a sample.
 */
export function exposedSurface(
  set: Pick<TriangleSet, "positions" | "partOf" | "parts">,
  cell: number,
  options: { side: 1 | -1 | 0; bothSides: boolean },
): ExposedSurface {
  const grid = gridAround(boundsOf(set.positions), cell, options.side);
  const { state, edge } = grid;
  forEachSample(set.positions, edge, (x, y, z) => {
    if (options.side * y >= 0) state[indexAt(grid, x, y, z)] = SURFACE;
  });
  floodAir(grid);
  const areas = new Float64Array(set.parts.length);
  let triangle = -1;
  let part = 0;
  const normal: Vector3 = [0, 0, 0];
  forEachSample(set.positions, edge, (x, y, z, area, of) => {
    if (of !== triangle) {
      triangle = of;
      part = set.partOf[of];
      unitNormal(set.positions, 9 * of, normal);
    }
    if (options.side * y < 0) return;
    if (facesAir(grid, x, y, z, normal, 1) || (options.bothSides && facesAir(grid, x, y, z, normal, -1))) areas[part] += area;
  });
  return { areas, enclosed: enclosedVolume(grid), cell: edge };
}

interface Grid {
  /** x fastest */
  state: Uint8Array;
  size: Vector3;
  origin: Vector3;
  edge: number;
}

function boundsOf(positions: Float32Array): Box {
  const min: Vector3 = [Infinity, Infinity, Infinity];
  const max: Vector3 = [-Infinity, -Infinity, -Infinity];
  for (let at = 0; at < positions.length; at++) {
    const axis = at % 3;
    if (positions[at] < min[axis]) min[axis] = positions[at];
    if (positions[at] > max[axis]) max[axis] = positions[at];
  }
  return { min, max };
}

/** The lowest layer of cells stands on the ground; of a body that reaches below, the lower part is counted there. */
function gridAround({ min, max }: Box, cell: number, side: 1 | -1 | 0): Grid {
  const low = side === 1 ? 0 : min[1];
  const high = side === -1 ? 0 : max[1];
  const sizeFor = (edge: number): Vector3 => [
    Math.ceil((max[0] - min[0]) / edge) + 2 * margin + 1,
    Math.ceil((high - low) / edge) + (side === 0 ? 2 : 1) * margin + 1,
    Math.ceil(Math.max(max[2], edge) / edge) + margin + 1,
  ];
  let edge = cell;
  let size = sizeFor(edge);
  while (size[0] * size[1] * size[2] > mostCells) {
    edge *= 1.1;
    size = sizeFor(edge);
  }
  const front = side === 1 ? 0 : side === -1 ? -size[1] * edge : low - margin * edge;
  return { state: new Uint8Array(size[0] * size[1] * size[2]), size, origin: [min[0] - margin * edge, front, 0], edge };
}

function indexAt({ size, origin, edge }: Grid, x: number, y: number, z: number): number {
  const i = clamped((x - origin[0]) / edge, size[0]);
  const j = clamped((y - origin[1]) / edge, size[1]);
  const k = clamped((z - origin[2]) / edge, size[2]);
  return (k * size[1] + j) * size[0] + i;
}

const clamped = (at: number, size: number): number => Math.min(size - 1, Math.max(0, Math.floor(at)));

/** Calls `visit` with points spread evenly over each triangle, the area each stands for, and the triangle's number. */
function forEachSample(
  positions: Float32Array,
  edge: number,
  visit: (x: number, y: number, z: number, area: number, triangle: number) => void,
): void {
  const step = spacing * edge;
  for (let at = 0, triangle = 0; at < positions.length; at += 9, triangle++) {
    const ax = positions[at];
    const ay = positions[at + 1];
    const az = positions[at + 2];
    const ux = positions[at + 3] - ax;
    const uy = positions[at + 4] - ay;
    const uz = positions[at + 5] - az;
    const vx = positions[at + 6] - ax;
    const vy = positions[at + 7] - ay;
    const vz = positions[at + 8] - az;
    const longest = Math.sqrt(
      Math.max(ux * ux + uy * uy + uz * uz, vx * vx + vy * vy + vz * vz, (ux - vx) ** 2 + (uy - vy) ** 2 + (uz - vz) ** 2),
    );
    const pieces = Math.max(1, Math.ceil(longest / step));
    const area = Math.hypot(uy * vz - uz * vy, uz * vx - ux * vz, ux * vy - uy * vx) / 2 / pieces ** 2;
    // The centroids of the pieces that the triangle is divided into: n(n+1)/2 upright and n(n-1)/2 upside down.
    for (let i = 0; i < pieces; i++)
      for (let j = 0; i + j < pieces; j++)
        for (let third = 1; third <= (i + j < pieces - 1 ? 2 : 1); third++) {
          const s = (i + third / 3) / pieces;
          const t = (j + third / 3) / pieces;
          visit(ax + s * ux + t * vx, ay + s * uy + t * vy, az + s * uz + t * vz, area, triangle);
        }
  }
}

/** Marks every empty cell that is connected with the outside across cell sides. The ground is a wall. */
function floodAir({ state, size }: Grid): void {
  const [nx, ny, nz] = size;
  const stack = new Int32Array(state.length);
  let top = 0;
  const push = (index: number): void => {
    if (state[index] !== UNKNOWN) return;
    state[index] = AIR;
    stack[top++] = index;
  };
  // The upper rear edge of the grid is margin, from one side to the other.
  for (let j = 0; j < ny; j++) push((nz * ny - j) * nx - 1);
  while (top > 0) {
    const index = stack[--top];
    const i = index % nx;
    const j = Math.floor(index / nx) % ny;
    const k = Math.floor(index / (nx * ny));
    if (i > 0) push(index - 1);
    if (i < nx - 1) push(index + 1);
    if (j > 0) push(index - nx);
    if (j < ny - 1) push(index + nx);
    if (k > 0) push(index - nx * ny);
    if (k < nz - 1) push(index + nx * ny);
  }
}

function facesAir(grid: Grid, x: number, y: number, z: number, normal: Vector3, sign: 1 | -1): boolean {
  for (const look of looks) {
    const off = sign * look * grid.edge;
    const height = z + off * normal[2];
    if (height < 0) return false;
    if (grid.state[indexAt(grid, x + off * normal[0], y + off * normal[1], height)] === AIR) return true;
  }
  return false;
}

function unitNormal(positions: Float32Array, at: number, normal: Vector3): void {
  const ux = positions[at + 3] - positions[at];
  const uy = positions[at + 4] - positions[at + 1];
  const uz = positions[at + 5] - positions[at + 2];
  const vx = positions[at + 6] - positions[at];
  const vy = positions[at + 7] - positions[at + 1];
  const vz = positions[at + 8] - positions[at + 2];
  const nx = uy * vz - uz * vy;
  const ny = uz * vx - ux * vz;
  const nz = ux * vy - uy * vx;
  const length = Math.hypot(nx, ny, nz) || 1;
  normal[0] = nx / length;
  normal[1] = ny / length;
  normal[2] = nz / length;
}

/** Cells the air did not reach; those cut by the surface count half. */
function enclosedVolume({ state, edge }: Grid): number {
  let halves = 0;
  for (const cell of state) if (cell !== AIR) halves += cell === SURFACE ? 1 : 2;
  return (halves / 2) * edge ** 3;
}
