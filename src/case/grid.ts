import { type BoundingDomain, boundingDomain } from "../flow/domain.js";
import type { Box } from "../geometry/vector.js";
import { refinementBoxes } from "./boxes.js";
import type { RefinementBox } from "./plan.js";
import { predictCells } from "./sizing.js";

/** A body as the grid sees it, case axes, metres, whole vehicle. */
export interface BodyForGrid {
  /** holds every variant */
  bounds: Box;
  /** m², the greatest of the variants */
  frontalArea: number;
  /** of the baseline */
  volume: number;
  parts: { patch: string; area: number; bounds: Box }[];
}

export interface Grid {
  domain: BoundingDomain;
  surfaceLevel: number;
  boxes: RefinementBox[];
  /** level of each part by patch */
  levels: Map<string, number>;
  cells: number;
}

export interface GridWish {
  cells: number;
  layers: number;
  half: boolean;
}

export const cellsBetweenLevels = 2;

/** A part counts as small when its middle extent is less than this many surface cells: it gets cells of half the size. */
const smallPartCells = 8;

/**
 * The grid of a study for a budget of cells: the surface cell is found by bisection so that the predicted count of the baseline meets
 * the budget; the background cube is near a fifth of the body's length and the surface cell times a power of two.
 */
export function gridFor(body: BodyForGrid, wish: GridWish): Grid {
  const length = body.bounds.max[0] - body.bounds.min[0];
  let [fine, coarse] = [length / 4000, length / 10];
  for (let step = 0; step < 60; step++) {
    const middle = Math.sqrt(fine * coarse);
    if (gridOf(body, wish, middle).cells > wish.cells) fine = middle;
    else coarse = middle;
  }
  return gridOf(body, wish, coarse);
}

/** The grid whose surface cells have an edge of `cell` metres at most, to two digits of the background cube. */
function gridOf(body: BodyForGrid, wish: GridWish, cell: number): Grid {
  const length = body.bounds.max[0] - body.bounds.min[0];
  const surfaceLevel = Math.max(1, Math.round(Math.log2(length / 5 / cell)));
  const baseCell = Number((cell * 2 ** surfaceLevel).toPrecision(2));
  const domain = boundingDomain({ bounds: body.bounds, frontalArea: body.frontalArea }, { baseCell, half: wish.half });
  const boxes = refinementBoxes(body.bounds, surfaceLevel);
  const surfaceCell = baseCell / 2 ** surfaceLevel;
  const levels = new Map(body.parts.map((part) => [part.patch, surfaceLevel + (isSmall(part.bounds, surfaceCell) ? 1 : 0)]));
  return { domain, surfaceLevel, boxes, levels, cells: cellsOf(body, wish, { domain, surfaceLevel, boxes, levels }) };
}

/** Predicted cells of one body in a grid that is given: a variant in the grid of its baseline. */
export function cellsOf(body: BodyForGrid, wish: GridWish, grid: Omit<Grid, "cells">): number {
  const share = wish.half ? 0.5 : 1;
  const areaAtLevel = new Map<number, number>([[grid.surfaceLevel, 0]]);
  for (const part of body.parts) {
    const level = grid.levels.get(part.patch) ?? grid.surfaceLevel;
    areaAtLevel.set(level, (areaAtLevel.get(level) ?? 0) + share * part.area);
  }
  const { min, max } = body.bounds;
  const [x, y, z] = [max[0] - min[0], max[1] - min[1], max[2] - min[2]];
  return predictCells({
    baseCell: grid.domain.baseCell,
    surfaceLevel: grid.surfaceLevel,
    domain: grid.domain,
    boxes: grid.boxes,
    areaAtLevel,
    volume: share * Math.abs(body.volume),
    boxSurface: share * 2 * (x * y + y * z) + (wish.half ? 1 : 2) * x * z,
    cellsBetweenLevels,
    layers: wish.layers,
  });
}

function isSmall({ min, max }: Box, surfaceCell: number): boolean {
  const extents = [0, 1, 2].map((i) => max[i] - min[i]).sort((a, b) => a - b);
  return extents[1] < smallPartCells * surfaceCell;
}
