import type { TwoEquationModel } from "../flow/inlet.js";
import type { LengthUnit, SignedAxis } from "../geometry/survey.js";

/** A study file, validated, every quantity in SI, every path absolute. What the file leaves out has its default here. */
export interface Study {
  name: string;
  question: string | null;
  /** The study file, and the folder that relative paths and the cases refer to. */
  path: string;
  folder: string;
  /** kelvin, pascal, 0..1 */
  air: { temperature: number; pressure: number; humidity: number };
  /** m/s, and radians, positive with the air from the left: every speed is computed at every yaw */
  speeds: number[];
  yaws: number[];
  ground: "moving" | "fixed";
  baseline: string;
  variants: Variant[];
  body: {
    unit: LengthUnit;
    travel: SignedAxis;
    up: SignedAxis;
    /** metres: of the lowest point above the ground */
    clearance: number;
    /** metres; auto: from the wheels of the baseline; none: the body has no axles, moments use the overall length */
    wheelbase: number | "auto" | "none";
    /** m², of the whole vehicle; auto: frontal area of the baseline */
    referenceArea: number | "auto";
  };
  parts: PartRule[];
  /** shift: of the grid along the vehicle, as a share of a background cell */
  mesh: { cells: number; half: "auto" | boolean; yPlus: number; layers: number; shift: number };
  solver: { turbulence: TwoEquationModel; mode: "steady"; start: "ladder" | "cold"; relaxation: number; mostIterations: number };
  /** Half-widths wanted, as coefficients; confidence 0..1 */
  stop: { drag: number; lift: number; confidence: number };
}

export interface Variant {
  name: string;
  files: string[];
}

/** A pattern over part names (`*` any run of characters) and how the parts that match are treated. */
export interface PartRule {
  name: string;
  match: string;
  rotating: boolean;
}

/** One point of the study's sweep. m/s, radians. */
export interface Condition {
  /** Folder-safe name, such as `30.0ms`. */
  name: string;
  speed: number;
  yaw: number;
  ground: "moving" | "fixed";
}
