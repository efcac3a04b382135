import type { Finding } from "../finding.js";

export type DifferenceVerdict = "resolved" | "direction-only" | "not-resolved";

export interface Difference {
  /** cd, cl, clFront, clRear, cs, cm, cda, drag, lift */
  name: string;
  /** null for the whole vehicle */
  part: string | null;
  /** values of A and B; null where the part is missing in one of them */
  a: number | null;
  b: number | null;
  /** B minus A; a missing part counts as zero */
  delta: number;
  halfWidth: number | null;
  /** spread caused by the mesh alone; null when not measured */
  floor: number | null;
  verdict: DifferenceVerdict;
  reason: string;
}

export interface Comparison {
  a: { path: string; variant: string; condition: string };
  b: { path: string; variant: string; condition: string };
  comparable: boolean;
  differences: Difference[];
  /** smallest difference of the total drag coefficient that this pair can resolve */
  smallestResolvable: number | null;
  /** The answer in one sentence. */
  sentence: string;
  findings: Finding[];
}
