import type { Box } from "../geometry/vector.js";
import type { RefinementBox } from "./plan.js";

/** What the size of a mesh depends on, all of it inside the domain (a half model counts half). */
export interface MeshSizing {
  /** m: edge of the background cubes */
  baseCell: number;
  surfaceLevel: number;
  domain: Box;
  boxes: RefinementBox[];
  /** m² of surface that the air reaches, by level: `surfaceLevel`, and finer ones for parts that are refined further */
  areaAtLevel: ReadonlyMap<number, number>;
  /** m³ that the body takes from the domain */
  volume: number;
  /** m²: surface of the body's bounding box, without a face in the symmetry plane */
  boxSurface: number;
  cellsBetweenLevels: number;
  layers: number;
}

/**
 * Share of the asked layer cells that a mesh really gets. Measured with the solver's mesher: 0.98 on a plain body, 0.8 on a pickup
 * with wheels, 0.5 on a motorcycle of 67 parts.
 */
export const layerCover = 0.85;

/** Faces of the mesh on a surface, per area over squared cell edge. Measured on two bodies: 19 197 of 19 531, 70 340 of 71 700. */
const facesPerArea = 0.98;

/**
 * Cells of the mesh before it is made. Shells around the surface, one per level: the finest as thick as the buffer and half a cell
 * (a cut cell lies half outside), the next ones around the bounding box; or the refinement box where that is larger. The rest of the
 * domain is background cubes; layers come on top. Within 7 % on 15 meshes of a bluff body (measured with OpenFOAM v1912).
 */
export function predictCells(mesh: MeshSizing): number {
  const { baseCell, surfaceLevel, cellsBetweenLevels: buffer, areaAtLevel } = mesh;
  const edge = (level: number): number => baseCell / 2 ** level;
  const finest = Math.max(surfaceLevel, ...areaAtLevel.keys());
  let finer = 0;
  let cells = 0;
  for (let level = finest; level >= 0; level--) {
    const region = level === 0 ? volumeOf(mesh.domain) - mesh.volume : Math.max(finer + shell(level), boxVolume(mesh, level));
    cells += (region - finer) / edge(level) ** 3;
    finer = region;
  }
  for (const [level, area] of areaAtLevel) cells += (facesPerArea * area * mesh.layers * layerCover) / edge(level) ** 2;
  return Math.round(cells);

  function shell(level: number): number {
    const around = level < surfaceLevel ? mesh.boxSurface * buffer * edge(level) : 0;
    return around + (areaAtLevel.get(level) ?? 0) * (buffer + 0.5) * edge(level);
  }
}

const volumeOf = ({ min, max }: Box): number => (max[0] - min[0]) * (max[1] - min[1]) * (max[2] - min[2]);

/** The largest of the boxes of this level or finer, grown by the buffer of every level between, inside the domain, without the body. */
function boxVolume({ boxes, domain, baseCell, cellsBetweenLevels, volume }: MeshSizing, level: number): number {
  let largest = 0;
  for (const { box, level: own } of boxes) {
    if (own < level) continue;
    let grown = 0;
    for (let coarser = level; coarser < own; coarser++) grown += (cellsBetweenLevels * baseCell) / 2 ** coarser;
    const sides = [0, 1, 2].map((i) => Math.min(box.max[i] + grown, domain.max[i]) - Math.max(box.min[i] - grown, domain.min[i]));
    largest = Math.max(largest, sides[0] * sides[1] * sides[2] - volume);
  }
  return largest;
}

/** What a mesh costs: memory in bytes, seconds on one core. */
export interface MeshCost {
  memory: number;
  meshSeconds: number;
  iterationSeconds: number;
  /** Set when the body is one of many touching parts, whose layers take long to agree. */
  busy: boolean;
}

const manyTriangles = 100_000;
const manyParts = 20;
/** Seconds per million cells on one core. */
const meshing = { plain: 180, busy: 700 };
const iterating = 6;

/**
 * Cost of a mesh of so many cells. Measured with OpenFOAM v1912: the mesher's memory is 105 MB and 1.6 kB a cell and 0.65 kB a
 * triangle; meshing takes 100 to 140 s per million cells for plain bodies, 230 for a pickup with wheels, 540 to 900 for a motorcycle of
 * 67 parts; the solver 4.4 to 8.6 s per million cells and iteration.
 */
export function meshCost(cells: number, triangles: number, parts: number): MeshCost {
  const busy = triangles > manyTriangles || parts > manyParts;
  return {
    memory: Math.round(105e6 + 1600 * cells + 650 * triangles),
    meshSeconds: Number(((cells / 1e6) * (busy ? meshing.busy : meshing.plain) + 1).toPrecision(2)),
    iterationSeconds: Number(((cells / 1e6) * iterating).toPrecision(2)),
    busy,
  };
}
