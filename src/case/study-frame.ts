import { inputProblem } from "../errors.js";
import { type Placement, placeDirection, placementOf, placePoint, vehicleAxes } from "../geometry/place.js";
import type { Orientation, Survey } from "../geometry/survey.js";
import type { TriangleSet } from "../geometry/triangle-set.js";
import type { Box, Vector3 } from "../geometry/vector.js";
import type { Study } from "../study/study.js";
import { type BodyForGrid, type Grid, gridFor } from "./grid.js";
import type { Planned } from "./plan.js";

/** One variant as read: triangles in file axes, and what is known of them. */
export interface VariantBody {
  variant: string;
  set: TriangleSet;
  survey: Survey;
}

/** What all cases of a study share, taken from the baseline. Case axes, metres, whole vehicle. */
export interface StudyFrame {
  placement: Placement;
  half: Planned<boolean>;
  /** 1: the half at y > 0 is computed; -1: the other; 0: both */
  side: 1 | -1 | 0;
  /** holds every variant */
  bounds: Box;
  grid: Grid;
  area: Planned<number>;
  length: Planned<number>;
  wheelbase: Planned<number> | null;
}

/**
 * The frame of a study. Throws an input problem when the variants cannot share one: a body that is not symmetric in a half model, half
 * and whole bodies together, no wheelbase to be found.
 */
export function frameOf(study: Study, bodies: VariantBody[]): StudyFrame {
  const baseline = bodies.find((body) => body.variant === study.baseline) ?? bodies[0]!;
  const orientation: Orientation = { unit: study.body.unit, travel: study.body.travel, up: study.body.up };
  const half = halfOf(study, bodies);
  const wheelbase = wheelbaseOf(study, baseline.survey);
  const placement = placementOf(orientation, shiftOf(orientation, baseline.survey));
  const bounds = union(bodies.map((body) => wholeBounds(body.survey, placement)));
  const area = areaOf(study, baseline.survey);
  const frontalArea = Math.max(...bodies.map((body) => wholeFrontalArea(body.survey)));
  const { cells, layers } = study.mesh;
  const grid = gridFor({ ...bodyForGrid(baseline.survey, placement), bounds, frontalArea }, { cells, layers, half: half.value });
  const side = !half.value ? 0 : isLeftHalf(baseline.survey, placement) ? -1 : 1;
  if (side === -1) keepLeft(grid);
  const length: Planned<number> =
    wheelbase === null
      ? {
          value: bounds.max[0] - bounds.min[0],
          unit: "m",
          reason: "overall length: the study says that there is no wheelbase, so moments have no axles to refer to",
          source: "study file",
        }
      : { ...wheelbase, reason: `moments refer to the wheelbase: ${wheelbase.reason}`, source: "SAE J1594" };
  return { placement, half, side, bounds, grid, area, length, wheelbase };
}

function halfOf(study: Study, bodies: VariantBody[]): Planned<boolean> {
  const wish = study.mesh.half;
  const crooked = bodies.find((body) => body.survey.symmetry.kind === "none");
  const halves = bodies.filter((body) => body.survey.symmetry.kind === "half");
  if (halves.length > 0 && halves.length < bodies.length)
    throw inputProblem({
      code: "half-and-whole",
      message: `Variant '${halves[0]!.variant}' is half a body and another variant is a whole one: they cannot share a domain.`,
      where: study.path,
      remedy: "Give all variants as halves or all as whole bodies.",
    });
  if (wish === true && crooked)
    throw inputProblem({
      code: "not-symmetric",
      message: `mesh.half is yes, but variant '${crooked.variant}' is not mirror symmetric (deviation ${crooked.survey.symmetry.deviation.toPrecision(2)} m).`,
      where: study.path,
      remedy: "Compute the whole body (mesh.half: no), or make both sides alike.",
    });
  if (wish === false && halves.length > 0)
    throw inputProblem({
      code: "half-body",
      message: `mesh.half is no, but variant '${halves[0]!.variant}' is half a body: all of it lies on one side of a plane.`,
      where: study.path,
      remedy: "Set mesh.half to auto or yes, or give the whole body.",
    });
  if (wish !== "auto") return { value: wish, unit: "", reason: "asked for", source: "study file" };
  return crooked
    ? { value: false, unit: "", reason: `variant '${crooked.variant}' is not mirror symmetric`, source: "geometry" }
    : {
        value: true,
        unit: "",
        reason: "all variants are mirror symmetric and the flow comes from ahead: half the cells, half the time",
        source: "geometry",
      };
}

function wheelbaseOf(study: Study, baseline: Survey): Planned<number> | null {
  const { wheelbase } = study.body;
  if (wheelbase === "none") return null;
  if (wheelbase !== "auto") return { value: wheelbase, unit: "m", reason: "given", source: "study file" };
  if (baseline.wheelbase === null)
    throw inputProblem({
      code: "no-wheelbase",
      message: `body.wheelbase is auto, but no front and rear axle were found in the baseline '${study.baseline}'.`,
      where: study.path,
      remedy: "Give the wheelbase as a length, name the wheel parts in a rule with rotating: yes, or write wheelbase: none.",
    });
  return {
    value: baseline.wheelbase,
    unit: "m",
    reason: "distance of the axles fitted to the wheels of the baseline",
    source: "geometry",
  };
}

function areaOf(study: Study, baseline: Survey): Planned<number> {
  const asked = study.body.referenceArea;
  if (asked !== "auto") return { value: asked, unit: "m2", reason: "given; held for all variants", source: "study file" };
  return {
    value: wholeFrontalArea(baseline),
    unit: "m2",
    reason:
      "frontal area of the baseline (union silhouette along travel), held for all variants so that differences are differences of force",
    source: "SAE J1594",
  };
}

const wholeFrontalArea = (survey: Survey): number => (survey.symmetry.kind === "half" ? 2 : 1) * survey.frontalArea.value;

/** Moves the origin to the ground at mid-wheelbase (mid-length without axles) on the mid-plane. */
function shiftOf(orientation: Orientation, survey: Survey): Vector3 {
  const turned = turnedBounds(survey.bounds, orientation);
  const { rearward, right } = vehicleAxes(orientation);
  const along = (point: Vector3) => rearward[0] * point[0] + rearward[1] * point[1] + rearward[2] * point[2];
  const axles = survey.wheels.map((wheel) => along(wheel.centre));
  const middle = survey.wheelbase === null ? (turned.min[0] + turned.max[0]) / 2 : (Math.min(...axles) + Math.max(...axles)) / 2;
  // The plane is a coordinate along the file's own axis, which may point to the left.
  const plane = survey.symmetry.plane * (right[0] + right[1] + right[2]);
  const lateral = survey.symmetry.kind === "none" ? (turned.min[1] + turned.max[1]) / 2 : plane;
  return [0 - middle, 0 - lateral, 0 - turned.min[2]];
}

/** Bounds in metres and file axes, turned into case axes and not yet shifted. */
function turnedBounds(bounds: Box, orientation: Orientation): Box {
  const { rotation } = placementOf(orientation, [0, 0, 0]);
  return ordered(placeDirection(bounds.min, { rotation }), placeDirection(bounds.max, { rotation }));
}

/** Bounds of a survey (metres, file axes) in case axes. */
export function caseBounds(bounds: Box, { rotation, shift }: Placement): Box {
  const inMetres = { scale: 1, rotation, shift };
  return ordered(placePoint(bounds.min, inMetres), placePoint(bounds.max, inMetres));
}

/** The same of the whole vehicle: half a body is completed by its mirror image. */
function wholeBounds(survey: Survey, placement: Placement): Box {
  const { min, max } = caseBounds(survey.bounds, placement);
  if (survey.symmetry.kind !== "half") return { min, max };
  const reach = Math.max(Math.abs(min[1]), Math.abs(max[1]));
  return { min: [min[0], -reach, min[2]], max: [max[0], reach, max[2]] };
}

const isLeftHalf = (survey: Survey, placement: Placement): boolean => {
  if (survey.symmetry.kind !== "half") return false;
  const { min, max } = caseBounds(survey.bounds, placement);
  return min[1] + max[1] < 0;
};

/** The mirror image of a half domain, which is always laid out at y > 0. */
function keepLeft({ domain }: Grid): void {
  [domain.min[1], domain.max[1]] = [-domain.max[1], 0];
}

function ordered(a: Vector3, b: Vector3): Box {
  return {
    min: [Math.min(a[0], b[0]), Math.min(a[1], b[1]), Math.min(a[2], b[2])],
    max: [Math.max(a[0], b[0]), Math.max(a[1], b[1]), Math.max(a[2], b[2])],
  };
}

function union(boxes: Box[]): Box {
  const end = (pick: (...values: number[]) => number, key: "min" | "max"): Vector3 => [
    pick(...boxes.map((box) => box[key][0])),
    pick(...boxes.map((box) => box[key][1])),
    pick(...boxes.map((box) => box[key][2])),
  ];
  return { min: end(Math.min, "min"), max: end(Math.max, "max") };
}

/** What the grid needs to know of a body, of the whole vehicle. */
export function bodyForGrid(survey: Survey, placement: Placement): BodyForGrid {
  const twice = survey.symmetry.kind === "half" ? 2 : 1;
  return {
    bounds: wholeBounds(survey, placement),
    frontalArea: wholeFrontalArea(survey),
    volume: twice * survey.volume,
    parts: survey.parts.map((part) => ({ patch: part.patch, area: twice * part.area, bounds: caseBounds(part.bounds, placement) })),
  };
}
