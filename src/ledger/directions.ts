import { type Finding, finding } from "../finding.js";
import type { Vector3 } from "../geometry/vector.js";
import type { ForceObject } from "./force-objects.js";
import { type Directions, directionsOf } from "./part-series.js";

/** Case axes of every case made here: x rearward, z up (SAE J1594). */
export const ownDirections: Directions = directionsOf([1, 0, 0], [0, 0, 1]);

/** Header directions of two tables that only differ by printing. */
const printed = 1e-5;

const size = (vector: Vector3): number => Math.hypot(...vector);

const differ = (a: Vector3, b: Vector3): boolean => Math.hypot(a[0] - b[0], a[1] - b[1], a[2] - b[2]) > printed * size(a);

/**
 * Which way drag and lift point in a case made elsewhere: as the first coefficient table says. Tables that say otherwise and hold no
 * forces cannot be added to it and are left out; without any table x is taken rearward and z up, with a warning.
 */
export function statedDirections(objects: readonly ForceObject[]): {
  axes: Directions;
  objects: ForceObject[];
  findings: Finding[];
} {
  const stated = objects.find((object) => object.coefficients?.header.drag && object.coefficients.header.lift);
  const { drag, lift } = stated?.coefficients?.header ?? {};
  if (!stated || !drag || !lift)
    return {
      axes: ownDirections,
      objects: [...objects],
      findings: [
        finding(
          "directions-assumed",
          "warning",
          "No table says which way drag and lift point: drag is taken along +x, lift along +z.",
          "Compare with the inlet of the case before using the numbers.",
        ),
      ],
    };
  const axes = directionsOf(drag, lift);
  const findings: Finding[] = [];
  if (axes.pitch === null)
    findings.push(
      finding(
        "directions-parallel",
        "warning",
        `The tables take drag along (${drag.join(" ")}) and lift along (${lift.join(" ")}), one line: side force and pitching moment cannot be told.`,
        "Set liftDir upwards in the force object and run on.",
        { part: stated.name },
      ),
    );
  const used: ForceObject[] = [];
  for (const object of objects) {
    const own = object.coefficients?.header;
    const other = (own?.drag && differ(drag, own.drag)) || (own?.lift && differ(lift, own.lift));
    if (!other) used.push(object);
    else if (object.forces) used.push({ ...object, coefficients: null });
    else
      findings.push(
        finding(
          "directions-differ",
          "warning",
          `has a drag or lift direction of its own, unlike ${stated.name}: its coefficients cannot be added and are left out.`,
          "Give all force objects the same dragDir and liftDir.",
          { part: object.name },
        ),
      );
  }
  return { axes, objects: used, findings };
}

/** Drag or lift runs along no axis of the case, so each is a difference of printed numbers that may be larger than it. */
export function areOblique({ drag, lift }: Directions): boolean {
  const along = (direction: Vector3) => direction.filter((part) => Math.abs(part) > printed * size(direction)).length === 1;
  return !along(drag) || !along(lift);
}
