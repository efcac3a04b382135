import type { Box, Vector3 } from "../vector.js";
import { bitAt, placeAt } from "./bit-lattice.js";
import type { AirFlood } from "./flood.js";

/** Whether a mesh that keeps what hangs together with a point keeps the air about the body. */
export interface KeepPointProof {
  /** Air from far outside gets there through ways that are a cell wide. False too where the body's flood cannot tell. */
  outside: boolean;
  /** Distance to the nearest surface, mesh unit, and in cells. */
  clearance: number;
  cells: number;
  /** Distance to the nearest face of the base grid or of its finer levels, in cells of the finest; null where no grid was given. */
  offFaces: number | null;
  /** Outside, two cells clear of the surface, and off every face. */
  proven: boolean;
}

/** Cubes with faces on the multiples of `cell` from `origin`, and again on those of its half, quarter ... `levels` times. */
export interface BaseGrid {
  origin: Vector3;
  cell: number;
  levels: number;
}

/** Cells that a keep-point has to be away from the surface. */
const CLEAR_CELLS = 2;
/** Share of a cell that a keep-point has to be away from faces. */
const OFF_FACES = 0.05;
/** The golden section is farther from halves, quarters, eighths and so on than most. */
const GOLDEN = (Math.sqrt(5) - 1) / 2;

/**
 * Looks a keep-point up in the flood: a point is outside when the air beyond the lattice is what it stands in, or when a point of the
 * lattice that the flood reached is nearer to it than any surface, so that nothing lies between them. Beyond the cut of a half body
 * nothing is outside.
 */
export function provesKeepPoint(flood: AirFlood, point: Vector3, grid?: BaseGrid): KeepPointProof {
  const { cell } = flood;
  const clearance = flood.about.distance(point);
  const outside = isOutside(flood, point, clearance);
  const offFaces = grid === undefined ? null : offFacesOf(point, grid);
  const cells = clearance / cell;
  return {
    outside,
    clearance,
    cells,
    offFaces,
    proven: outside && cells >= CLEAR_CELLS && (offFaces === null || offFaces >= OFF_FACES),
  };
}

/**
 * A keep-point in a domain: in the golden section of a cell of the base grid, at first in the upper corner near the least x, where the air
 * comes from in case axes, then in cells ever farther from there, until one is proven. Null where none of some hundred is.
 */
export function findKeepPoint(flood: AirFlood, domain: Box, grid: BaseGrid): { point: Vector3; proof: KeepPointProof } | null {
  const places = 5;
  const candidates: { order: number; point: Vector3 }[] = [];
  const count = domain.max.map((value, axis) => Math.floor((value - domain.min[axis]) / grid.cell + 1e-9));
  if (count.some((cells) => cells < 1)) return null;
  for (let k = 0; k < places; k++)
    for (let j = 0; j < places; j++)
      for (let i = 0; i < places; i++) {
        const share = [i, j, places - 1 - k].map((at) => at / (places - 1));
        const point = share.map((part, axis) => {
          const first = Math.ceil((domain.min[axis] - grid.origin[axis]) / grid.cell - 1e-9);
          const at = first + Math.min(count[axis] - 1, Math.floor(part * count[axis]));
          return Number((grid.origin[axis] + (at + GOLDEN) * grid.cell).toPrecision(9));
        }) as Vector3;
        candidates.push({ order: i + j + k, point });
      }
  candidates.sort((a, b) => a.order - b.order);
  for (const { point } of candidates) {
    const inDomain = point.every((value, axis) => value > domain.min[axis] && value < domain.max[axis]);
    const proof = provesKeepPoint(flood, point, grid);
    if (inDomain && proof.proven) return { point, proof };
  }
  return null;
}

function isOutside({ lattice, reached, cut, bounds }: AirFlood, point: Vector3, clearance: number): boolean {
  if (!point.every(Number.isFinite)) return false;
  if (cut !== null) {
    const { axis, plane } = cut;
    const low = Math.abs(plane - bounds.min[axis]) < Math.abs(plane - bounds.max[axis]);
    if (low ? point[axis] <= plane : point[axis] >= plane) return false;
  }
  const { origin, step, size } = lattice;
  const index = point.map((value, axis) => (value - origin[axis]) / step);
  if (index.some((value, axis) => value < 0 || value > size[axis] - 1)) return true;
  const [i, j, k] = index.map(Math.floor);
  for (let corner = 0; corner < 8; corner++) {
    const at: Vector3 = [i + (corner & 1), j + ((corner >> 1) & 1), k + (corner >> 2)];
    if (at.some((value, axis) => value >= size[axis]) || bitAt(lattice, reached, ...at) === 0) continue;
    const place = placeAt(lattice, ...at);
    if (Math.hypot(place[0] - point[0], place[1] - point[1], place[2] - point[2]) < clearance) return true;
  }
  return false;
}

/** Distance to the nearest face of any level, in cells of the finest. */
function offFacesOf(point: Vector3, { origin, cell, levels }: BaseGrid): number {
  // Faces of a level are faces of all finer ones.
  const finest = cell / 2 ** levels;
  return Math.min(
    ...point.map((value, axis) => {
      const at = (value - origin[axis]) / finest;
      return Math.abs(at - Math.round(at));
    }),
  );
}
