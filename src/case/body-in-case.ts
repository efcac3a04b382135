import { type Placement, placePoint } from "../geometry/place.js";
import type { PartSurvey, Survey } from "../geometry/survey.js";
import type { Box, Vector3 } from "../geometry/vector.js";

/** Which side of the plane y = 0 is computed: right (1), left (-1) or both (0). */
export type Side = 1 | -1 | 0;

/** Bounds of a survey (metres, file axes) in case axes. */
export function caseBounds(bounds: Box, placement: Placement): Box {
  const inMetres = { ...placement, scale: 1 };
  const a = placePoint(bounds.min, inMetres);
  const b = placePoint(bounds.max, inMetres);
  const each = (pick: (x: number, y: number) => number): Vector3 => [pick(a[0], b[0]), pick(a[1], b[1]), pick(a[2], b[2])];
  return { min: each(Math.min), max: each(Math.max) };
}

/** Bounds of the whole vehicle in case axes: half a body is completed by its mirror image. */
export function wholeBounds(survey: Survey, placement: Placement): Box {
  const { min, max } = caseBounds(survey.bounds, placement);
  if (survey.symmetry.kind !== "half") return { min, max };
  const reach = Math.max(Math.abs(min[1]), Math.abs(max[1]));
  return { min: [min[0], -reach, min[2]], max: [max[0], reach, max[2]] };
}

/** m², of the whole vehicle */
export const wholeFrontalArea = (survey: Survey): number => (survey.symmetry.kind === "half" ? 2 : 1) * survey.frontalArea.value;

/** Body lengths that a part must reach into the computed side to have a patch there: 5 mm on a car. */
const leastReach = 1e-3;

/** The parts that lie, as a whole or in part, on the computed side; parts without triangles have no place at all. */
export function partsInside(survey: Survey, placement: Placement, side: Side): PartSurvey[] {
  const parts = survey.parts.filter(({ triangles }) => triangles > 0);
  if (side === 0) return parts;
  const least = leastReach * survey.extents.length;
  return parts.filter((part) => {
    const { min, max } = caseBounds(part.bounds, placement);
    return side === 1 ? max[1] > least : min[1] < -least;
  });
}
