import type { TwoEquationModel } from "../flow/inlet.js";
import type { Orientation } from "../geometry/survey.js";
import type { Box, Vector3 } from "../geometry/vector.js";
import type { Condition } from "../study/study.js";

/** A number that can explain itself. Unit is "" for a ratio or a name. */
export interface Planned<T> {
  value: T;
  unit: string;
  reason: string;
  /** Where the rule comes from: a standard, a paper, "study file", "measured with the solver on ...", "common practice". */
  source: string;
}

/** A row of the plan as printed and as written to the run card: key is the path in the plan, such as `domain.min`. */
export interface PlannedNumber extends Planned<number | string | number[]> {
  key: string;
}

export interface PlannedPart {
  name: string;
  patch: string;
  /** refinement level of the surface */
  level: number;
  /** outermost layer, relative to the cells of this level */
  finalLayer: number;
  /** Set when the part turns with the road: centre and right-pointing axis in case axes, metres; radius in metres; rad/s. */
  wheel: { centre: Vector3; axis: Vector3; radius: number; omega: number } | null;
}

export interface RefinementBox {
  name: string;
  box: Box;
  level: number;
}

/** A coarser grid on the way to the case's own. */
export interface PlannedRung {
  /** of the rung in the case, such as `ladder/1` */
  folder: string;
  /** levels that its cells on and around the body are above those of the case: each doubles the edge */
  coarser: Planned<number>;
  predictedCells: Planned<number>;
  iterations: Planned<number>;
}

/**
 * Every number of one case before anything is written. Case axes (SAE J1594): x rearward, y right, z up, origin on the ground at
 * mid-wheelbase and mid-track; metres, SI.
 */
export interface CasePlan {
  study: string;
  variant: string;
  condition: Condition;
  /** How file coordinates become case coordinates: x_case = scale · R · x_file + shift. */
  placement: { orientation: Orientation; scale: number; rotation: [Vector3, Vector3, Vector3]; shift: Vector3 };
  half: Planned<boolean>;
  air: { density: Planned<number>; kinematicViscosity: Planned<number> };
  flow: {
    /** m/s: of the air relative to the vehicle, the one that coefficients are made with */
    speed: Planned<number>;
    velocity: Planned<Vector3>;
    /** m/s: of the road relative to the vehicle, rearward, where it moves */
    road: Planned<number>;
    reynolds: Planned<number>;
    turbulence: Planned<TwoEquationModel>;
    k: Planned<number>;
    /** of the two the one that the turbulence model has */
    omega?: Planned<number>;
    epsilon?: Planned<number>;
    nut: Planned<number>;
  };
  reference: {
    /** m², whole vehicle */
    area: Planned<number>;
    /** m: wheelbase, or overall length when there are no axles */
    length: Planned<number>;
    centre: Planned<Vector3>;
    /** null without axles */
    wheelbase: Planned<number> | null;
  };
  domain: {
    min: Planned<Vector3>;
    max: Planned<Vector3>;
    baseCell: Planned<number>;
    /** m: of the grid's planes rearward from the origin */
    shift: Planned<number>;
    /** cells of the background mesh along x, y, z */
    divisions: Planned<Vector3>;
    /** ratio, whole vehicle in whole tunnel */
    blockage: Planned<number>;
    /** a point of the flow, off every face */
    keepPoint: Planned<Vector3>;
  };
  mesh: {
    surfaceLevel: Planned<number>;
    featureAngle: Planned<number>;
    layers: Planned<number>;
    /** m: height of the wall cell (twice the distance of its centre) */
    firstCell: Planned<number>;
    layerExpansion: Planned<number>;
    /** relative to the local cell, as the mesher wants it */
    finalLayer: Planned<number>;
    cellsBetweenLevels: Planned<number>;
    predictedCells: Planned<number>;
    predictedMemory: Planned<number>;
    predictedMeshSeconds: Planned<number>;
    predictedIterationSeconds: Planned<number>;
  };
  boxes: RefinementBox[];
  parts: PlannedPart[];
  /** ladder or cold, as the study has it */
  start: Planned<"ladder" | "cold">;
  /** Coarser grids that are solved one after the other before this one, the coarsest first; none for a cold start, or on coarse grids. */
  ladder: PlannedRung[];
  iterations: {
    most: Planned<number>;
    /** in first order, before all others, where the flow starts from uniform */
    firstOrder: Planned<number>;
    writeEvery: Planned<number>;
    /** share of the change that is taken: of the velocity, and of k and omega or epsilon */
    relaxation: Planned<number>;
    turbulenceRelaxation: Planned<number>;
  };
  stop: { drag: Planned<number>; lift: Planned<number>; confidence: Planned<number> };
}
