import { inputProblem } from "../errors.js";
import { type Finding, finding } from "../finding.js";
import { onsetFlow } from "../flow/onset.js";
import { type Placement, placeDirection, placePoint } from "../geometry/place.js";
import type { Survey, Wheel } from "../geometry/survey.js";
import type { Vector3 } from "../geometry/vector.js";
import { rotatingParts } from "../study/part-rules.js";
import type { Condition, Study } from "../study/study.js";
import type { PlannedPart } from "./plan.js";

export type TurningWheel = NonNullable<PlannedPart["wheel"]>;

/** Share of the radius that the wheels of one part may lie beside a common axle line. */
const sameAxle = 0.02;

/**
 * How the parts of a variant turn that the study's rules call rotating, by part name. A part turns about one axle: the mean of its wheels. The
 * angular velocity is the road's speed over the height of the axle, so that the lowest point of the tread moves with the road, at
 * (speed, 0, 0); about an axis that points to the right this is negative. Above a fixed ground wheels stand still.
 *
 * @throws Problem(input) `wheel-not-round`, `wheels-on-two-axles`, `wheel-below-ground`.
 */
export function turningWheels(
  study: Study,
  variant: string,
  survey: Survey,
  placement: Placement,
  condition: Condition,
): Map<string, TurningWheel> {
  const turning = new Map<string, TurningWheel>();
  if (condition.ground === "fixed") return turning;
  const names = survey.parts.map(({ name }) => name);
  for (const name of rotatingParts(study.parts, names)) {
    const wheels = survey.wheels.filter(({ part }) => part === name);
    const where = `${study.path}, variant ${variant}`;
    if (wheels.length === 0)
      throw inputProblem({
        code: "wheel-not-round",
        message: `Part '${name}' is to turn with the road, but nothing in it is round enough to have an axle.`,
        where,
        remedy: "Take it out of the rotating rule, or give the tyre as a part of its own.",
      });
    turning.set(name, turningAbout(wheels, placement, onsetFlow(condition).road, { name, where }));
  }
  return turning;
}

function turningAbout(wheels: Wheel[], placement: Placement, speed: number, part: { name: string; where: string }): TurningWheel {
  const inMetres = { ...placement, scale: 1 };
  const centres = wheels.map(({ centre }) => placePoint(centre, inMetres));
  const axis = unit(mean(wheels.map((wheel) => placeDirection(wheel.axis, placement))));
  const centre = rounded(mean(centres));
  const radius = Number(Math.max(...wheels.map((wheel) => wheel.radius)).toFixed(6));
  for (const other of centres)
    if (distanceFromLine(other, centre, axis) > sameAxle * radius)
      throw inputProblem({
        code: "wheels-on-two-axles",
        message: `Part '${part.name}' holds ${wheels.length} wheels that do not share an axle; a part can turn about one axle only.`,
        where: part.where,
        remedy: "Split it into one part per wheel or per axle, or take it out of the rotating rule.",
      });
  if (!(centre[2] > 0))
    throw inputProblem({
      code: "wheel-below-ground",
      message: `The axle of part '${part.name}' lies ${(-centre[2]).toFixed(3)} m below the ground, which is at the lowest point of the baseline.`,
      where: part.where,
      remedy: "Bring the variants to one ground height, or take the part out of the rotating rule.",
    });
  // Velocity at the lowest point, omega · axis × (0, 0, -height): its x component is -omega · axis_y · height.
  return { centre, axis, radius, omega: -speed / (axis[1] * centre[2]) };
}

/** What is odd about how wheels and ground go together; metres in the findings' figures, places in file axes. */
export function wheelFindings(study: Study, survey: Survey, placement: Placement, condition: Condition): Finding[] {
  const findings: Finding[] = [];
  const names = survey.parts.map(({ name }) => name);
  const rotating = new Set(rotatingParts(study.parts, names));
  if (condition.ground === "fixed" && rotating.size > 0)
    findings.push(
      finding(
        "wheels-stand-still",
        "note",
        `The ground is fixed, so the ${rotating.size} rotating parts stand still: wheels turn with the road.`,
        "Set ground: moving for a vehicle on a road.",
        { count: rotating.size },
      ),
    );
  if (condition.ground === "moving") {
    const still = [...new Set(survey.wheels.map(({ part }) => part))].filter((part) => !rotating.has(part));
    if (still.length > 0)
      findings.push(
        finding(
          "wheels-locked-on-moving-ground",
          "warning",
          `${still.length} parts that look like wheels do not turn although the road moves: ${still.slice(0, 5).join(", ")}${still.length > 5 ? ", ..." : ""}. That is a skidding vehicle.`,
          "Add a rule with rotating: true that matches them.",
          { count: still.length, part: still.length === 1 ? still[0]! : null },
        ),
      );
  }
  const inMetres = { ...placement, scale: 1 };
  const hovering = survey.wheels.filter(({ part, centre, radius }) => {
    const gap = placePoint(centre, inMetres)[2] - radius;
    return rotating.has(part) && gap > 0.01 * radius;
  });
  if (hovering.length > 0)
    findings.push(
      finding(
        "wheels-off-ground",
        "warning",
        `${hovering.length} wheels end above the ground (${[...new Set(hovering.map(({ part }) => part))].slice(0, 5).join(", ")}): air rushes through a gap that a tyre does not have.`,
        "Lower the wheels until they touch, or flatten the tyres where they stand.",
        { count: hovering.length, places: hovering.slice(0, 10).map(({ centre }) => centre) },
      ),
    );
  return findings;
}

/** To a micrometre: finer digits are those of the file's numbers, not of the wheel. */
const rounded = ([x, y, z]: Vector3): Vector3 => [Number(x.toFixed(6)), Number(y.toFixed(6)), Number(z.toFixed(6))];

function mean(points: Vector3[]): Vector3 {
  const along = (k: number): number => points.reduce((sum, point) => sum + point[k], 0) / points.length;
  return [along(0), along(1), along(2)];
}

function unit([x, y, z]: Vector3): Vector3 {
  const length = Math.hypot(x, y, z);
  return [x / length, y / length, z / length];
}

function distanceFromLine(point: Vector3, onLine: Vector3, direction: Vector3): number {
  const d: Vector3 = [point[0] - onLine[0], point[1] - onLine[1], point[2] - onLine[2]];
  const along = d[0] * direction[0] + d[1] * direction[1] + d[2] * direction[2];
  return Math.sqrt(Math.max(0, d[0] ** 2 + d[1] ** 2 + d[2] ** 2 - along ** 2));
}
