import type { Finding } from "../finding.js";
import type { Vector3 } from "../geometry/vector.js";

/** A mean and the half-width of its 95 % interval; null half-width when no interval can be given. */
export interface Estimate {
  value: number;
  halfWidth: number | null;
}

/** One line of the ledger: coefficients on the run's reference, and forces in newtons, of the whole vehicle. Null: cannot be known. */
export interface Entry {
  cd: Estimate;
  cl: Estimate;
  cs: Estimate | null;
  clFront: Estimate | null;
  clRear: Estimate | null;
  cm: Estimate | null;
  /** At yaw, drag along the air and side force to its right (wind axes); null at zero yaw and where it is not known. */
  cdWind: Estimate | null;
  csWind: Estimate | null;
  cdPressure: Estimate | null;
  cdFriction: Estimate | null;
  /** m² */
  cda: Estimate | null;
  /** N */
  drag: Estimate | null;
  lift: Estimate | null;
  side: Estimate | null;
}

export interface Reference {
  /** m², whole vehicle */
  area: number | null;
  /** m */
  length: number | null;
  centre: Vector3 | null;
  /** m/s */
  speed: number | null;
  /** kg/m³ */
  density: number | null;
  symmetryFactor: 1 | 2;
  wheelbase: number | null;
  /** Where each value came from: "run card", "header of ...", "option". */
  sources: Record<string, string>;
}

export interface LedgerRun {
  path: string;
  variant: string;
  condition: string;
  reference: Reference;
  /** The window all entries share: iterations or times, rows, effective samples of the total drag. */
  window: { from: number; to: number; rows: number; effectiveSamples: number };
  total: Entry;
  parts: ({ name: string } & Entry)[];
  closing: { ok: boolean; worst: number; message: string };
  /** Set when the histories are recorded ones, shipped with the project. */
  recorded: string | null;
  findings: Finding[];
}
