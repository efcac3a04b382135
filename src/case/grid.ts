import { type BoundingDomain, boundingDomain } from "../flow/domain.js";
import type { Box } from "../geometry/vector.js";
import { refinementBoxes } from "./boxes.js";
import type { ExposedSurface } from "./exposed-surface.js";
import type { RefinementBox } from "./plan.js";
import { predictCells } from "./sizing.js";

/** A body as the grid sees it, case axes, metres. */
export interface BodyForGrid {
  /** of the whole vehicle */
  bounds: Box;
  /** m², of the whole vehicle */
  frontalArea: number;
  /** Parts inside the domain; a part outside it has no entry. */
  parts: { patch: string; bounds: Box }[];
  /** m² by patch and m³, as cells of so many metres see them; inside the domain only (a half model's half). */
  exposed: (cell: number) => { areas: ReadonlyMap<string, number> } & Pick<ExposedSurface, "enclosed">;
}

export interface Grid {
  domain: BoundingDomain;
  surfaceLevel: number;
  /** m */
  surfaceCell: number;
  boxes: RefinementBox[];
  /** Levels of the baseline's parts by patch; a variant's part of the same name has the same. */
  levels: ReadonlyMap<string, number>;
  /** m: a part that the baseline does not have is refined one level further when its middle extent is below this */
  smallBelow: number;
  cells: number;
}

export interface GridWish {
  /** of one case as it is computed */
  cells: number;
  layers: number;
  half: boolean;
  /** of the grid rearward, as a share of a base cell */
  shift: number;
}

export const cellsBetweenLevels = 2;

/** Surface cells across the middle extent of a part below which it counts as small. */
export const smallPartCells = 8;
/** Share of the surface that small parts may have together: doubled resolution costs four to eight times the cells there. */
export const mostSmallShare = 0.05;

/**
 * The grid of a study for a budget of cells. The surface cell is found by bisection so that the count predicted for the baseline
 * meets the budget; the background cube is the surface cell times a power of two, the one nearest to a fifth of the body's length.
 */
export function gridFor(body: BodyForGrid, wish: GridWish): Grid {
  const length = body.bounds.max[0] - body.bounds.min[0];
  const first = solve(body, wish, body.exposed(length / 100), length);
  // Gaps that the first look filled, or saw, may be open, or closed, for the cells that came out.
  return solve(body, wish, body.exposed(first.surfaceCell), length);
}

type Exposed = ReturnType<BodyForGrid["exposed"]>;

function solve(body: BodyForGrid, wish: GridWish, exposed: Exposed, length: number): Grid {
  let [fine, coarse] = [length / 4000, length / 10];
  for (let step = 0; step < 40; step++) {
    const middle = Math.sqrt(fine * coarse);
    if (gridOf(body, wish, exposed, middle).cells > wish.cells) fine = middle;
    else coarse = middle;
  }
  return gridOf(body, wish, exposed, coarse);
}

function gridOf(body: BodyForGrid, wish: GridWish, exposed: Exposed, wanted: number): Grid {
  const length = body.bounds.max[0] - body.bounds.min[0];
  const surfaceLevel = Math.max(1, Math.round(Math.log2(length / 5 / wanted)));
  const baseCell = Number((wanted * 2 ** surfaceLevel).toPrecision(3));
  const surfaceCell = baseCell / 2 ** surfaceLevel;
  const grid = {
    domain: boundingDomain(
      { bounds: body.bounds, frontalArea: body.frontalArea },
      { baseCell, shift: wish.shift * baseCell, half: wish.half },
    ),
    surfaceLevel,
    surfaceCell,
    boxes: refinementBoxes(body.bounds, surfaceLevel),
    ...partLevels(body, exposed, surfaceLevel, surfaceCell),
  };
  return { ...grid, cells: cellsOf(body, wish, grid, exposed) };
}

/**
 * The same grid with all cells on and around the body so many times twice as large; domain and background stay. Null when the body would
 * then lie in background cells.
 */
export function coarserGrid(grid: Grid, coarser: number): Omit<Grid, "cells"> | null {
  const surfaceLevel = grid.surfaceLevel - coarser;
  if (surfaceLevel < 1) return null;
  return {
    domain: grid.domain,
    surfaceLevel,
    surfaceCell: grid.surfaceCell * 2 ** coarser,
    boxes: coarserBoxes(grid.boxes, coarser),
    levels: new Map([...grid.levels].map(([patch, level]) => [patch, level - coarser])),
    smallBelow: grid.smallBelow,
  };
}

/** Boxes whose cells would be those of the background are none. */
export const coarserBoxes = (boxes: RefinementBox[], coarser: number): RefinementBox[] =>
  boxes.map((box) => ({ ...box, level: box.level - coarser })).filter(({ level }) => level >= 1);

/** Predicted cells of one body in a grid that is given: a variant in the grid of its baseline. */
export function cellsOf(
  body: Pick<BodyForGrid, "bounds" | "parts">,
  wish: GridWish,
  grid: Omit<Grid, "cells">,
  exposed: Exposed,
): number {
  const areaAtLevel = new Map<number, number>([[grid.surfaceLevel, 0]]);
  for (const part of body.parts) {
    const { patch } = part;
    const level = levelOf(part, grid);
    areaAtLevel.set(level, (areaAtLevel.get(level) ?? 0) + (exposed.areas.get(patch) ?? 0));
  }
  const { min, max } = body.bounds;
  const [x, y, z] = [max[0] - min[0], max[1] - min[1], max[2] - min[2]];
  return predictCells({
    baseCell: grid.domain.baseCell,
    surfaceLevel: grid.surfaceLevel,
    domain: grid.domain,
    boxes: grid.boxes,
    areaAtLevel,
    volume: exposed.enclosed,
    boxSurface: wish.half ? x * y + y * z + x * z : 2 * (x * y + y * z + x * z),
    cellsBetweenLevels,
    layers: wish.layers,
  });
}

/** Refinement level of a part of any variant. */
export function levelOf(part: { patch: string; bounds: Box }, grid: Pick<Grid, "levels" | "smallBelow" | "surfaceLevel">): number {
  return grid.levels.get(part.patch) ?? grid.surfaceLevel + (middleExtent(part.bounds) < grid.smallBelow ? 1 : 0);
}

/** Small parts get one level more, the smallest first, as long as all of them together stay a small share of the surface. */
function partLevels(
  { parts }: BodyForGrid,
  { areas }: Exposed,
  surfaceLevel: number,
  surfaceCell: number,
): Pick<Grid, "levels" | "smallBelow"> {
  const total = parts.reduce((sum, { patch }) => sum + (areas.get(patch) ?? 0), 0);
  let smallBelow = smallPartCells * surfaceCell;
  let share = 0;
  for (const part of parts.toSorted((a, b) => middleExtent(a.bounds) - middleExtent(b.bounds))) {
    share += (areas.get(part.patch) ?? 0) / total;
    if (share > mostSmallShare) smallBelow = Math.min(smallBelow, middleExtent(part.bounds));
  }
  const levels = new Map(
    parts.map(({ patch, bounds }) => [patch, surfaceLevel + (middleExtent(bounds) < smallBelow ? 1 : 0)] as const),
  );
  return { levels, smallBelow };
}

/** m: the second longest side of the box around a part */
const middleExtent = ({ min, max }: Box): number => [0, 1, 2].map((i) => max[i] - min[i]).sort((a, b) => a - b)[1];
