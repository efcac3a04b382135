import { airProperties } from "../flow/air.js";
import { inletTurbulence } from "../flow/inlet.js";
import { wallSpacing } from "../flow/wall.js";
import { placeDirection, placePoint } from "../geometry/place.js";
import type { Vector3 } from "../geometry/vector.js";
import { rotatingParts } from "../study/part-rules.js";
import type { Condition, Study } from "../study/study.js";
import { cellsBetweenLevels, cellsOf } from "./grid.js";
import type { CasePlan, Planned, PlannedPart } from "./plan.js";
import { bodyForGrid, caseBounds, type StudyFrame, type VariantBody } from "./study-frame.js";

const measured = "measured with OpenFOAM v1912";
const practice = "common practice";
const studyFile = "study file";

const planned = <T>(value: T, unit: string, reason: string, source: string): Planned<T> => ({ value, unit, reason, source });

/** Every number of one case. Pure: `frame` is what the study's cases share, `body` the variant. */
export function planCase(study: Study, frame: StudyFrame, body: VariantBody, condition: Condition): CasePlan {
  const { grid, half } = frame;
  const { domain } = grid;
  const { speed } = condition;
  const air = airProperties(study.air);
  const length = frame.bounds.max[0] - frame.bounds.min[0];
  const surfaceCell = domain.baseCell / 2 ** grid.surfaceLevel;
  const inlet = inletTurbulence({ speed, kinematicViscosity: air.kinematicViscosity, distance: domain.distances.ahead });
  const cells = cellsOf(
    { ...bodyForGrid(body.survey, frame.placement), bounds: frame.bounds },
    { ...study.mesh, half: half.value },
    grid,
  );
  const millions = cells / 1e6;
  const airState = `${(study.air.temperature - 273.15).toFixed(1)} degC, ${(study.air.pressure / 100).toFixed(2)} hPa, ${(100 * study.air.humidity).toFixed(0)} % humidity`;
  return {
    study: study.name,
    variant: body.variant,
    condition,
    placement: frame.placement,
    half,
    air: {
      density: planned(
        air.density,
        "kg/m3",
        `moist air as an ideal gas at ${airState}`,
        "ideal gas law; saturation pressure of CIPM-2007",
      ),
      kinematicViscosity: planned(
        air.kinematicViscosity,
        "m2/s",
        `Sutherland's law at ${airState}`,
        "US Standard Atmosphere 1976, eq. 51",
      ),
    },
    flow: {
      speed: planned(speed, "m/s", `condition ${condition.name}`, studyFile),
      reynolds: planned(
        (speed * length) / air.kinematicViscosity,
        "",
        `on the overall length of ${length.toFixed(3)} m`,
        "definition",
      ),
      k: planned(inlet.k, "m2/s2", "turbulence intensity 0.5 % at the inlet", `${practice}; ${measured}`),
      omega: planned(
        inlet.omega,
        "1/s",
        `eddy viscosity 10 times the air's at the inlet; ${inlet.atNose!.viscosityRatio.toPrecision(3)} times at the nose`,
        `${practice}; ${measured}`,
      ),
      nut: planned(inlet.nut, "m2/s", "k / omega", "definition"),
    },
    reference: {
      area: frame.area,
      length: frame.length,
      centre: planned<Vector3>(
        [0, 0, 0],
        "m",
        frame.wheelbase === null ? "on the ground at mid-length" : "on the ground at mid-wheelbase and mid-track",
        "SAE J1594",
      ),
      wheelbase: frame.wheelbase,
    },
    domain: {
      min: planned(
        domain.min,
        "m",
        `${domain.distances.ahead.toFixed(1)} m ahead of the body; faces on multiples of the base cell`,
        measured,
      ),
      max: planned(
        domain.max,
        "m",
        `${domain.distances.behind.toFixed(1)} m behind, ${domain.distances.side.toFixed(1)} m beside, ${domain.distances.top.toFixed(1)} m above the body`,
        measured,
      ),
      baseCell: planned(
        domain.baseCell,
        "m",
        "about a fifth of the overall length; grid anchored at the origin, the same for all variants",
        measured,
      ),
      divisions: planned(domain.divisions, "", "domain over base cell", "definition"),
      blockage: planned(
        domain.blockage,
        "",
        "frontal area over the tunnel's cross-section; below 1.5 % no correction is made",
        practice,
      ),
      keepPoint: planned(keepPointOf(frame), "m", "near the inlet, off every face of the grid", "geometry"),
    },
    mesh: {
      surfaceLevel: planned(
        grid.surfaceLevel,
        "",
        `surface cells of ${(1000 * surfaceCell).toFixed(1)} mm, found for the study's budget of ${study.mesh.cells} cells`,
        "cell count formula, within 7 % on 15 meshes",
      ),
      featureAngle: planned(150, "deg", "keeps the edges a hand would draw, drops facets of curved surfaces", measured),
      ...layersOf(study, frame, speed, air.kinematicViscosity, surfaceCell),
      cellsBetweenLevels: planned(cellsBetweenLevels, "", "2 instead of 3 saves 5 % of the cells", measured),
      predictedCells: planned(
        cells,
        "",
        "shells around the surface, refinement boxes, background, layers",
        "cell count formula, within 7 % on 15 meshes",
      ),
      predictedMemory: planned(
        Math.round(1e6 * (105 + 1600 * millions)),
        "B",
        "peak of the mesher: 105 MB and 1600 MB per million cells",
        measured,
      ),
      predictedMeshSeconds: planned(
        Number((120 * millions + 2).toPrecision(2)),
        "s",
        "120 s per million cells on one core; five times that for many touching parts",
        measured,
      ),
      predictedIterationSeconds: planned(Number((6 * millions).toPrecision(2)), "s", "6 s per million cells on one core", measured),
    },
    boxes: grid.boxes,
    parts: partsOf(study, frame, body, speed),
    iterations: {
      most: planned(study.solver.mostIterations, "", "hard limit; a run ends earlier when it has settled", studyFile),
      writeEvery: planned(
        writeInterval(study.solver.mostIterations),
        "",
        "an interruption loses no more than this many iterations",
        practice,
      ),
    },
    stop: {
      drag: planned(study.stop.drag, "", "half-width asked of the mean drag coefficient", studyFile),
      lift: planned(study.stop.lift, "", "half-width asked of the mean lift coefficient", studyFile),
      confidence: planned(study.stop.confidence, "", "of the intervals", studyFile),
    },
  };
}

const writeInterval = (most: number): number => Math.max(10, Math.min(100, Math.round(most / 40) * 10));

/** A point between the planes of the grid at every level: multiples of the golden section are far from halves, quarters, eighths. */
function keepPointOf({ grid: { domain }, side }: StudyFrame): Vector3 {
  const golden = (Math.sqrt(5) - 1) / 2;
  const step = golden * domain.baseCell;
  return [
    domain.min[0] + step,
    side === -1 ? domain.max[1] - step : side === 1 ? domain.min[1] + step : step,
    domain.max[2] - step,
  ];
}

const expansion = 1.3;
/** Outer layer over the cell it meets: below, the step to the cell outside is too large; above, layers collapse. Measured. */
const leastFinalLayer = 0.3;
const mostFinalLayer = 0.5;

function layersOf(study: Study, frame: StudyFrame, speed: number, kinematicViscosity: number, surfaceCell: number) {
  const { layers, yPlus } = study.mesh;
  const length = frame.bounds.max[0] - frame.bounds.min[0];
  const wall = wallSpacing({ speed, length, kinematicViscosity, yPlus });
  const growth = expansion ** Math.max(0, layers - 1);
  const finalLayer = Math.min(mostFinalLayer, Math.max(leastFinalLayer, (wall.firstCell * growth) / surfaceCell));
  const firstCell = layers === 0 ? surfaceCell : (finalLayer * surfaceCell) / growth;
  const reached = (yPlus * firstCell) / wall.firstCell;
  const wished = `y+ ${yPlus} would need ${(1000 * wall.firstCell).toPrecision(3)} mm (twice the distance of the cell centre)`;
  const met = Math.abs(reached / yPlus - 1) < 0.05;
  return {
    layers: { value: layers, unit: "", reason: "asked for", source: studyFile },
    firstCell: {
      value: firstCell,
      unit: "m",
      reason: met
        ? `gives y+ ${yPlus} at the tail`
        : `${wished}; ${layers} layers on ${(1000 * surfaceCell).toFixed(1)} mm cells reach y+ ${Math.round(reached)}`,
      source: "skin friction after Schlichting, (2 log10 Re - 0.65)^-2.3",
    },
    layerExpansion: { value: expansion, unit: "", reason: "layers of 98 to 100 % cover", source: measured },
    finalLayer: {
      value: Number(finalLayer.toPrecision(4)),
      unit: "",
      reason: `outer layer over the cell outside it, kept between ${leastFinalLayer} and ${mostFinalLayer} so that layers hold`,
      source: measured,
    },
  };
}

/** The parts inside the domain: in a half model those on its side. Wheels turn so that the tread meets the road at the road's speed. */
function partsOf(study: Study, frame: StudyFrame, { survey }: VariantBody, speed: number): PlannedPart[] {
  const { placement, side, grid } = frame;
  const surfaceCell = grid.domain.baseCell / 2 ** grid.surfaceLevel;
  const turning = new Set(
    study.ground === "moving"
      ? rotatingParts(
          study.parts,
          survey.parts.map(({ name }) => name),
        )
      : [],
  );
  const inside = survey.parts.filter((part) => {
    const { min, max } = caseBounds(part.bounds, placement);
    return side === 0 || (side === 1 ? max[1] > 0.01 * surfaceCell : min[1] < -0.01 * surfaceCell);
  });
  return inside.map((part) => {
    const level = grid.levels.get(part.patch) ?? grid.surfaceLevel;
    const wheel = turning.has(part.name) ? survey.wheels.find((each) => each.part === part.name) : undefined;
    if (!wheel) return { name: part.name, patch: part.patch, level, wheel: null };
    const centre = placePoint(wheel.centre, { scale: 1, rotation: placement.rotation, shift: placement.shift });
    const axis = placeDirection(wheel.axis, placement);
    // With the axis to the right, the lowest point of a wheel that turns positively moves forwards: rolling is negative.
    return { name: part.name, patch: part.patch, level, wheel: { centre, axis, radius: wheel.radius, omega: -speed / centre[2] } };
  });
}
