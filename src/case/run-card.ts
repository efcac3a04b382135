import type { Orientation } from "../geometry/survey.js";
import type { Box, Vector3 } from "../geometry/vector.js";
import type { Condition } from "../study/study.js";
import type { PlannedNumber } from "./plan.js";

export const runCardName = "dragledger.json";

/** What a case says of itself: written beside its dictionaries, read by every later step. SI; case axes. */
export interface RunCard {
  schema: "dragledger/run-card/1";
  tool: { name: "dragledger"; version: string };
  study: { name: string; question: string | null; baseline: string };
  variant: string;
  condition: Condition;
  /** Reference of the whole vehicle. `symmetryFactor` is 2 for a half model: forces of the solver times this are the vehicle's. */
  reference: { area: number; length: number; centre: Vector3; speed: number; density: number; symmetryFactor: 1 | 2 };
  wheelbase: number | null;
  parts: { name: string; patch: string }[];
  /** Names of parts of the body that have no patch: those on the side that a half model leaves out. */
  leftOut?: string[];
  placement: { orientation: Orientation; scale: number; rotation: [Vector3, Vector3, Vector3]; shift: Vector3 };
  body: { bounds: Box; frontalArea: number };
  mesh: {
    domain: Box;
    baseCell: number;
    divisions: Vector3;
    surfaceLevel: number;
    boxes: { name: string; box: Box; level: number }[];
    predictedCells: number;
  };
  /** Coarser grids that the case is started from, the coarsest first: folder in the case, mesh, iterations. Missing: a cold start. */
  ladder?: { folder: string; mesh: RunCard["mesh"]; mostIterations: number }[];
  stop: { drag: number; lift: number; confidence: number };
  mostIterations: number;
  plan: PlannedNumber[];
  /** sha256: of every geometry file, of the templates, and of every file written (relative path). */
  hashes: { inputs: { path: string; sha256: string }[]; templates: string; files: Record<string, string> };
  /** Set when results were shipped with the project instead of computed here. */
  recorded?: string;
}
