import type { Vector3 } from "./geometry/vector.js";

/** Something noticed about a body, a history or a ledger: data, never an exception. The command decides what it means. */
export interface Finding {
  /** Stable kebab-case name. */
  code: string;
  /** error: the answer would be wrong; warning: it may be; note: worth knowing. */
  severity: "error" | "warning" | "note";
  /** Part, quantity or file the finding is about; null for the whole. */
  part: string | null;
  count: number;
  /** Up to ten places, metres, in the axes of the input files. Empty where a place means nothing. */
  places: Vector3[];
  /** What was found and why it matters, with figures. */
  message: string;
  /** What to do. */
  remedy: string;
}

export function finding(
  code: string,
  severity: Finding["severity"],
  message: string,
  remedy: string,
  more: Partial<Pick<Finding, "part" | "count" | "places">> = {},
): Finding {
  return { code, severity, part: more.part ?? null, count: more.count ?? 1, places: more.places ?? [], message, remedy };
}
