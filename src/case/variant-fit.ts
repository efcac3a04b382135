import { inputProblem } from "../errors.js";
import { type Finding, finding } from "../finding.js";
import { placementOf } from "../geometry/place.js";
import type { Box } from "../geometry/vector.js";
import type { Study } from "../study/study.js";
import { caseBounds, wholeBounds, wholeFrontalArea } from "./body-in-case.js";
import { millimetres } from "./planned.js";
import { midPlane, type StudyFrame, type VariantBody } from "./study-frame.js";

/** Share of the baseline's distance to a face of the domain that a variant must keep. */
const leastDistance = 0.5;
/** m: what a lowest point may differ by without a word. */
const sameHeight = 1e-3;
/** Body lengths that mid-planes may lie apart. */
const samePlane = 5e-4;
/** Frontal area over cross-section of the tunnel from which drag needs a correction. */
const mostBlockage = 0.015;

/**
 * Whether a variant can stand in the domain of the baseline; what is odd about it there. Places in metres, file axes.
 *
 * @throws Problem(input) `variant-too-large`, `variant-below-ground`, `variant-off-centre`, `variant-other-half`.
 */
export function fitVariant(study: Study, frame: StudyFrame, body: VariantBody): Finding[] {
  const { survey, variant } = body;
  const where = `${study.path}, variant ${variant}`;
  const bounds = wholeBounds(survey, frame.placement);
  requireRoom(frame, bounds, variant, where);
  requirePlane(study, frame, body, where);
  return [...groundFindings(study, frame, bounds, variant, where), ...blockageFindings(frame, body)];
}

function requireRoom({ bounds: baseline, grid, side }: StudyFrame, bounds: Box, variant: string, where: string): void {
  const { domain } = grid;
  // In a half domain the plane of symmetry is no wall; the one wall there is counts.
  const wall = side === -1 ? -domain.min[1] : domain.max[1];
  const reach = (box: Box): number => Math.max(Math.abs(box.min[1]), Math.abs(box.max[1]));
  const rooms: [string, (box: Box) => number][] = [
    ["ahead", (box) => box.min[0] - domain.min[0]],
    ["behind", (box) => domain.max[0] - box.max[0]],
    ["beside", (box) => wall - reach(box)],
    ["above", (box) => domain.max[2] - box.max[2]],
  ];
  for (const [direction, room] of rooms) {
    const left = room(bounds);
    const planned = room(baseline);
    if (left >= leastDistance * planned) continue;
    throw inputProblem({
      code: "variant-too-large",
      message: `Variant '${variant}' leaves ${left.toFixed(2)} m ${direction} it in the domain of the baseline, which has ${planned.toFixed(2)} m there: the walls would act on one and not on the other.`,
      where,
      remedy: "Check its unit and position against the baseline's; if it is right, make the larger body the baseline.",
    });
  }
}

function requirePlane(study: Study, frame: StudyFrame, { survey, variant }: VariantBody, where: string): void {
  if (frame.side === 0) return;
  const { travel, up, unit } = study.body;
  const turned = { ...placementOf({ travel, up, unit }, [0, 0, 0]), scale: 1 };
  const off = midPlane(survey, turned) + frame.placement.shift[1];
  const { min, max } = caseBounds(survey.bounds, frame.placement);
  if (Math.abs(off) > samePlane * survey.extents.length)
    throw inputProblem({
      code: "variant-off-centre",
      message: `The mid-plane of variant '${variant}' lies ${millimetres(Math.abs(off))} beside the baseline's: half models would be cut at different places.`,
      where,
      remedy: "Move the body onto the baseline's mid-plane, or set mesh.half to false.",
    });
  if (survey.symmetry.kind === "half" && Math.sign(min[1] + max[1]) !== frame.side)
    throw inputProblem({
      code: "variant-other-half",
      message: `Variant '${variant}' is the ${frame.side === 1 ? "left" : "right"} half of a body, the baseline the ${frame.side === 1 ? "right" : "left"} half.`,
      where,
      remedy: "Give the same half of all variants.",
    });
}

function groundFindings(study: Study, frame: StudyFrame, bounds: Box, variant: string, where: string): Finding[] {
  const low = bounds.min[2];
  if (variant === study.baseline || Math.abs(low - study.body.clearance) <= sameHeight) return [];
  const { surfaceCell } = frame.grid;
  if (low < -surfaceCell)
    throw inputProblem({
      code: "variant-below-ground",
      message: `Variant '${variant}' reaches ${millimetres(-low)} below the ground, which is at the lowest point of the baseline${study.body.clearance > 0 ? " less the clearance" : ""}: more than a surface cell of it would be cut off.`,
      where,
      remedy: "Raise the body, or make the variant that reaches lowest the baseline.",
    });
  return [
    low < 0
      ? finding(
          "variant-sunk",
          "warning",
          `Variant '${variant}' reaches ${millimetres(-low)} below the ground of the baseline; what lies below is cut off.`,
          "Give all variants the same lowest point, unless the tyres are meant to be flatter.",
        )
      : finding(
          "variant-hovers",
          "warning",
          `The lowest point of variant '${variant}' is ${millimetres(low)} above the ground of the baseline.`,
          "Give all variants the same lowest point, unless it is meant to hover.",
        ),
  ];
}

function blockageFindings({ grid: { domain } }: StudyFrame, { survey, variant }: VariantBody): Finding[] {
  const blockage = wholeFrontalArea(survey) / domain.crossSection;
  if (blockage <= 1.1 * mostBlockage) return [];
  return [
    finding(
      "variant-blocks",
      "warning",
      `Variant '${variant}' blocks ${(100 * blockage).toFixed(2)} % of the domain, more than the ${100 * mostBlockage} % that need no correction (common practice).`,
      "Make the largest body the baseline: the domain is made for it.",
    ),
  ];
}
