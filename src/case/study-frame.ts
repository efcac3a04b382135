import { type Placement, place, placementOf, vehicleAxes } from "../geometry/place.js";
import type { Orientation, Survey } from "../geometry/survey.js";
import type { TriangleSet } from "../geometry/triangle-set.js";
import type { Box, Vector3 } from "../geometry/vector.js";
import type { Condition, Study } from "../study/study.js";
import { caseBounds, partsInside, type Side, wholeBounds, wholeFrontalArea } from "./body-in-case.js";
import { exposedSurface } from "./exposed-surface.js";
import { type BodyForGrid, cellsOf, coarserGrid, type Grid, gridFor } from "./grid.js";
import { halfOf } from "./half-model.js";
import { mostRungs } from "./ladder.js";
import type { Planned } from "./plan.js";
import { referenceArea, referenceLength, wheelbaseOf } from "./reference.js";

/** One variant as read: triangles in file unit and axes, and what is known of them. */
export interface VariantBody {
  variant: string;
  set: TriangleSet;
  survey: Survey;
}

/** What all cases of a study share, taken from the baseline. Case axes, metres. */
export interface StudyFrame {
  placement: Placement;
  half: Planned<boolean>;
  /** which side of y = 0 is computed: the right (1), the left (-1), both (0) */
  side: Side;
  /** of the whole baseline */
  bounds: Box;
  grid: Grid;
  area: Planned<number>;
  length: Planned<number>;
  wheelbase: Planned<number> | null;
}

/**
 * The frame of a study: placement, half or whole, reference, domain and grid, all from the baseline, so that a variant that comes later
 * changes nothing for those that were computed before. Only whether half a model will do depends on all of them.
 *
 * @throws Problem(input) when the study cannot be computed so: see `halfOf`, `wheelbaseOf`.
 */
export function frameOf(study: Study, bodies: VariantBody[], conditions: Condition[]): StudyFrame {
  const baseline = bodies.find(({ variant }) => variant === study.baseline)!;
  const { survey } = baseline;
  const half = halfOf(study, bodies, conditions);
  const wheelbase = wheelbaseOf(study, survey);
  const orientation: Orientation = { unit: study.body.unit, travel: study.body.travel, up: study.body.up };
  const placement = placementOf(orientation, shiftOf(orientation, survey, wheelbase !== null, study.body.clearance));
  const bounds = wholeBounds(survey, placement);
  const side: Side = !half.value ? 0 : liesLeft(survey, placement) ? -1 : 1;
  const wish = { cells: study.mesh.cells, layers: study.mesh.layers, half: half.value, shift: study.mesh.shift };
  const grid = gridFor(bodyForGrid(baseline, placement, side), wish);
  if (side === -1) mirrorDomain(grid);
  return {
    placement,
    half,
    side,
    bounds,
    grid,
    area: referenceArea(study, survey),
    length: referenceLength(wheelbase, bounds),
    wheelbase,
  };
}

/** What is predicted of one variant's mesh. */
export interface PredictedMesh {
  cells: number;
  /** Cells of the grids that are one, two, ... levels coarser, as far as there are such. */
  coarserCells: number[];
  /** m² of each part that the air reaches, by patch */
  exposed: ReadonlyMap<string, number>;
}

/** The mesh that a variant will have in the grid of the study, and in the coarser ones that it may be started from. */
export function predictedFor(study: Study, frame: StudyFrame, body: VariantBody): PredictedMesh {
  const { grid, placement, side } = frame;
  const inGrid = bodyForGrid(body, placement, side);
  const exposed = inGrid.exposed(grid.surfaceCell);
  const wish = { cells: study.mesh.cells, layers: study.mesh.layers, half: side !== 0, shift: study.mesh.shift };
  const coarserCells: number[] = [];
  for (let coarser = 1; coarser <= mostRungs; coarser++) {
    const coarse = coarserGrid(grid, coarser);
    if (coarse !== null) coarserCells.push(cellsOf(inGrid, wish, coarse, exposed));
  }
  return { cells: cellsOf(inGrid, wish, grid, exposed), coarserCells, exposed: exposed.areas };
}

function bodyForGrid({ set, survey }: VariantBody, placement: Placement, side: Side): BodyForGrid {
  const placed = place(set, placement);
  const { openEdges, nonManifoldEdges, flippedEdges } = survey.topology;
  // Where triangles do not bound closed shells that face outwards, their outer side is not known, and a sheet has air on both.
  const insideOut = survey.volume < 0 || survey.findings.some(({ code }) => code === "inside-out");
  const bothSides = insideOut || openEdges + nonManifoldEdges + flippedEdges > 0;
  return {
    bounds: wholeBounds(survey, placement),
    frontalArea: wholeFrontalArea(survey),
    parts: partsInside(survey, placement, side).map(({ patch, bounds }) => ({ patch, bounds: caseBounds(bounds, placement) })),
    exposed: (cell) => {
      const { areas, enclosed } = exposedSurface(placed, cell, { side, bothSides });
      return { areas: new Map(placed.parts.map(({ patch }, k) => [patch, areas[k]])), enclosed };
    },
  };
}

/** Moves the origin onto the ground (`clearance` below the lowest point), the mid-plane and the middle between the axles (of the body without axles). Metres. */
function shiftOf(orientation: Orientation, survey: Survey, hasAxles: boolean, clearance: number): Vector3 {
  const { rearward } = vehicleAxes(orientation);
  const turned = { ...placementOf(orientation, [0, 0, 0]), scale: 1 };
  const { min, max } = caseBounds(survey.bounds, turned);
  const front = hasAxles ? frontAxle(survey, rearward) : null;
  const middle = front !== null && survey.wheelbase !== null ? front + survey.wheelbase / 2 : (min[0] + max[0]) / 2;
  return [0 - middle, 0 - midPlane(survey, turned), clearance - min[2]];
}

/** Position of the foremost axle along the rearward direction, the mean of its wheels; null without wheels. */
function frontAxle({ wheels }: Survey, rearward: Vector3): number | null {
  if (wheels.length === 0) return null;
  const along = wheels.map(({ centre, radius }) => ({
    position: rearward[0] * centre[0] + rearward[1] * centre[1] + rearward[2] * centre[2],
    radius,
  }));
  const first = Math.min(...along.map(({ position }) => position));
  const axle = along.filter(({ position, radius }) => position - first < radius / 2);
  return axle.reduce((sum, { position }) => sum + position, 0) / axle.length;
}

/** y of the vehicle's mid-plane when the body is turned but not shifted: its symmetry plane, else mid-track, else mid-width. */
export function midPlane(survey: Survey, turned: Placement): number {
  const right = turned.rotation[1];
  // The plane is a coordinate on an axis of the file, which may point to the left.
  if (survey.symmetry.kind !== "none") return survey.symmetry.plane * (right[0] + right[1] + right[2]);
  const lateral = survey.wheels.map(({ centre }) => right[0] * centre[0] + right[1] * centre[1] + right[2] * centre[2]);
  const { min, max } = caseBounds(survey.bounds, turned);
  return lateral.length >= 2 ? (Math.min(...lateral) + Math.max(...lateral)) / 2 : (min[1] + max[1]) / 2;
}

function liesLeft(survey: Survey, placement: Placement): boolean {
  const { min, max } = caseBounds(survey.bounds, placement);
  return survey.symmetry.kind === "half" && min[1] + max[1] < 0;
}

/** A half domain is laid out around whole bounds, at y > 0; a half body on the left needs the other. */
function mirrorDomain({ domain }: Grid): void {
  if (domain.kept === "left") return;
  [domain.min[1], domain.max[1]] = [0 - domain.max[1], 0];
  domain.kept = "left";
}
