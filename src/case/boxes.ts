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

/** Proportions of the mesh whose drag was within 2 % of the published one on a bluff body (measured with v1912), a little tighter for cell budgets of a laptop. */
const rules: BoxRule[] = [
  { name: "near", below: 1, ahead: 0.12, behind: 0.6, around: 0.08 },
  { name: "wake", below: 2, ahead: 0.35, behind: 1.2, around: 0.2 },
  { name: "far", below: 3, ahead: 0.8, behind: 2, around: 0.45 },
];

/**
 * Refinement boxes around a body and its wake, standing on the ground, in case axes. `body` is the box that holds every variant, so all
 * variants get the same boxes.
 */
export function refinementBoxes(body: Box, surfaceLevel: number): RefinementBox[] {
  const length = body.max[0] - body.min[0];
  return rules
    .filter(({ below }) => surfaceLevel - below >= 1)
    .map(({ name, below, ahead, behind, around }) => ({
      name,
      level: surfaceLevel - below,
      box: {
        // Below the ground there is no mesh: reaching under it keeps the cells at the ground inside the box.
        min: [body.min[0] - ahead * length, body.min[1] - around * length, -around * length],
        max: [body.max[0] + behind * length, body.max[1] + around * length, body.max[2] + around * length],
      },
    }));
}
