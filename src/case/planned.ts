import type { Planned } from "./plan.js";

export const planned = <T>(value: T, unit: string, reason: string, source: string): Planned<T> => ({ value, unit, reason, source });

/** Sources that many numbers of a plan share, worded once. */
export const source = {
  study: "study file",
  geometry: "measured on the body",
  solver: "measured with the solver (OpenFOAM v1912)",
  practice: "common practice",
  axes: "SAE J1594",
  domain: "common practice; a bluff body settled in a smaller domain (measured with the solver, OpenFOAM v1912)",
  boxes:
    "scaled from the boxes of a bluff body that settled within 2 % of its published drag (measured with the solver, OpenFOAM v1912)",
  definition: "definition",
  cellCount: "cell count formula, within 7 % on 15 meshes of a bluff body (OpenFOAM v1912)",
} as const;

/** Metres as millimetres with three digits, as text. */
export const millimetres = (metres: number): string => `${Number((1000 * metres).toPrecision(3))} mm`;
