import { type Finding, finding } from "../../finding.js";
import type { Measures } from "../measures.js";
import type { Part, TriangleSet } from "../triangle-set.js";
import type { Vector3 } from "../vector.js";
import type { AxesGuess } from "../vehicle/orientation.js";
import { leastLength, mostLength, type UnitGuess } from "../vehicle/unit-guess.js";
import type { VehicleAxes, WheelFit } from "../vehicle/wheels.js";

/** Names for a message: twelve at most. */
export function listedNames(names: string[]): string {
  const shown = names.slice(0, 12).join(", ");
  return names.length > 12 ? `${shown} and ${names.length - 12} more` : shown || "none";
}

/** No triangles; a size that no vehicle has (with the unit given or taken); a unit that is a guess. `metres`: greatest extent. */
export function sizeFindings(set: TriangleSet, unit: UnitGuess, given: boolean, metres: number): Finding[] {
  if (set.partOf.length === 0)
    return [
      finding(
        "no-triangles",
        "error",
        "The surface has no triangles.",
        "Export the surface again; nothing was written to the file.",
      ),
    ];
  const text = Number(metres.toPrecision(4));
  if (!(metres >= leastLength && metres <= mostLength))
    return [
      finding(
        "size-implausible",
        "error",
        `The body's greatest extent is ${text} m with ${unit.value} ${given ? "given" : "taken"} as the unit; forces, Reynolds number and mesh would be off by powers of ten.`,
        "Give the unit the file was drawn in.",
      ),
    ];
  if (!given && !unit.certain)
    return [
      finding(
        "unit-uncertain",
        "warning",
        `The unit is a guess: ${unit.basis}. A wrong unit changes every force and the mesh.`,
        "Give the unit.",
      ),
    ];
  return [];
}

/** Axes that the parts speak against, or that are a guess. */
export function axesFindings(axes: AxesGuess): Finding[] {
  const findings = axes.doubts.map((doubt) =>
    finding(
      "axes-doubtful",
      "warning",
      `Axes: ${doubt}. With wrong axes drag and lift change places or signs.`,
      "Look at the parts' bounds and correct the direction of travel or up.",
    ),
  );
  if (!axes.certain)
    findings.push(
      finding(
        "axes-uncertain",
        "warning",
        `Travel ${axes.travel} and up ${axes.up} are a guess: ${axes.basis}. With wrong axes drag and lift change places or signs.`,
        "Give the direction of travel and up, or name parts so that front and rear are plain (hood, tailgate, wheel-front-left).",
      ),
    );
  return findings;
}

/** Parts without triangles, unless all are. */
export function emptyParts(parts: Part[], groups: Measures[]): Finding[] {
  const empty = parts.filter((_, k) => groups[k].triangles === 0);
  if (empty.length === 0 || empty.length === parts.length) return [];
  return [
    finding(
      "empty-part",
      "warning",
      `${empty.length} parts have no triangles (${listedNames(empty.map((part) => part.name))}); they cannot appear in the mesh or the ledger.`,
      "Export them again, or leave them out.",
      { count: empty.length, part: empty.length === 1 ? empty[0].name : null },
    ),
  ];
}

/** Wheels that are not round, that do not turn together, or that are missing; what the axles say of the wheelbase. */
export function wheelFindings(
  parts: Part[],
  fitted: { part: number; fit: WheelFit | null; centre: Vector3 }[],
  wheels: WheelFit[],
  axles: number,
  { rearward, up }: VehicleAxes,
  scale: number,
): Finding[] {
  const findings: Finding[] = [];
  const point = (at: Vector3): Vector3 => at.map((value) => value * scale) as Vector3;
  for (const part of new Set(fitted.map((item) => item.part))) {
    const own = fitted.filter((item) => item.part === part);
    const round = wheels.filter((wheel) => wheel.part === part);
    const { name } = parts[part];
    if (round.length === 0)
      findings.push(
        finding(
          "wheel-not-round",
          "warning",
          `Part "${name}" is named as a wheel, but nothing in it is round within 3 %; no axle was found for it.`,
          "Name the parts that are wheels, or repair this one.",
          { part: name, places: own.slice(0, 10).map(({ centre }) => point(centre)) },
        ),
      );
    const apart = (a: WheelFit, b: WheelFit, axis: Vector3): number =>
      Math.abs(a.centre.reduce((sum, value, k) => sum + (value - b.centre[k]) * axis[k], 0));
    const far = round.some((wheel) => Math.max(apart(wheel, round[0], rearward), apart(wheel, round[0], up)) > 0.02 * wheel.radius);
    if (far)
      findings.push(
        finding(
          "several-axles-in-part",
          "warning",
          `Part "${name}" holds ${round.length} wheels on different axles; a part can turn about one axle only, so its wheels cannot all turn rightly.`,
          "Split the part into one part per wheel, or per axle.",
          { part: name, count: round.length, places: round.slice(0, 10).map(({ centre }) => point(centre)) },
        ),
      );
  }
  if (wheels.length === 0)
    findings.push(
      finding(
        "no-wheels",
        "note",
        "No part is known to be a wheel: the wheelbase is unknown, and moments would use the overall length.",
        "Name wheel parts so (wheel-front-left, tyre-rr), or say which parts are wheels.",
      ),
    );
  else if (axles === 1)
    findings.push(
      finding(
        "one-axle",
        "warning",
        "All wheels sit on one axle, so there is no wheelbase and no split of the lift between axles.",
        "Say which parts are wheels.",
      ),
    );
  else if (axles > 2)
    findings.push(
      finding(
        "several-rear-axles",
        "note",
        `${axles} axles were found; the wheelbase runs from the first to the middle of the others.`,
        "Give the wheelbase if another length is wanted.",
        { count: axles },
      ),
    );
  return findings;
}
