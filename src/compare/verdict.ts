import type { DifferenceVerdict } from "./comparison.js";

export interface Evidence {
  delta: number;
  halfWidth: number | null;
  /** spread caused by the mesh alone; null when it was not measured */
  floor: number | null;
  /** nothing is known that the cases do not share */
  comparable: boolean;
  /** domain, grid and settings of both are known */
  checked: boolean;
  /** both histories have a usable mean */
  settled: boolean;
}

/**
 * resolved: larger than what the histories and the mesh leave open together; direction-only: larger than what the histories leave open,
 * while the mesh's share is unknown or larger, or the cases are not known to be alike; not-resolved: anything else.
 */
export function verdictOf({ delta, halfWidth, floor, comparable, checked, settled }: Evidence): {
  verdict: DifferenceVerdict;
  reason: string;
} {
  if (halfWidth === null || !Number.isFinite(delta) || !Number.isFinite(halfWidth))
    return { verdict: "not-resolved", reason: "no interval can be given" };
  const size = Math.abs(delta);
  if (size <= halfWidth) return { verdict: "not-resolved", reason: "smaller than its half-width" };
  if (!settled) return { verdict: "not-resolved", reason: "a history has not settled" };
  if (!comparable) return { verdict: "direction-only", reason: "A and B are not set up alike" };
  if (floor === null)
    return {
      verdict: "direction-only",
      reason: "larger than its half-width, but the spread caused by the mesh alone was not measured",
    };
  if (!checked) return { verdict: "direction-only", reason: "whether A and B are set up alike is not known" };
  if (size <= Math.hypot(halfWidth, floor))
    return { verdict: "direction-only", reason: "larger than its half-width, but not than that and the floor together" };
  return { verdict: "resolved", reason: "larger than half-width and floor together" };
}
