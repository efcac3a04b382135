import type { PlannedNumber } from "../case/plan.js";
import type { Comparison } from "../compare/comparison.js";
import type { TriangleSet } from "../geometry/triangle-set.js";
import type { Segment } from "../history/history.js";
import type { QuantitySettling } from "../history/settling.js";
import type { LedgerRun } from "../ledger/ledger.js";
import type { Condition } from "../study/study.js";

/** Everything a report is made of; nothing in it is a file or a process. */
export interface ReportInput {
  /** name of the study, or of the cases */
  title: string;
  question: string | null;
  /** Baseline first. */
  runs: ReportedRun[];
  comparisons: Comparison[];
  bodies: ReportedBody[];
  toolVersion: string;
}

/** A variant's whole body in case axes (x rearward, y right, z up), metres. */
export interface ReportedBody {
  variant: string;
  /** the case whose own surface this is; left out for a variant's body, which serves all of its cases */
  path?: string;
  set: TriangleSet;
}

export interface ReportedRun {
  ledger: LedgerRun;
  history: RunHistory;
  settling: QuantitySettling[];
  /** empty for a case made elsewhere */
  plan: PlannedNumber[];
  condition: Condition | null;
  /** Parts of the body on the side that a half model leaves out. */
  leftOut: string[];
  mesh: MeshSummary | null;
  origin: RunOrigin;
}

/** The whole vehicle's drag and lift over the iterations, with the rows that were averaged. */
export interface RunHistory {
  /** iterations of a steady run, or times in seconds: one per row, increasing */
  iterations: Float64Array;
  cd: HistorySeries;
  cl: HistorySeries;
  /** Rows before the window: start-up, and what was left out to hold whole periods. */
  startUp: number;
  /** first and last iteration or time of the window */
  from: number;
  to: number;
}

export interface HistorySeries {
  values: Float64Array;
  mean: number;
  halfWidth: number | null;
}

export interface MeshSummary {
  cells: number | null;
  /** of the mesh checker; null: its log ends before a result */
  ok: boolean | null;
  failures: string[];
  /** degrees */
  maxNonOrthogonality: number | null;
  maxSkewness: number | null;
  parts: PartMesh[];
}

/** The mesh on one part. */
export interface PartMesh {
  part: string;
  faces: number | null;
  /** mean over the faces, and what was asked for */
  layers: number | null;
  layersAsked: number | null;
  yPlus: { least: number; mean: number; most: number } | null;
}

/** Where a run's numbers come from. Paths are as the page shows them. */
export interface RunOrigin {
  path: string;
  /** the program that wrote the case, with its version; null for a case made elsewhere */
  writtenBy: string | null;
  /** the solver with its build, from its log */
  solver: string | null;
  templates: string | null;
  inputs: { path: string; sha256: string }[];
  segments: Segment[];
}
