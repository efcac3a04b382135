import { airProperties } from "../flow/air.js";
import { inletTurbulence, type TwoEquationModel } from "../flow/inlet.js";
import { onsetFlow } from "../flow/onset.js";
import type { Vector3 } from "../geometry/vector.js";
import type { Condition, Study } from "../study/study.js";
import { caseBounds, partsInside, wholeFrontalArea } from "./body-in-case.js";
import { cellsBetweenLevels, levelOf } from "./grid.js";
import { ladderOf } from "./ladder.js";
import { finalOnLevel, layersFor } from "./layers.js";
import type { CasePlan, PlannedPart } from "./plan.js";
import { millimetres, planned, source } from "./planned.js";
import { meshCost } from "./sizing.js";
import type { PredictedMesh, StudyFrame, VariantBody } from "./study-frame.js";
import { turningWheels } from "./wheels.js";

/**
 * Every number of one case. Pure. `frame` is what all cases of the study share, `body` the variant, `predicted` the cells
 * that it will have in the grid of the frame and in coarser ones.
 *
 * @throws Problem(input) as `turningWheels`.
 */
export function planCase(given: {
  study: Study;
  frame: StudyFrame;
  body: VariantBody;
  predicted: Pick<PredictedMesh, "cells" | "coarserCells">;
  condition: Condition;
}): CasePlan {
  const { study, frame, body, predicted, condition } = given;
  const { length: overall } = extentsOf(frame);
  const { kinematicViscosity, density } = airProperties(study.air);
  const air = `${(study.air.temperature - 273.15).toFixed(1)} degC, ${(study.air.pressure / 100).toFixed(2)} hPa, ${Number((100 * study.air.humidity).toFixed(1))} % humidity`;
  const ladder = study.solver.start === "ladder" ? ladderOf(predicted.coarserCells) : [];
  const layers = layersFor({
    yPlus: study.mesh.yPlus,
    layers: study.mesh.layers,
    speed: condition.speed,
    length: overall,
    kinematicViscosity,
    surfaceCell: frame.grid.surfaceCell,
  });
  return {
    study: study.name,
    variant: body.variant,
    condition,
    placement: frame.placement,
    half: frame.half,
    air: {
      density: planned(
        density,
        "kg/m3",
        `moist air as a mixture of ideal gases at ${air}`,
        "ISO 2533; vapour pressure of CIPM-2007",
      ),
      kinematicViscosity: planned(kinematicViscosity, "m2/s", `Sutherland's law at ${air}, over density`, "ISO 2533"),
    },
    flow: flowOf(study.solver.turbulence, frame, condition, kinematicViscosity, overall),
    reference: {
      area: frame.area,
      length: frame.length,
      centre: planned<Vector3>(
        [0, 0, 0],
        "m",
        frame.wheelbase === null ? "on the ground at mid-length of the baseline" : "on the ground at mid-wheelbase and mid-track",
        source.axes,
      ),
      wheelbase: frame.wheelbase,
    },
    domain: domainOf(study, frame, wholeFrontalArea(body.survey)),
    mesh: { ...meshOf(study, frame, body, predicted.cells), ...layers },
    boxes: frame.grid.boxes,
    parts: partsOf(study, frame, body, condition, layers.finalLayer.value),
    start: planned(
      study.solver.start,
      "",
      study.solver.start === "cold"
        ? "from uniform flow, in second order from the first iteration"
        : ladder.length > 0
          ? `from the flow on ${ladder.length === 1 ? "a coarser grid" : `${ladder.length} coarser grids, one after the other`}`
          : "from uniform flow, the first iterations in first order: this grid is too coarse for a coarser one",
      source.study,
    ),
    ladder,
    iterations: {
      most: planned(study.solver.mostIterations, "", "most iterations; a run that has settled ends before", source.study),
      firstOrder: planned(
        Math.min(60, Math.max(1, Math.floor(study.solver.mostIterations / 2))),
        "",
        `in first order, where the flow starts from uniform: ${study.solver.start === "cold" ? "only with `run --careful`" : ladder.length > 0 ? "on the coarsest rung" : "before all others"}; two coarse meshes of a pickup that diverged or swung in second order settled after these`,
        source.solver,
      ),
      writeEvery: planned(
        writeInterval(study.solver.mostIterations),
        "",
        "an interrupted run loses no more than this",
        source.practice,
      ),
      relaxation: planned(
        study.solver.relaxation,
        "",
        "of the velocity: 0.9 settles soonest; at 0.7 the wake of a bluff body stays in a state that it left at 0.9, by a swing that grew",
        source.solver,
      ),
      turbulenceRelaxation: planned(
        Number(Math.min(0.7, study.solver.relaxation - 0.1).toPrecision(6)),
        "",
        `of k and ${study.solver.turbulence === "k-omega-SST" ? "omega" : "epsilon"}: less than that of the velocity`,
        source.solver,
      ),
    },
    stop: {
      drag: planned(study.stop.drag, "", "half-width wanted of the mean drag coefficient", source.study),
      lift: planned(study.stop.lift, "", "half-width wanted of the mean lift coefficient", source.study),
      confidence: planned(study.stop.confidence, "", "confidence of the half-widths", source.study),
    },
  };
}

function extentsOf({ bounds: { min, max } }: StudyFrame): { length: number } {
  return { length: max[0] - min[0] };
}

function flowOf(
  model: TwoEquationModel,
  { grid: { domain } }: StudyFrame,
  condition: Condition,
  kinematicViscosity: number,
  overall: number,
): CasePlan["flow"] {
  const { speed, yaw, name } = condition;
  const { velocity, road } = onsetFlow(condition);
  const inlet = inletTurbulence({ speed, kinematicViscosity, distance: domain.distances.ahead, model });
  const viscosities = `eddy viscosity ${inlet.viscosityRatio.toPrecision(3)} times that of the air at the inlet; ${inlet.atNose!.viscosityRatio.toPrecision(3)} times is left at the nose`;
  return {
    speed: planned(speed, "m/s", `condition ${name}`, source.study),
    velocity: planned(
      velocity,
      "m/s",
      yaw === 0
        ? "from straight ahead"
        : `at a yaw of ${Number(((180 / Math.PI) * yaw).toPrecision(6))} deg, from the ${yaw > 0 ? "left" : "right"}`,
      source.axes,
    ),
    road: planned(
      road,
      "m/s",
      condition.ground === "fixed"
        ? "not used: the ground stands still"
        : yaw === 0
          ? "the road moves with the air"
          : "the road moves with the air's part along the vehicle; the rest is cross wind",
      source.definition,
    ),
    reynolds: planned(
      (speed * overall) / kinematicViscosity,
      "",
      `on the overall length of the baseline, ${overall.toFixed(3)} m`,
      source.definition,
    ),
    turbulence: planned(model, "", "two equations, with wall functions", source.study),
    k: planned(
      inlet.k,
      "m2/s2",
      `turbulence intensity ${Number((100 * inlet.intensity).toPrecision(6))} % at the inlet`,
      source.solver,
    ),
    ...(model === "k-omega-SST"
      ? { omega: planned(inlet.omega, "1/s", viscosities, source.solver) }
      : { epsilon: planned(inlet.epsilon, "m2/s3", viscosities, source.solver) }),
    nut: planned(
      inlet.nut,
      "m2/s",
      model === "k-omega-SST" ? "k over omega" : "0.09 times the square of k over epsilon",
      source.definition,
    ),
  };
}

function domainOf(study: Study, frame: StudyFrame, frontalArea: number): CasePlan["domain"] {
  const { domain, surfaceLevel } = frame.grid;
  const { length } = extentsOf(frame);
  const { ahead, behind, side, top } = domain.distances;
  const away = (distance: number): string => `${distance.toFixed(1)} m (${(distance / length).toFixed(1)} lengths)`;
  const grown = domain.grown > 1 ? `, width and height ${domain.grown.toFixed(2)} times as large for the sake of blockage` : "";
  return {
    min: planned(domain.min, "m", `the inlet ${away(ahead)} ahead of the baseline; ground at its lowest point`, source.domain),
    max: planned(
      domain.max,
      "m",
      `the outlet ${away(behind)} behind, the side ${away(side)} beside, the sky ${away(top)} above the baseline${grown}`,
      source.domain,
    ),
    baseCell: planned(
      domain.baseCell,
      "m",
      `surface cell times 2^${surfaceLevel}, near a fifth of the length; all faces of the domain on its multiples, so all cells are cubes, the same for all variants`,
      source.domain,
    ),
    shift: planned(
      study.mesh.shift * domain.baseCell,
      "m",
      study.mesh.shift === 0
        ? "the grid is anchored at the origin"
        : `the grid is moved rearward by ${Number((100 * study.mesh.shift).toPrecision(4))} % of a base cell, the body is not`,
      source.study,
    ),
    divisions: planned(domain.divisions, "", "extent of the domain over the base cell", source.definition),
    blockage: planned(
      frontalArea / domain.crossSection,
      "",
      "frontal area over cross-section, whole vehicle in whole domain; 0.015 and less need no correction",
      source.practice,
    ),
    keepPoint: planned(keepPointOf(frame), "m", "in the air near the inlet, off every face of the grid", source.definition),
  };
}

/** A point between the faces of cells of every level: the golden section of a cell is far from halves, quarters, eighths. */
export function keepPointOf({ grid: { domain }, side }: StudyFrame): Vector3 {
  const step = ((Math.sqrt(5) - 1) / 2) * domain.baseCell;
  const lateral = side === -1 ? -step : step;
  return [domain.min[0] + step, lateral, domain.max[2] - step].map((value) => Number(value.toPrecision(8))) as Vector3;
}

function meshOf(
  study: Study,
  { grid }: StudyFrame,
  { survey }: VariantBody,
  cells: number,
): Omit<CasePlan["mesh"], "layers" | "firstCell" | "layerExpansion" | "finalLayer"> {
  const cost = meshCost(cells, survey.triangles, survey.parts.length);
  return {
    surfaceLevel: planned(
      grid.surfaceLevel,
      "",
      `cells of ${millimetres(grid.surfaceCell)} on the body, the size that brings the baseline to ${study.mesh.cells} cells`,
      source.cellCount,
    ),
    featureAngle: planned(
      150,
      "deg",
      "edges whose faces enclose less than this are followed by the mesh: drawn edges, not facets of curves",
      source.solver,
    ),
    cellsBetweenLevels: planned(cellsBetweenLevels, "", "2 instead of 3 saves 5 % of the cells", source.solver),
    predictedCells: planned(
      cells,
      "",
      "shells around the surface that the air reaches, refinement boxes, background, layers",
      source.cellCount,
    ),
    predictedMemory: planned(
      cost.memory,
      "B",
      "of the mesher, which needs most: 105 MB, 1.6 kB a cell, 0.65 kB a triangle",
      source.solver,
    ),
    predictedMeshSeconds: planned(
      cost.meshSeconds,
      "s",
      cost.busy
        ? "on one core; many triangles or touching parts take four times as long as plain bodies"
        : "on one core; plain bodies",
      source.solver,
    ),
    predictedIterationSeconds: planned(
      cost.iterationSeconds,
      "s",
      "on one core, 6 s per million cells; 4 to 9 were seen",
      source.solver,
    ),
  };
}

/** The parts on the computed side, each with its cells, layers and motion. */
function partsOf(
  study: Study,
  { placement, side, grid }: StudyFrame,
  { variant, survey }: VariantBody,
  condition: Condition,
  finalLayer: number,
): PlannedPart[] {
  const turning = turningWheels(study, variant, survey, placement, condition);
  return partsInside(survey, placement, side).map(({ name, patch, bounds }) => {
    const level = levelOf({ patch, bounds: caseBounds(bounds, placement) }, grid);
    return {
      name,
      patch,
      level,
      finalLayer: finalOnLevel(finalLayer, level - grid.surfaceLevel),
      wheel: turning.get(name) ?? null,
    };
  });
}

/** A hundred iterations, or a quarter of a short run; a divisor of the most, so that the last iteration is written. */
function writeInterval(most: number): number {
  const wanted = Math.max(1, Math.min(100, Math.ceil(most / 4)));
  for (let interval = wanted; interval > wanted / 2; interval--) if (most % interval === 0) return interval;
  return wanted;
}
