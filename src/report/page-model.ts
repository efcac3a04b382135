import type { PlannedNumber } from "../case/plan.js";
import type { DifferenceVerdict } from "../compare/comparison.js";
import type { Vector3 } from "../geometry/vector.js";

/** Everything the page shows, as plain data; texts are not yet escaped. */
export interface PageModel {
  title: string;
  question: string | null;
  /** Why the results are not of a run made here; null when they are. */
  recorded: string | null;
  answers: Answer[];
  comparisons: ComparisonTable[];
  runs: RunSection[];
  bodies: NamedBody[];
  plan: PlannedNumber[];
  cautions: string[];
  provenance: { run: string; rows: [string, string][] }[];
  toolVersion: string;
}

export interface Answer {
  sentence: string;
  verdict: DifferenceVerdict;
}

export interface ComparisonTable {
  a: string;
  b: string;
  comparable: boolean;
  rows: { quantity: string; a: string; b: string; difference: string; verdict: DifferenceVerdict }[];
  parts: { part: string; drag: string; lift: string; verdict: DifferenceVerdict }[];
  /** SVG of the drag difference by part */
  chart: string;
  remarks: string[];
}

export interface RunSection {
  name: string;
  reference: string;
  window: string;
  ledger: { part: string; cells: string[] }[];
  closing: { ok: boolean; message: string };
  charts: { title: string; svg: string }[];
  settling: { quantity: string; verdict: string; cells: string[] }[];
  mesh: [string, string][];
  remarks: string[];
}

/** One part of a body for the viewer: corners on a grid of 65535 steps over the part's own bounding box. */
export interface PackedPart {
  name: string;
  /** metres, case axes */
  min: Vector3;
  max: Vector3;
  vertices: number;
  triangles: number;
  /** base64 of Uint16Array, 3 per vertex, little-endian */
  positions: string;
  /** base64 of Uint32Array, 3 per triangle, little-endian */
  indices: string;
}

export interface PackedBody {
  parts: PackedPart[];
}

export interface NamedBody {
  variant: string;
  body: PackedBody;
}
