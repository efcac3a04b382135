import { join } from "node:path";
import { caseName, conditionsOf } from "../study/conditions.js";
import type { Condition, Study, Variant } from "../study/study.js";

export interface StudyCase {
  path: string;
  variant: Variant;
  condition: Condition;
}

/** The cases of a study and the folders they live in: the baseline first, then the variants in the order of the file. */
export function studyCases(study: Study): StudyCase[] {
  const ordered = [...study.variants].sort((a, b) => Number(b.name === study.baseline) - Number(a.name === study.baseline));
  return conditionsOf(study).flatMap((condition) =>
    ordered.map((variant) => ({ path: join(study.folder, "cases", caseName(variant.name, condition)), variant, condition })),
  );
}
