import { inputProblem } from "../errors.js";
import type { Finding } from "../finding.js";
import { findCrossings } from "./checks/crossings.js";
import { findLeak, type Leak } from "./checks/leak.js";
import { axesFindings, emptyParts, leakFindings, listedNames, sizeFindings, wheelFindings } from "./checks/survey-findings.js";
import { topologyFindings } from "./checks/topology-findings.js";
import { measures } from "./measures.js";
import { metresPer, vehicleAxes } from "./place.js";
import { silhouette } from "./silhouette/silhouette.js";
import { visibleShares } from "./silhouette/visible-shares.js";
import { surfaceMesh } from "./surface-mesh.js";
import type { Orientation, Survey, Wheel } from "./survey.js";
import { topologyOf } from "./topology.js";
import type { Part, TriangleSet } from "./triangle-set.js";
import type { Box, Vector3 } from "./vector.js";
import { axlesOf, joinWheels, wheelbaseOf } from "./vehicle/axles.js";
import { type Mirror, mirrorOf } from "./vehicle/mirror.js";
import { guessAxes } from "./vehicle/orientation.js";
import { nameHints } from "./vehicle/part-words.js";
import { guessUnit, type UnitGuess } from "./vehicle/unit-guess.js";
import { fitWheels } from "./vehicle/wheels.js";

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
  const crossings = findCrossings(mesh, topology.shells.shellOf, parts.length);
  const lateral = vehicle.right.findIndex((value) => value !== 0);
  const symmetry = mirror(lateral);
  const cut = symmetry.kind === "half" ? { axis: lateral, plane: symmetry.plane } : null;
  // A surface without open edges cannot leak.
  const found = topology.open.count > 0 ? findLeak(mesh, inUnit.whole.bounds, cut) : { cell: 0, reached: false, holes: [] };
  const leak = found === null ? undefined : scaledLeak(found, scale);
  const along = (direction: Vector3): number => extents[direction.findIndex((value) => value !== 0)] * scale;
  const { whole } = inUnit;
  const findings: Finding[] = [
    ...set.findings,
    ...sizeFindings(set, unit, asked.unit !== undefined, Math.max(...extents) * scale),
    ...axesFindings(axes),
    ...emptyParts(parts, inUnit.groups),
    ...topologyFindings(topology, crossings, parts, scale, symmetry),
    ...leakFindings(leak),
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
      selfIntersections: crossings === null ? null : crossings.within.count,
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
    leak,
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
        message: `No part is named "${name}"; there are ${listedNames(parts.map((part) => part.name))}.`,
        remedy: "Name wheel parts as inspect lists them.",
      });
    return at;
  });
}

const scaledLeak = ({ cell, reached, holes }: Leak, scale: number): Leak => ({
  cell: cell * scale,
  reached,
  holes: holes.map(({ centre, width }) => ({ centre: centre.map((value) => value * scale) as Vector3, width: width * scale })),
});
