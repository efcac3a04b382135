import type { Vector3 } from "../geometry/vector.js";

/** The oncoming air as the vehicle sees it. Case axes: x rearward, y right, z up. */
export interface OnsetFlow {
  /** m/s: velocity of the air relative to the vehicle */
  velocity: Vector3;
  /** m/s: speed of the road relative to the vehicle, rearward */
  road: number;
  /** Unit vectors of the wind axes: along the air, and to its right. */
  along: Vector3;
  across: Vector3;
}

/**
 * Air that meets the vehicle with `speed` (m/s, the one that coefficients are made with) at an angle `yaw` (radians) to its axis,
 * positive when it comes from the left. The road moves with the air's component along the vehicle: the side component is a pure
 * cross wind. Level and road as in SAE J1594 (axes) and J1252 (yaw from the resultant of vehicle and cross wind); from memory.
 */
export function onsetFlow({ speed, yaw }: { speed: number; yaw: number }): OnsetFlow {
  if (yaw === 0) return { velocity: [speed, 0, 0], road: speed, along: [1, 0, 0], across: [0, 1, 0] };
  const [c, s] = [Math.cos(yaw), Math.sin(yaw)];
  return { velocity: [speed * c, speed * s, 0], road: speed * c, along: [c, s, 0], across: [-s, c, 0] };
}
