import type { Finding } from "../finding.js";

export type SettlingVerdict = "settled" | "not-yet" | "drifting" | "oscillating" | "diverged" | "zero" | "too-short" | "no-data";

/**
 * What is known of the mean of one quantity. `settled` and `oscillating` (a limit cycle averaged over whole periods) have a
 * usable mean.
 */
export interface Settling {
  verdict: SettlingVerdict;
  /** Mean over the window; NaN without a usable window. */
  mean: number;
  /** Half-width of the interval at the asked confidence; Infinity when unknown. */
  halfWidth: number;
  /** Rows cut from the start. */
  startUp: number;
  /** Rows of the window: [firstRow, firstRow + rows). */
  firstRow: number;
  rows: number;
  effectiveSamples: number;
  /** Dominant period in rows; null when there is none. */
  period: number | null;
  /** Rows still needed for the target, by extrapolation; null when settled or when no amount would do. */
  stillNeeded: number | null;
  standardDeviation: number;
  findings: Finding[];
}

export interface QuantitySettling extends Settling {
  /** cd, cl, clFront, clRear, cs, cm */
  name: string;
  /** null for the whole vehicle */
  part: string | null;
}
