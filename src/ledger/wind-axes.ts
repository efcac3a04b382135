import type { PartSeries } from "./part-series.js";

/**
 * Drag along the oncoming air and side force to its right, row by row, from drag and side force along the vehicle's own axes (x
 * rearward, y right): the frame is turned about z by the yaw (radians, positive with the air from the left). Null at zero yaw, where
 * both are the same, and where the side force is not known.
 */
export function windAxes({ cd, cs }: PartSeries, yaw: number): { drag: Float64Array; side: Float64Array } | null {
  if (yaw === 0 || cs === null) return null;
  const [c, s] = [Math.cos(yaw), Math.sin(yaw)];
  return {
    drag: cd.map((value, row) => c * value + s * cs[row]),
    side: cd.map((value, row) => c * cs[row] - s * value),
  };
}
