import { vehicleAxes } from "../geometry/place.js";
import type { Survey } from "../geometry/survey.js";
import type { Box, Vector3 } from "../geometry/vector.js";

/** A body as the tunnel sees it: bounds in case axes (x rearward, y right, z up, ground at z = 0), metres, and the frontal area of the whole vehicle, m². */
export interface BodyInTunnel {
  bounds: Box;
  frontalArea: number;
}

export interface DomainOptions {
  /** body lengths from the inlet to the nose */
  ahead: number;
  /** body lengths from the tail to the outlet */
  behind: number;
  /** body lengths from the outermost point of each side to the wall of that side */
  side: number;
  /** body lengths from the roof to the sky */
  top: number;
  /** greatest frontal area over cross-section of the whole tunnel; width and height grow until it holds */
  mostBlockage: number;
  /** metres: edge of the cubes of the background mesh; a fifth of the body's length, to two digits, unless given */
  baseCell: number | null;
  /** metres that the grid, and with it the inlet and the outlet, is moved rearward; less than a base cell */
  shift: number;
  /** keep one side of the plane y = 0 only */
  half: boolean;
}

/**
 * Distances in body lengths. A bluff body settled with 2.5 ahead, 5.7 behind, 1.5 to the sides and the sky at 2.2 % blockage
 * (measured with the solver); published set-ups of road vehicles use 3 to 5 ahead and 5 to 15 behind. Blockage of 1.5 % and less
 * needs no correction (common practice).
 */
export const defaultDomain: Readonly<DomainOptions> = {
  ahead: 3,
  behind: 6,
  side: 1.5,
  top: 1.5,
  mostBlockage: 0.015,
  baseCell: null,
  shift: 0,
  half: false,
};

export interface BoundingDomain extends Box {
  /** metres */
  baseCell: number;
  /** cells of the background mesh along x, y, z */
  divisions: Vector3;
  /** frontal area of the whole vehicle over the cross-section of the whole tunnel */
  blockage: number;
  /** m², whole tunnel */
  crossSection: number;
  /** metres, as they came out after rounding; side is the nearer of the two */
  distances: { ahead: number; behind: number; side: number; top: number };
  /** Factor on width and height that the blockage limit asked for; 1 when the distances were enough. */
  grown: number;
  /** The side of y = 0 that a half domain keeps; null for a whole one. */
  kept: "right" | "left" | null;
}

/**
 * Bounding domain of a body over a flat ground at z = 0, in case axes. Every face lies on a plane of the grid of cubes that is
 * anchored at the origin (or `shift` behind it), so bodies with the same base cell share one background grid. Faces are only ever moved outwards, so the
 * asked distances and the blockage limit hold after rounding.
 *
 * `body`: bounds in case axes, or a survey, which is turned into case axes (lowest point on the ground, mid-wheelbase or, without
 * axles, mid-length at x = 0; a half body counts with its mirror image). For several variants in one domain give the union of their
 * bounds and the greatest frontal area.
 *
 * A half domain keeps y >= 0, or y <= 0 when the body lies there.
 *
 * @throws RangeError for bounds without extent, areas or options that are not positive.
 */
export function boundingDomain(body: BodyInTunnel | Survey, options: Partial<DomainOptions> = {}): BoundingDomain {
  const { bounds, frontalArea } = "extents" in body ? surveyInTunnel(body) : body;
  const wanted = { ...defaultDomain, ...options };
  const length = bounds.max[0] - bounds.min[0];
  const { shift, ...positive } = wanted;
  const given = { ...positive, frontalArea, length, width: bounds.max[1] - bounds.min[1], roof: bounds.max[2] };
  for (const [name, value] of Object.entries(given))
    if (typeof value === "number" && !(value > 0 && Number.isFinite(value)))
      throw new RangeError(`${name} is ${value}, must be positive`);
  const baseCell = wanted.baseCell ?? Number((length / 5).toPrecision(2));

  // The tunnel is symmetric about y = 0 whatever the body: with the farther side at the asked distance, the nearer has more.
  const outermost = Math.max(Math.abs(bounds.min[1]), Math.abs(bounds.max[1]));
  const halfWidth = outermost + wanted.side * length;
  const height = bounds.max[2] + wanted.top * length;
  const grown = Math.max(1, Math.sqrt(frontalArea / (2 * halfWidth * height) / wanted.mostBlockage));

  const first: Vector3 = [
    -cellsUpTo(shift - (bounds.min[0] - wanted.ahead * length), baseCell),
    -cellsUpTo(grown * halfWidth, baseCell),
    0,
  ];
  const last: Vector3 = [
    cellsUpTo(bounds.max[0] + wanted.behind * length - shift, baseCell),
    cellsUpTo(grown * halfWidth, baseCell),
    cellsUpTo(grown * height, baseCell),
  ];
  const crossSection = (last[1] - first[1]) * last[2] * baseCell ** 2;
  const kept = !wanted.half ? null : bounds.max[1] <= 1e-6 * length ? "left" : "right";
  if (kept === "right") first[1] = 0;
  if (kept === "left") last[1] = 0;
  // 0 + ... turns -0 into 0.
  const anchor = [shift, 0, 0];
  const min = first.map((cells, axis) => anchor[axis]! + cells * baseCell) as Vector3;
  const max = last.map((cells, axis) => anchor[axis]! + cells * baseCell) as Vector3;
  return {
    min,
    max,
    baseCell,
    divisions: [last[0] - first[0], last[1] - first[1], last[2] - first[2]],
    blockage: frontalArea / crossSection,
    crossSection,
    distances: {
      ahead: bounds.min[0] - min[0],
      behind: max[0] - bounds.max[0],
      side: (kept === "left" ? -min[1] : max[1]) - outermost,
      top: max[2] - bounds.max[2],
    },
    grown,
    kept,
  };
}

/** Whole cells that reach at least as far as `distance`; a face that is on a grid plane but for rounding errors stays there. */
const cellsUpTo = (distance: number, cell: number): number => Math.ceil(distance / cell - 1e-9);

/** Bounds of a surveyed body in case axes, a half body completed by its mirror image. */
function surveyInTunnel(survey: Survey): BodyInTunnel {
  const { rearward } = vehicleAxes(survey.axes);
  const { length, width, height } = survey.extents;
  const along = (point: Vector3): number => rearward[0] * point[0] + rearward[1] * point[1] + rearward[2] * point[2];
  const nose = Math.min(along(survey.bounds.min), along(survey.bounds.max));
  const axles = survey.wheels.map((wheel) => along(wheel.centre));
  const origin = survey.wheelbase === null ? nose + length / 2 : (Math.min(...axles) + Math.max(...axles)) / 2;
  const half = survey.symmetry.kind === "half";
  const reach = half ? width : width / 2;
  return {
    bounds: { min: [nose - origin, -reach, 0], max: [nose - origin + length, reach, height] },
    frontalArea: (half ? 2 : 1) * survey.frontalArea.value,
  };
}
