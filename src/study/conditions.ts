import { folderName } from "./names.js";
import type { Condition, Study } from "./study.js";

/**
 * The points of a study's sweep, one per speed, in the order of the file. Names carry the speed in m/s with two decimals at most, as
 * many as it takes to keep the points apart (`30ms`, `27.78ms`).
 */
export function conditionsOf(study: Study): Condition[] {
  let names: string[] = [];
  for (let decimals = 2; decimals <= 12; decimals++) {
    names = study.speeds.map((speed) => `${Number(speed.toFixed(decimals))}ms`);
    if (new Set(names).size === names.length) break;
  }
  return study.speeds.map((speed, k) => ({ name: names[k]!, speed, yaw: 0, ground: study.ground }));
}

/** Name of the folder of a case, safe for shells and dictionaries: `open-bed-30ms`. */
export function caseName(variant: string, condition: Condition): string {
  return `${folderName(variant)}-${condition.name}`;
}
