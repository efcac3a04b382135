import { folderName } from "./names.js";
import type { Condition, Study } from "./study.js";

/**
 * The points of a study's sweep, every yaw at the first speed, then at the next, in the order of the file. Names carry the speed in m/s and
 * the yaw in degrees where it is not zero, with two decimals at most, or as many as it takes to keep the points apart (`30ms`,
 * `27.78ms`, `30ms-yaw-5deg`).
 */
export function conditionsOf(study: Study): Condition[] {
  const speeds = told(study.speeds, (speed) => `${speed}ms`);
  const yaws = told(
    study.yaws.map((yaw) => (180 / Math.PI) * yaw),
    (yaw) => (yaw === 0 ? "" : `-yaw${yaw}deg`),
  );
  return study.speeds.flatMap((speed, k) =>
    study.yaws.map((yaw, i) => ({ name: `${speeds[k]!}${yaws[i]!}`, speed, yaw, ground: study.ground })),
  );
}

/** Words for values, with the fewest decimals from two up to twelve that tell them apart. */
function told(values: number[], word: (value: number) => string): string[] {
  let words: string[] = [];
  for (let decimals = 2; decimals <= 12; decimals++) {
    words = values.map((value) => word(value === 0 ? 0 : Number(value.toFixed(decimals))));
    const same = new Set(words).size < words.length || values.some((value, k) => value !== 0 && words[k] === word(0));
    if (!same) break;
  }
  return words;
}

/** Name of the folder of a case, safe for shells and dictionaries: `open-bed-30ms`. */
export function caseName(variant: string, condition: Condition): string {
  return `${folderName(variant)}-${condition.name}`;
}
