import type { Box } from "../geometry/vector.js";
import type { RefinementBox } from "./plan.js";

interface BoxRule {
  name: string;
  /** levels below the surface level */
  below: number;
  /** in body lengths: ahead of the nose, behind the tail, beside and above the body */
  ahead: number;
  behind: number;
  around: number;
}

/**
 * Distances in body lengths: after a bluff body that settled within 2 % of its published drag in such boxes (measured with the
 * solver), whose wake runs about one body length.
 */
const rules: BoxRule[] = [
  { name: "near-body", below: 1, ahead: 0.12, behind: 0.6, around: 0.08 },
  { name: "near-wake", below: 2, ahead: 0.35, behind: 1.2, around: 0.2 },
  { name: "far-wake", below: 3, ahead: 0.8, behind: 2, around: 0.45 },
];

/**
 * Refinement boxes around a body and its wake, standing on the ground, case axes, metres. `body`: bounds of the whole baseline, so
 * that all variants have the same boxes. Levels below 1 are the background mesh and need no box.
 */
export function refinementBoxes(body: Box, surfaceLevel: number): RefinementBox[] {
  const length = body.max[0] - body.min[0];
  return rules
    .filter(({ below }) => surfaceLevel - below >= 1)
    .map(({ name, below, ahead, behind, around }) => ({
      name,
      level: surfaceLevel - below,
      box: {
        // Reaching under the ground keeps the cells that stand on it inside the box, whatever the rounding.
        min: rounded([body.min[0] - ahead * length, body.min[1] - around * length, -around * length]),
        max: rounded([body.max[0] + behind * length, body.max[1] + around * length, body.max[2] + around * length]),
      },
    }));
}

/** Whole centimetres on a car, read more easily and no less right. */
const rounded = (point: [number, number, number]): [number, number, number] => [
  Number(point[0].toFixed(2)),
  Number(point[1].toFixed(2)),
  Number(point[2].toFixed(2)),
];
