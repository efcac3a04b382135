import type { Vector3 } from "../geometry/vector.js";
import type { ForceObject, VectorSeries } from "./force-objects.js";
import type { Reference } from "./ledger.js";
import { forcePerCoefficient } from "./reference.js";

/** Coefficients of one part or of the whole, of the whole vehicle, one value per row. Null: not recorded. */
export interface PartSeries {
  name: string;
  patches: string[] | null;
  time: Float64Array;
  cd: Float64Array;
  cl: Float64Array;
  cs: Float64Array | null;
  /** nose-up, about the reference centre, on the reference length */
  cm: Float64Array | null;
  cdPressure: Float64Array | null;
  cdFriction: Float64Array | null;
}

/** Unit vectors of the run: drag along the flow, lift up. */
export interface Directions {
  drag: Vector3;
  lift: Vector3;
  /** lift x drag: to the right of travel, the axis of a nose-up moment; null when drag and lift are written along one line */
  pitch: Vector3 | null;
}

/** What turns the tables of a run into coefficients. */
export interface RunReference {
  reference: Reference;
  axes: Directions;
  /** kg/m³ that the force table of an object was written with; null when it cannot be known */
  writtenDensity(object: ForceObject): number | null;
}

const cross = (a: Vector3, b: Vector3): Vector3 => [
  a[1] * b[2] - a[2] * b[1],
  a[2] * b[0] - a[0] * b[2],
  a[0] * b[1] - a[1] * b[0],
];

const dot = (a: Vector3, b: Vector3): number => a[0] * b[0] + a[1] * b[1] + a[2] * b[2];

/** Sine of the angle between drag and lift below which they say nothing about the side. */
const smallestSine = 1e-3;

export function directionsOf(drag: Vector3, lift: Vector3): Directions {
  const pitch = cross(lift, drag);
  const size = Math.hypot(...pitch);
  const known = size > smallestSine * Math.hypot(...drag) * Math.hypot(...lift);
  return { drag, lift, pitch: known ? (pitch.map((x) => x / size) as Vector3) : null };
}

function along([x, y, z]: VectorSeries, direction: Vector3, factor: number): Float64Array {
  const values = new Float64Array(x.length);
  for (let row = 0; row < values.length; row++)
    values[row] = factor * (direction[0] * x[row] + direction[1] * y[row] + direction[2] * z[row]);
  return values;
}

const scaled = (values: Float64Array, factor: number): Float64Array => values.map((value) => value * factor);

/**
 * The coefficients of an object on the run's reference. Forces are used where density, speed and area are known, since they are split
 * into pressure and friction and are axis-free; otherwise the coefficient table, scaled from its header's reference to the run's. A pitching
 * moment that only the coefficient table of the object has is taken from there.
 *
 * In a half model the side force means nothing and is left out. Moments are moved to the reference centre by M' = M + (c - c') x F. Null
 * when the object holds nothing that the reference makes sense of.
 */
export function seriesOf(object: ForceObject, name: string, run: RunReference): PartSeries | null {
  const [forces, table] = [fromForces(object, name, run), seriesOfTable(object, name, run)];
  return forces && table ? { ...forces, cm: forces.cm ?? table.cm } : (forces ?? table);
}

function fromForces(object: ForceObject, name: string, { reference, axes, writtenDensity }: RunReference): PartSeries | null {
  // Newtons in a table are those of the density it was written with, whatever the air was.
  const unit = forcePerCoefficient({ ...reference, density: writtenDensity(object) });
  if (object.forces === null || unit === null) return null;
  const factor = reference.symmetryFactor / unit;
  const { total, pressure, viscous } = object.forces;
  return {
    name,
    patches: object.patches,
    time: object.time,
    cd: along(total, axes.drag, factor),
    cl: along(total, axes.lift, factor),
    cs: reference.symmetryFactor === 2 || axes.pitch === null ? null : along(total, axes.pitch, factor),
    cm: pitchOfForces(object, reference, axes, factor),
    cdPressure: along(pressure, axes.drag, factor),
    cdFriction: along(viscous, axes.drag, factor),
  };
}

function pitchOfForces(object: ForceObject, reference: Reference, axes: Directions, factor: number): Float64Array | null {
  const { moments, forces } = object;
  const { centre, length } = reference;
  if (!moments || !forces || !axes.pitch || moments.centre === null || centre === null || length === null) return null;
  const own = along(moments.total, axes.pitch, factor / length);
  // p . (arm x F) = (p x arm) . F
  const arm: Vector3 = [moments.centre[0] - centre[0], moments.centre[1] - centre[1], moments.centre[2] - centre[2]];
  const moved = along(forces.total, cross(axes.pitch, arm), factor / length);
  return own.map((value, row) => value + moved[row]);
}

/** The coefficients of an object from its coefficient table alone; null when it has none. */
export function seriesOfTable(object: ForceObject, name: string, { reference, axes }: RunReference): PartSeries | null {
  const { coefficients } = object;
  if (coefficients === null) return null;
  const { header, cd, cl, cs, pitch } = coefficients;
  const ratio = rescale(header, reference);
  if (ratio === null) return null;
  const factor = ratio * reference.symmetryFactor;
  return {
    name,
    patches: object.patches,
    time: object.time,
    cd: scaled(cd, factor),
    cl: scaled(cl, factor),
    cs: cs === null || reference.symmetryFactor === 2 ? null : scaled(cs, factor),
    cm: pitch === null ? null : pitchOfCoefficients(coefficients, pitch, reference, axes, factor),
    cdPressure: null,
    cdFriction: null,
  };
}

/** q A of the table over q A of the run (density cancels); 1 when neither says otherwise. */
function rescale(header: { area?: number; speed?: number }, reference: Reference): number | null {
  if (reference.area === null) return null;
  const area = (header.area ?? reference.area) / reference.area;
  const speed = reference.speed === null ? 1 : (header.speed ?? reference.speed) / reference.speed;
  return area * speed ** 2;
}

/** What the header of an old table does not say is taken to be the run's own reference, as for its area. */
function pitchOfCoefficients(
  { cd, cl, header }: NonNullable<ForceObject["coefficients"]>,
  pitch: Float64Array,
  reference: Reference,
  axes: Directions,
  factor: number,
): Float64Array | null {
  const { centre, length } = reference;
  if (!axes.pitch || centre === null || length === null) return null;
  const written = { centre: header.centre ?? centre, length: header.length ?? length };
  // The table's axis may point either way.
  const sign = header.pitch === undefined || dot(header.pitch, axes.pitch) >= 0 ? 1 : -1;
  const arm: Vector3 = [written.centre[0] - centre[0], written.centre[1] - centre[1], written.centre[2] - centre[2]];
  const lever = cross(axes.pitch, arm);
  const perDrag = dot(lever, axes.drag);
  const perLift = dot(lever, axes.lift);
  const own = (factor * sign * written.length) / length;
  return pitch.map((value, row) => own * value + (factor / length) * (perDrag * cd[row] + perLift * cl[row]));
}
