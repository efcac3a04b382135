import { inputProblem } from "../errors.js";
import type { Survey } from "../geometry/survey.js";
import type { Box } from "../geometry/vector.js";
import type { Study } from "../study/study.js";
import { wholeFrontalArea } from "./body-in-case.js";
import type { Planned } from "./plan.js";
import { planned, source } from "./planned.js";

/** m², whole vehicle, held for all variants: a difference of coefficients is then a difference of forces. */
export function referenceArea(study: Study, baseline: Survey): Planned<number> {
  const asked = study.body.referenceArea;
  if (asked !== "auto") return planned(asked, "m2", "given, of the whole vehicle, held for all variants", source.study);
  const half = baseline.symmetry.kind === "half";
  return planned(
    wholeFrontalArea(baseline),
    "m2",
    `frontal area of the baseline '${study.baseline}' along travel${half ? ", both halves" : ""}, held for all variants`,
    source.axes,
  );
}

/**
 * m; null when the study says that the body has no axles.
 *
 * @throws Problem(input) `no-wheelbase` when it is to be found and the baseline has no two axles.
 */
export function wheelbaseOf(study: Study, baseline: Survey): Planned<number> | null {
  const asked = study.body.wheelbase;
  if (asked === "none") return null;
  if (asked !== "auto") return planned(asked, "m", "given", source.study);
  if (baseline.wheelbase === null)
    throw inputProblem({
      code: "no-wheelbase",
      message: `body.wheelbase is auto, but the baseline '${study.baseline}' has no front and rear axle that could be found.`,
      where: `${study.path} (body.wheelbase)`,
      remedy: "Name the wheels in a rule with rotating: true, give the wheelbase as a length, or write wheelbase: none.",
    });
  // To a micrometre: finer digits are those of the file's numbers, not of the vehicle.
  return planned(
    Number(baseline.wheelbase.toFixed(6)),
    "m",
    "distance of the axles fitted to the wheels of the baseline",
    source.geometry,
  );
}

/** m: what moments are divided by. */
export function referenceLength(wheelbase: Planned<number> | null, bounds: Box): Planned<number> {
  return wheelbase === null
    ? planned(
        bounds.max[0] - bounds.min[0],
        "m",
        "overall length of the baseline: without axles there is no wheelbase",
        source.practice,
      )
    : planned(wheelbase.value, "m", "the wheelbase, so that lift and pitching moment give the axles' shares", source.axes);
}
