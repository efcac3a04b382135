import { onsetFlow } from "../flow/onset.js";
import type { CasePlan } from "./plan.js";
import { label } from "./template-text.js";

/** The cell limit of the mesher over the predicted count: cells inside the body are counted while it refines. */
const limitOverPrediction = 4;

/** The case itself, a rung of its ladder, or the first iterations of the grid that starts from uniform flow; only the case's forces are read. */
export type CaseKind = "case" | "rung" | "first-order";

/** What the templates see of a plan, as `it`. Numbers in SI and case axes. */
export function caseView(plan: CasePlan, kind: CaseKind) {
  const { half, domain, mesh, flow, air, reference, parts, condition } = plan;
  const onset = onsetFlow(condition);
  const final = mesh.finalLayer.value;
  const expansion = mesh.layerExpansion.value;
  const layers = mesh.layers.value;
  // Relative thickness of all layers together: final (1 + 1/r + 1/r² + ...).
  const thickness = final * Array.from({ length: layers }, (_, k) => expansion ** -k).reduce((sum, share) => sum + share, 0);
  return {
    start: kind !== "case",
    firstOrder: kind === "first-order",
    firstIterations: plan.iterations.firstOrder.value,
    /** it starts itself from uniform flow, but not in second order at once */
    eased: plan.start.value === "ladder" && plan.ladder.length === 0,
    rungs: plan.ladder.map((_, k) => k + 1),
    studyLabel: label(plan.study),
    variantLabel: label(plan.variant),
    conditionLabel: label(condition.name),
    turbulenceLabel: label(flow.omega ? "k-omega SST" : "realizable k-epsilon"),
    half: half.value,
    side: !half.value ? 0 : domain.max.value[1] === 0 ? -1 : 1,
    movingGround: condition.ground === "moving",
    speed: flow.speed.value,
    velocity: flow.velocity.value,
    road: flow.road.value,
    /** which side the air comes from at yaw: the left (1), the right (-1), neither (0) */
    windward: Math.sign(condition.yaw),
    along: onset.along,
    across: onset.across,
    k: flow.k.value,
    /** the model's second field beside k, and its value in the oncoming air */
    second: flow.omega ? "omega" : "epsilon",
    omega: flow.omega?.value,
    epsilon: flow.epsilon?.value,
    nut: flow.nut.value,
    density: air.density.value,
    viscosity: air.kinematicViscosity.value,
    areaInDomain: reference.area.value / (half.value ? 2 : 1),
    referenceLength: reference.length.value,
    min: domain.min.value,
    max: domain.max.value,
    divisions: domain.divisions.value,
    baseCell: domain.baseCell.value,
    keepPoint: domain.keepPoint.value,
    surfaceLevel: mesh.surfaceLevel.value,
    featureAngle: mesh.featureAngle.value,
    cellsBetweenLevels: mesh.cellsBetweenLevels.value,
    mostCells: Math.max(200_000, limitOverPrediction * mesh.predictedCells.value),
    layers,
    layerExpansion: expansion,
    finalLayer: final,
    /** Layers that end up thinner than this, relative to the cell, are left out: a tenth, or a quarter of thin ones. */
    leastThickness: Number(Math.min(0.1, thickness / 4).toPrecision(3)),
    boxes: plan.boxes,
    parts,
    finerParts: parts.filter((part) => part.level > mesh.surfaceLevel.value),
    wheels: parts.filter((part) => part.wheel !== null),
    relaxation: plan.iterations.relaxation.value,
    turbulenceRelaxation: plan.iterations.turbulenceRelaxation.value,
    mostIterations: kind === "first-order" ? plan.iterations.firstOrder.value : plan.iterations.most.value,
    writeEvery: kind === "first-order" ? plan.iterations.firstOrder.value : plan.iterations.writeEvery.value,
  };
}

export type CaseView = ReturnType<typeof caseView>;
