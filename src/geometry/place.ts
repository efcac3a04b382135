import { inputProblem } from "../errors.js";
import type { LengthUnit, Orientation, SignedAxis } from "./survey.js";
import type { TriangleSet } from "./triangle-set.js";
import type { Vector3 } from "./vector.js";

/** How file coordinates become case coordinates: x_case = scale · rotation · x_file + shift. Case axes: x rearward, y right, z up, metres. */
export interface Placement {
  orientation: Orientation;
  /** metres per unit of the file */
  scale: number;
  /** Rows: the case axes in file axes. A proper rotation. */
  rotation: [Vector3, Vector3, Vector3];
  /** metres, case axes */
  shift: Vector3;
}

/** Metres per unit, exact by definition (international inch and foot, 1959). */
export const metresPer: Record<LengthUnit, number> = { m: 1, mm: 0.001, cm: 0.01, in: 0.0254, ft: 0.3048 };

/** Unit vector of a signed axis. */
export function axisVector(axis: SignedAxis): Vector3 {
  const vector: Vector3 = [0, 0, 0];
  vector["xyz".indexOf(axis[1])] = axis[0] === "-" ? -1 : 1;
  return vector;
}

/** The vehicle's own directions in file axes: rearward, right and up. Right-handed in this order (SAE J1594). */
export function vehicleAxes(orientation: Pick<Orientation, "travel" | "up">): { rearward: Vector3; right: Vector3; up: Vector3 } {
  const { travel, up } = orientation;
  if (travel[1] === up[1])
    throw inputProblem({
      code: "axes-parallel",
      message: `The direction of travel (${travel}) and up (${up}) lie on one axis.`,
      remedy: "Give two different axes, such as travel -x and up +z.",
    });
  const rearward = axisVector(travel).map((value) => 0 - value) as Vector3;
  const z = axisVector(up);
  const right: Vector3 = [
    z[1] * rearward[2] - z[2] * rearward[1],
    z[2] * rearward[0] - z[0] * rearward[2],
    z[0] * rearward[1] - z[1] * rearward[0],
  ];
  return { rearward, right: right.map((value) => value + 0) as Vector3, up: z };
}

/**
 * The placement that turns a body from file axes into case axes and its unit into metres, then shifts it (metres, case axes).
 *
 * @throws Problem(input) `axes-parallel`.
 */
export function placementOf(orientation: Orientation, shift: Vector3): Placement {
  const { rearward, right, up } = vehicleAxes(orientation);
  return { orientation, scale: metresPer[orientation.unit], rotation: [rearward, right, up], shift };
}

/** A point of the file (file unit and axes) in case axes, metres. */
export function placePoint([x, y, z]: Vector3, { scale, rotation, shift }: Omit<Placement, "orientation">): Vector3 {
  const along = (k: number): number => scale * (rotation[k][0] * x + rotation[k][1] * y + rotation[k][2] * z) + shift[k];
  return [along(0), along(1), along(2)];
}

/** A direction of the file in case axes; keeps its length. */
export function placeDirection([x, y, z]: Vector3, { rotation }: Pick<Placement, "rotation">): Vector3 {
  const along = (k: number): number => rotation[k][0] * x + rotation[k][1] * y + rotation[k][2] * z;
  return [along(0), along(1), along(2)];
}

/** A point in case axes (metres) back in the file's unit and axes: the inverse of `placePoint`. */
export function fileMetres(point: Vector3, { rotation, shift }: Pick<Placement, "rotation" | "shift">): Vector3 {
  const d: Vector3 = [point[0] - shift[0], point[1] - shift[1], point[2] - shift[2]];
  const back = (k: number): number => rotation[0][k] * d[0] + rotation[1][k] * d[1] + rotation[2][k] * d[2];
  return [back(0), back(1), back(2)];
}

/** The whole body in case axes, metres; parts, files and findings are those of `set`. Computed in doubles, rounded once to float32. */
export function place(set: TriangleSet, placement: Placement): TriangleSet {
  const { scale, rotation, shift } = placement;
  const source = set.positions;
  const positions = new Float32Array(source.length);
  for (let row = 0; row < 3; row++) {
    const [rx, ry, rz] = rotation[row];
    for (let at = 0; at < source.length; at += 3)
      positions[at + row] = scale * (rx * source[at] + ry * source[at + 1] + rz * source[at + 2]) + shift[row];
  }
  return { ...set, positions };
}
