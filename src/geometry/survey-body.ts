import { inputProblem } from "../errors.js";
import { type Finding, finding } from "../finding.js";
import { axlesOf, joinWheels, wheelbaseOf } from "./axles.js";
import { type Measures, measures } from "./measures.js";
import { type Mirror, mirrorOf } from "./mirror.js";
import { type AxesGuess, guessAxes } from "./orientation.js";
import { nameHints } from "./part-words.js";
import { metresPer, vehicleAxes } from "./place.js";
import { silhouette } from "./silhouette.js";
import { surfaceMesh } from "./surface-mesh.js";
import type { Orientation, Survey, Wheel } from "./survey.js";
import { topologyOf } from "./topology.js";
import { topologyFindings } from "./topology-findings.js";
import type { Part, TriangleSet } from "./triangle-set.js";
import { guessUnit, leastLength, mostLength, type UnitGuess } from "./unit-guess.js";
import type { Box, Vector3 } from "./vector.js";
import { visibleShares } from "./visible-shares.js";
import { fitWheels, type VehicleAxes, type WheelFit } from "./wheels.js";

/**
 * All that can be said of a body from its triangles. What is asked for (unit, travel, up, wheel parts by name) is taken as given, the
 * rest is guessed with a reason; evidence against what was given becomes a finding. Lengths of the result in metres, file axes.
 *
 * Verdict: an error among the findings makes the body not fit, a warning fit with warnings; notes count for nothing.
 *
 * @throws Problem(input) `unknown-wheel-part`, `axes-parallel`.
 */
export function surveyBody(set: TriangleSet, asked: Partial<Orientation> & { wheelParts?: string[] } = {}): Survey {
  const { parts } = set;
  const mesh = surfaceMesh(set);
  const inUnit = measures(mesh, set.partOf, parts.length);
  const wheelParts = wheelPartsOf(parts, asked.wheelParts).filter((part) => inUnit.groups[part].triangles > 0);
  const extents = inUnit.whole.bounds.max.map((value, axis) => value - inUnit.whole.bounds.min[axis]);
  const unit: UnitGuess =
    asked.unit === undefined ? guessUnit(Math.max(...extents)) : { value: asked.unit, basis: "given", certain: true };
  const mirrors = new Map<number, Mirror>();
  const mirror = (axis: number): Mirror => {
    const known = mirrors.get(axis) ?? mirrorOf(mesh, inUnit.whole.bounds, axis);
    mirrors.set(axis, known);
    return known;
  };
  const axes = guessAxes(
    {
      bounds: inUnit.whole.bounds,
      names: parts.map((part) => part.name),
      measures: inUnit.groups,
      wheels: wheelParts,
      mirrored: (axis) => (mirror(axis).kind === "whole" ? "whole" : mirror(axis).cut === "open" ? "cut" : "no"),
    },
    asked,
  );
  const vehicle = vehicleAxes(axes);
  const scale = metresPer[unit.value];
  const point = (at: Vector3): Vector3 => at.map((value) => value * scale) as Vector3;
  const box = ({ min, max }: Box): Box => ({ min: point(min), max: point(max) });
  const front = silhouette(mesh, vehicle.rearward);
  const shares = visibleShares(mesh, parts.length, vehicle.rearward);
  const fitted = fitWheels(mesh, wheelParts, vehicle);
  const wheels = joinWheels(fitted.flatMap(({ fit }) => (fit === null ? [] : [fit])));
  const axles = axlesOf(wheels, vehicle.rearward);
  const wheelbase = wheelbaseOf(axles);
  const topology = topologyOf(mesh, parts.length);
  const lateral = vehicle.right.findIndex((value) => value !== 0);
  const symmetry = mirror(lateral);
  const along = (direction: Vector3): number => extents[direction.findIndex((value) => value !== 0)] * scale;
  const { whole } = inUnit;
  const findings: Finding[] = [
    ...set.findings,
    ...sizeFindings(set, unit, asked.unit !== undefined, Math.max(...extents) * scale),
    ...axesFindings(axes),
    ...emptyParts(parts, inUnit.groups),
    ...topologyFindings(topology, parts, scale, symmetry),
    ...wheelFindings(parts, fitted, wheels, axles.length, vehicle, scale),
  ];
  return {
    files: set.files,
    parts: parts.map(({ name, patch }, k) => ({
      name,
      patch,
      triangles: inUnit.groups[k].triangles,
      area: inUnit.groups[k].area * scale ** 2,
      bounds: box(inUnit.groups[k].bounds),
      frontalVisible: shares[k] * front.area * scale ** 2,
    })),
    triangles: whole.triangles,
    vertices: mesh.vertices.length / 3,
    bounds: box(whole.bounds),
    extents: { length: along(vehicle.rearward), width: along(vehicle.right), height: along(vehicle.up) },
    wettedArea: whole.area * scale ** 2,
    volume: whole.volume * scale ** 3,
    centroid: point(topology.open.count === 0 && whole.volumeCentroid !== null ? whole.volumeCentroid : whole.areaCentroid),
    frontalArea: { value: front.area * scale ** 2, error: front.error * scale ** 2 },
    unit,
    axes: { travel: axes.travel, up: axes.up, basis: axes.basis, certain: axes.certain },
    topology: {
      openEdges: topology.open.count,
      nonManifoldEdges: topology.nonManifold.count,
      flippedEdges: topology.flipped.count,
      degenerate: topology.degenerate.count,
      duplicate: topology.duplicate.count,
      shells: topology.shells.count,
    },
    wheels: wheels.map(
      (wheel): Wheel => ({
        part: parts[wheel.part].name,
        centre: point(wheel.centre),
        axis: wheel.axis,
        radius: wheel.radius * scale,
        width: wheel.width * scale,
        fitError: wheel.fitError * scale,
      }),
    ),
    wheelbase: wheelbase === null ? null : wheelbase * scale,
    symmetry: { kind: symmetry.kind, plane: symmetry.plane * scale, deviation: symmetry.deviation * scale },
    findings,
    verdict: findings.some(({ severity }) => severity === "error")
      ? "not-fit"
      : findings.some(({ severity }) => severity === "warning")
        ? "fit-with-warnings"
        : "fit",
  };
}

/** Numbers of the parts that are wheels: those named, by name or patch, else those whose names say so. */
function wheelPartsOf(parts: Part[], named: string[] | undefined): number[] {
  if (named === undefined) return parts.flatMap((part, k) => (nameHints(part.name).wheel ? [k] : []));
  return named.map((name) => {
    const found = parts.findIndex((part) => part.name === name);
    const at = found >= 0 ? found : parts.findIndex((part) => part.patch === name);
    if (at < 0)
      throw inputProblem({
        code: "unknown-wheel-part",
        message: `No part is named "${name}"; there are ${listed(parts.map((part) => part.name))}.`,
        remedy: "Name wheel parts as inspect lists them.",
      });
    return at;
  });
}

function listed(names: string[]): string {
  const shown = names.slice(0, 12).join(", ");
  return names.length > 12 ? `${shown} and ${names.length - 12} more` : shown || "none";
}

function sizeFindings(set: TriangleSet, unit: UnitGuess, given: boolean, metres: number): Finding[] {
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

function axesFindings(axes: AxesGuess): Finding[] {
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

function emptyParts(parts: Part[], groups: Measures[]): Finding[] {
  const empty = parts.filter((_, k) => groups[k].triangles === 0);
  if (empty.length === 0 || empty.length === parts.length) return [];
  return [
    finding(
      "empty-part",
      "warning",
      `${empty.length} parts have no triangles (${listed(empty.map((part) => part.name))}); they cannot appear in the mesh or the ledger.`,
      "Export them again, or leave them out.",
      { count: empty.length, part: empty.length === 1 ? empty[0].name : null },
    ),
  ];
}

function wheelFindings(
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
