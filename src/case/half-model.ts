import { inputProblem } from "../errors.js";
import type { Condition, Study } from "../study/study.js";
import type { Planned } from "./plan.js";
import { planned, source } from "./planned.js";
import type { VariantBody } from "./study-frame.js";

/**
 * Whether one half of the vehicle is computed, the other being its mirror image: for all cases of a study or for none, because a
 * half and a whole mesh of one body differ by more than most shape changes (8 counts, measured with the solver).
 *
 * @throws Problem(input) `half-and-whole`, `half-with-yaw`, `not-symmetric`, `half-body`.
 */
export function halfOf(study: Study, bodies: VariantBody[], conditions: Condition[]): Planned<boolean> {
  const wish = study.mesh.half;
  const crooked = bodies.find(({ survey }) => survey.symmetry.kind === "none");
  const halves = bodies.filter(({ survey }) => survey.symmetry.kind === "half");
  const yawed = conditions.find(({ yaw }) => yaw !== 0);
  const where = `${study.path} (mesh.half)`;
  if (halves.length > 0 && halves.length < bodies.length) {
    const whole = bodies.find(({ survey }) => survey.symmetry.kind !== "half")!;
    throw inputProblem({
      code: "half-and-whole",
      message: `Variant '${halves[0]!.variant}' is half a body and '${whole.variant}' is a whole one: they cannot share a domain.`,
      where: study.path,
      remedy: "Give all variants as halves or all as whole bodies.",
    });
  }
  if (yawed && (wish === true || halves.length > 0))
    throw inputProblem({
      code: "half-with-yaw",
      message: `Half a body cannot be computed at yaw (condition ${yawed.name}): the flow has no plane of symmetry.`,
      where,
      remedy: "Give whole bodies and set mesh.half to false, or set yaw to 0.",
    });
  if (wish === true && crooked)
    throw inputProblem({
      code: "not-symmetric",
      message: `mesh.half is true, but variant '${crooked.variant}' is not mirror symmetric: the two sides differ by up to ${(1000 * crooked.survey.symmetry.deviation).toPrecision(2)} mm.`,
      where,
      remedy: "Compute the whole body (mesh.half: false), or make both sides alike.",
    });
  if (wish === false && halves.length > 0)
    throw inputProblem({
      code: "half-body",
      message: `mesh.half is false, but variant '${halves[0]!.variant}' is half a body: all of it lies on one side of a plane.`,
      where,
      remedy: "Set mesh.half to auto, or give the whole body.",
    });
  if (wish !== "auto") return planned(wish, "", "asked for", source.study);
  if (yawed) return planned(false, "", `the wind comes from the side in condition ${yawed.name}`, source.definition);
  if (crooked)
    return planned(
      false,
      "",
      `variant '${crooked.variant}' is not mirror symmetric (its sides differ by ${(1000 * crooked.survey.symmetry.deviation).toPrecision(2)} mm), and all cases of a study are alike`,
      source.geometry,
    );
  return planned(
    true,
    "",
    "all variants are mirror symmetric and the air comes from straight ahead: half the cells, half the time; steady wakes that sway are not seen",
    source.geometry,
  );
}
