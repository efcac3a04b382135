import { inputProblem } from "../errors.js";
import { type Finding, finding } from "../finding.js";
import { findOverlaps } from "./checks/coincident.js";
import { cutPlaneDeviation } from "./checks/cut-plane.js";
import { coincidentFindings, cutFindings, overlapFindings, sliverFindings } from "./checks/fit-findings.js";
import { findSlivers } from "./checks/slivers.js";
import { stanceFindings } from "./checks/stance-findings.js";
import { axesFindings, emptyParts, listedNames, sizeFindings, wheelFindings } from "./checks/survey-findings.js";
import { topologyFindings } from "./checks/topology-findings.js";
import { fitAtCell } from "./fit-at-cell.js";
import { type Measures, measures } from "./measures.js";
import { metresPer, vehicleAxes } from "./place.js";
import { shellMeasures } from "./shell-measures.js";
import { partSilhouettes, silhouette } from "./silhouette/silhouette.js";
import { visibleShares } from "./silhouette/visible-shares.js";
import { yawedAreas } from "./silhouette/yawed-area.js";
import { surfaceMesh } from "./surface-mesh.js";
import type { Orientation, ProjectedArea, ShellSurvey, Survey } from "./survey.js";
import { bordersInMetres, fitInMetres, leakInMetres, pointInMetres, stanceInMetres, wheelInMetres } from "./survey-metres.js";
import { topologyByPart, topologyOf } from "./topology.js";
import type { Part, TriangleSet } from "./triangle-set.js";
import { triangleTree } from "./triangle-tree.js";
import { type Box, dot, type Vector3 } from "./vector.js";
import { axlesOf, joinWheels, wheelbaseOf } from "./vehicle/axles.js";
import { type Mirror, mirrorOf } from "./vehicle/mirror.js";
import { guessAxes } from "./vehicle/orientation.js";
import { nameHints } from "./vehicle/part-words.js";
import { contactDepth, stanceOf } from "./vehicle/stance.js";
import { guessUnit, type UnitGuess } from "./vehicle/unit-guess.js";
import { fitWheels, type VehicleAxes, type WheelFit } from "./vehicle/wheels.js";

export interface SurveyWishes {
  /** names of the parts that are wheels, instead of those whose names say so */
  wheelParts?: string[];
  /** radians: the frontal area is wanted at these angles of yaw too */
  yaws?: number[];
  /**
   * metres: cell of the mesh at the surface that the body has to be fit for; a two-hundredth of the length where it is not given; null
   * leaves out the checks against cells
   */
  cell?: number | null;
  /** the slow checks also for bodies of more than a million triangles */
  full?: boolean;
}

/** Cells along the body that a first study has at the surface. */
const usualCells = 200;
/** Metres: what is farther from the plane of a half body's cut is not in it. */
const cutTolerance = 1e-4;
/** Above this, self-intersections and the leak test are left out unless asked for. */
const mostTriangles = 1_000_000;

/**
 * All that can be said of a body from its triangles. What is asked for (unit, travel, up, wheel parts by name) is taken as given, the
 * rest is guessed with a reason; evidence against what was given becomes a finding. Lengths of the result in metres, file axes.
 *
 * Verdict: an error among the findings makes the body not fit, a warning fit with warnings; notes count for nothing.
 *
 * @throws Problem(input) `unknown-wheel-part`, `axes-parallel`.
 */
export function surveyBody(set: TriangleSet, asked: Partial<Orientation> & SurveyWishes = {}): Survey {
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
  const point = (at: Vector3): Vector3 => pointInMetres(at, scale);
  const box = ({ min, max }: Box): Box => ({ min: point(min), max: point(max) });
  const front = silhouette(mesh, vehicle.rearward);
  const side = silhouette(mesh, vehicle.right);
  const plan = silhouette(mesh, vehicle.up);
  const shares = visibleShares(mesh, parts.length, vehicle.rearward);
  const alone = partSilhouettes(mesh, parts.length, vehicle.rearward);
  const fitted = fitWheels(mesh, wheelParts, vehicle);
  const wheels = joinWheels(fitted.flatMap(({ fit }) => (fit === null ? [] : [fit])));
  const axles = axlesOf(wheels, vehicle.rearward);
  const wheelbase = wheelbaseOf(axles);
  const topology = topologyOf(mesh, parts.length);
  const byPart = topologyByPart(topology);
  const lateral = vehicle.right.findIndex((value) => value !== 0);
  const symmetry = mirror(lateral);
  const cut = symmetry.kind === "half" ? { axis: lateral, plane: symmetry.plane } : null;
  const stance = stanceOf(mesh, inUnit.whole.bounds, wheels, vehicle, {
    middle: middleOf(symmetry, vehicle, wheels, inUnit.whole.bounds),
    half: cut !== null,
    depth: contactDepth / scale,
    wheelParts,
  });
  const along = (direction: Vector3): number => extents[direction.findIndex((value) => value !== 0)] * scale;
  const leftOut = asked.full !== true && set.partOf.length > mostTriangles;
  const tree = triangleTree(mesh);
  const overlaps = leftOut ? null : findOverlaps(mesh, topology.shells.shellOf, parts.length, tree);
  const slivers = findSlivers(mesh, parts.length, tree.extent);
  const cell = asked.cell === undefined ? along(vehicle.rearward) / usualCells : asked.cell;
  const fit =
    cell === null || !(cell > 0)
      ? null
      : fitAtCell(
          {
            mesh,
            bounds: inUnit.whole.bounds,
            parts,
            openEdges: topology.open.perPart,
            mayLeak: topology.open.count + topology.nonManifold.count + topology.flipped.count > 0,
            cut: cut === null ? null : { ...cut, open: symmetry.cut === "open" },
            scale,
            tree,
          },
          cell / scale,
          { leakTest: !leftOut },
        );
  const leaks = fit === null ? [] : fit.leaks;
  const { whole } = inUnit;
  const volume = cut === null ? whole.volume : halfVolume(whole, cut);
  const findings: Finding[] = [
    ...set.findings,
    ...sizeFindings(set, unit, asked.unit !== undefined, Math.max(...extents) * scale),
    ...axesFindings(axes),
    ...emptyParts(parts, inUnit.groups),
    ...topologyFindings(topology, overlaps?.crossings ?? null, parts, scale, symmetry),
    ...(overlaps === null ? [] : overlapFindings(overlaps.crossings, parts, scale)),
    ...(overlaps === null ? [] : coincidentFindings(overlaps.coincident, parts, scale)),
    ...sliverFindings(slivers, parts, scale),
    ...(cut === null || symmetry.cut !== "open"
      ? []
      : cutFindings(cutPlaneDeviation(mesh, cut.axis, cut.plane, cutTolerance / scale), scale)),
    ...(fit?.findings ?? []),
    ...wheelFindings(parts, fitted, wheels, axles.length, vehicle, scale),
    ...stanceFindings(stance, parts, scale, cell ?? along(vehicle.rearward) / usualCells),
    ...(leftOut ? [leftOutFinding(set.partOf.length)] : []),
  ];
  const area = (seen: { area: number; error: number }): ProjectedArea => ({
    value: seen.area * scale ** 2,
    error: seen.error * scale ** 2,
  });
  return {
    files: set.files,
    parts: parts.map(({ name, patch }, k) => ({
      name,
      patch,
      triangles: inUnit.groups[k].triangles,
      area: inUnit.groups[k].area * scale ** 2,
      volume: inUnit.groups[k].volume * scale ** 3,
      centroid: point(inUnit.groups[k].areaCentroid),
      bounds: box(inUnit.groups[k].bounds),
      frontalVisible: shares[k] * front.area * scale ** 2,
      frontalAlone: alone[k].area * scale ** 2,
      topology: byPart[k],
    })),
    triangles: whole.triangles,
    vertices: mesh.vertices.length / 3,
    bounds: box(whole.bounds),
    extents: { length: along(vehicle.rearward), width: along(vehicle.right), height: along(vehicle.up) },
    wettedArea: whole.area * scale ** 2,
    volume: volume * scale ** 3,
    centroid: point(topology.open.count === 0 && whole.volumeCentroid !== null ? whole.volumeCentroid : whole.areaCentroid),
    frontalArea: area(front),
    sideArea: area(side),
    planArea: area(plan),
    yawed: yawedAreas(mesh, asked.yaws ?? [], vehicle, cut).map((seen) => ({ yaw: seen.yaw, ...area(seen) })),
    doubled:
      cut === null
        ? null
        : {
            frontalArea: 2 * area(front).value,
            planArea: 2 * area(plan).value,
            wettedArea: 2 * (whole.area - symmetry.lid) * scale ** 2,
            volume: 2 * volume * scale ** 3,
          },
    shells: shellMeasures(mesh, topology.shells).map(
      (shell): ShellSurvey => ({
        triangles: shell.triangles,
        parts: shell.parts.map((part) => parts[part].name),
        closed: shell.closed,
        area: shell.area * scale ** 2,
        volume: shell.volume * scale ** 3,
        centroid: point(shell.centroid),
        bounds: box(shell.bounds),
      }),
    ),
    unit,
    axes: { travel: axes.travel, up: axes.up, basis: axes.basis, certain: axes.certain },
    topology: {
      openEdges: topology.open.count,
      nonManifoldEdges: topology.nonManifold.count,
      flippedEdges: topology.flipped.count,
      degenerate: topology.degenerate.count,
      duplicate: topology.duplicate.count,
      shells: topology.shells.count,
      selfIntersections: overlaps === null ? null : overlaps.crossings.within.count,
      borders: bordersInMetres(topology.borders, parts, scale),
      borderCount: topology.borderCount,
    },
    wheels: wheels.map((wheel) => wheelInMetres(wheel, stance, parts, scale)),
    wheelbase: wheelbase === null ? null : wheelbase * scale,
    stance: stanceInMetres(stance, parts, scale),
    symmetry: { kind: symmetry.kind, plane: symmetry.plane * scale, deviation: symmetry.deviation * scale },
    leak: leaks.length > 0 ? leakInMetres(leaks[0], scale) : undefined,
    fit: fit === null || cell === null ? null : fitInMetres(fit, cell, parts, scale),
    slivers: { count: slivers.count, worst: slivers.worst },
    coincident:
      overlaps === null
        ? null
        : { same: overlaps.coincident.same.area * scale ** 2, opposite: overlaps.coincident.opposite.area * scale ** 2 },
    overlaps:
      overlaps === null
        ? null
        : overlaps.crossings.partPairs.map(({ a, b, count, places }) => ({
            parts: [parts[a].name, parts[b].name],
            pairs: count,
            place: point(places[0]),
          })),
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

/**
 * Volume of a half body that is open along its cut or closed by a lid: seen from a point of the cut's plane the missing lid spans
 * nothing, so the sum over the other triangles is whole.
 */
function halfVolume({ volume, bounds, areaVector }: Measures, { axis, plane }: { axis: number; plane: number }): number {
  const middle = (bounds.min[axis] + bounds.max[axis]) / 2;
  return volume + ((middle - plane) * areaVector[axis]) / 3;
}

/** Coordinate of the vehicle's mid-plane along right: its symmetry plane, else the middle of its wheels, else of its bounds. */
function middleOf({ kind, plane }: Mirror, { right }: VehicleAxes, wheels: WheelFit[], { min, max }: Box): number {
  const lateral = right.findIndex((value) => value !== 0);
  if (kind !== "none" || wheels.length < 2) return (kind === "none" ? (min[lateral] + max[lateral]) / 2 : plane) * right[lateral];
  const across = wheels.map(({ centre }) => dot(centre, right));
  return (Math.min(...across) + Math.max(...across)) / 2;
}

const leftOutFinding = (triangles: number): Finding =>
  finding(
    "checks-left-out",
    "note",
    `The body has ${triangles} triangles, more than a million: self-intersections and the leak test, the slow checks, were left out.`,
    "Ask for the full check before spending time on a mesh.",
  );
