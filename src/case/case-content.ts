import { relative, sep } from "node:path";
import { asciiStl } from "../geometry/files/write-stl.js";
import { keepParts } from "../geometry/keep-parts.js";
import { place } from "../geometry/place.js";
import { packageVersion } from "../package-files.js";
import type { Study } from "../study/study.js";
import { caseBounds } from "./body-in-case.js";
import { sha256 } from "./hash.js";
import { rungPlan } from "./ladder.js";
import { listPlan } from "./list-plan.js";
import type { CasePlan } from "./plan.js";
import { type CaseFile, renderCase, templatesHash } from "./render.js";
import type { RunCard } from "./run-card.js";
import type { VariantBody } from "./study-frame.js";

/** All files of a case and its run card, ready to be written. */
export interface CaseContent {
  files: CaseFile[];
  card: RunCard;
}

/** `inputs`: sha256 of every geometry file of the study by path. Pure but for reading the package's own templates. */
export function caseContent(study: Study, plan: CasePlan, body: VariantBody, inputs: ReadonlyMap<string, string>): CaseContent {
  const files = [...renderCase(plan), surfaceFile(plan, body)];
  return { files, card: cardOf(study, plan, body, inputs, files) };
}

/** The computed side's parts in case axes: one solid per part, named as its patch. */
function surfaceFile(plan: CasePlan, { set }: VariantBody): CaseFile {
  const inside = new Set(plan.parts.map(({ patch }) => patch));
  const kept = keepParts(set, (patch) => inside.has(patch));
  return { path: "constant/triSurface/body.stl", content: asciiStl(place(kept, plan.placement)), executable: false };
}

function cardOf(
  study: Study,
  plan: CasePlan,
  { survey }: VariantBody,
  inputs: ReadonlyMap<string, string>,
  files: CaseFile[],
): RunCard {
  const { reference, placement } = plan;
  const inside = new Set(plan.parts.map(({ patch }) => patch));
  const variant = study.variants.find(({ name }) => name === plan.variant)!;
  return {
    schema: "dragledger/run-card/1",
    tool: { name: "dragledger", version: packageVersion },
    study: { name: study.name, question: study.question, baseline: study.baseline },
    variant: plan.variant,
    condition: plan.condition,
    reference: {
      area: reference.area.value,
      length: reference.length.value,
      centre: reference.centre.value,
      speed: plan.flow.speed.value,
      density: plan.air.density.value,
      symmetryFactor: plan.half.value ? 2 : 1,
    },
    wheelbase: reference.wheelbase?.value ?? null,
    parts: plan.parts.map(({ name, patch }) => ({ name, patch })),
    leftOut: survey.parts.filter(({ patch }) => !inside.has(patch)).map(({ name }) => name),
    placement,
    body: { bounds: caseBounds(survey.bounds, placement), frontalArea: survey.frontalArea.value },
    mesh: meshOf(plan),
    ...(plan.start.value === "cold"
      ? {}
      : {
          ladder: plan.ladder.map((rung) => ({
            folder: rung.folder,
            mesh: meshOf(rungPlan(plan, rung)),
            mostIterations: rung.iterations.value,
          })),
        }),
    stop: { drag: plan.stop.drag.value, lift: plan.stop.lift.value, confidence: plan.stop.confidence.value },
    mostIterations: plan.iterations.most.value,
    plan: listPlan(plan),
    hashes: {
      inputs: variant.files.map((path) => ({
        path: relative(study.folder, path).split(sep).join("/"),
        sha256: inputs.get(path)!,
      })),
      templates: templatesHash(),
      files: Object.fromEntries(files.map(({ path, content }) => [path, sha256(content)])),
    },
  };
}

const meshOf = ({ domain, mesh, boxes }: CasePlan): RunCard["mesh"] => ({
  domain: { min: domain.min.value, max: domain.max.value },
  baseCell: domain.baseCell.value,
  divisions: domain.divisions.value,
  surfaceLevel: mesh.surfaceLevel.value,
  boxes: boxes.map(({ name, box, level }) => ({ name, box, level })),
  predictedCells: mesh.predictedCells.value,
});
