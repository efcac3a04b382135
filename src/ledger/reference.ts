import type { RunCard } from "../case/run-card.js";
import { inputProblem } from "../errors.js";
import type { Vector3 } from "../geometry/vector.js";
import type { Reference } from "./ledger.js";

/** What the user says of a case; wins over everything its files say. SI; of the whole vehicle. */
export interface ReferenceOverrides {
  area?: number | undefined;
  length?: number | undefined;
  speed?: number | undefined;
  density?: number | undefined;
  wheelbase?: number | undefined;
  centre?: Vector3 | undefined;
  half?: boolean | undefined;
}

/** What the files of a case made elsewhere say: header values of a coefficient table, density of a force object. */
export interface FileReference {
  area?: number | undefined;
  length?: number | undefined;
  speed?: number | undefined;
  centre?: Vector3 | undefined;
  /** table that the values above stand in */
  header: string;
  density?: number | undefined;
  densitySource: string;
}

/**
 * The reference of a run: options first, then the run card, then headers and dictionaries; what none of them says is null. Throws an
 * input problem for `half` without an area, since a header does not say whose area it holds.
 */
export function referenceOf(card: RunCard | null, files: FileReference, options: ReferenceOverrides, where: string): Reference {
  const sources: Record<string, string> = {};
  function pick<T>(key: string, option: T | undefined, carded: T | undefined, filed: T | undefined, fileSource: string): T | null {
    const choices: [T | undefined, string][] = [
      [option, "option"],
      [carded, "run card"],
      [filed, fileSource],
    ];
    for (const [value, source] of choices) {
      if (value === undefined) continue;
      sources[key] = source;
      return value;
    }
    return null;
  }
  const half = options.half ?? (card ? card.reference.symmetryFactor === 2 : false);
  if (card === null && half && options.area === undefined)
    throw inputProblem({
      code: "half-without-area",
      message:
        "The case is said to be a half model, but its tables do not say whether their area is that of the half or of the whole.",
      where,
      remedy: "Give the area of the whole vehicle with --area.",
    });
  if (options.half !== undefined || card) sources.symmetryFactor = options.half !== undefined ? "option" : "run card";
  return {
    area: pick("area", options.area, card?.reference.area, files.area, files.header),
    length: pick("length", options.length, card?.reference.length, files.length, files.header),
    centre: pick("centre", options.centre, card?.reference.centre, files.centre, files.header),
    speed: pick("speed", options.speed, card?.reference.speed, files.speed, files.header),
    density: pick("density", options.density, card?.reference.density, files.density, files.densitySource),
    symmetryFactor: half ? 2 : 1,
    wheelbase: pick("wheelbase", options.wheelbase, card?.wheelbase ?? undefined, undefined, ""),
    sources,
  };
}

/** Dynamic pressure times reference area, N per unit of coefficient; null when speed, density or area is unknown. */
export function forcePerCoefficient({ area, speed, density }: Reference): number | null {
  return area === null || speed === null || density === null ? null : 0.5 * density * speed ** 2 * area;
}
