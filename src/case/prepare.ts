import { relative } from "node:path";
import { inputProblem } from "../errors.js";
import { keepParts } from "../geometry/keep-parts.js";
import { place } from "../geometry/place.js";
import { readSurfaces } from "../geometry/read.js";
import { surveyBody } from "../geometry/survey-body.js";
import { asciiStl } from "../geometry/write-stl.js";
import { packageVersion } from "../package-files.js";
import { requireMatches, rotatingParts } from "../study/part-rules.js";
import type { Study, Variant } from "../study/study.js";
import { sha256OfFile } from "./hash.js";
import { listPlan } from "./list-plan.js";
import type { CasePlan } from "./plan.js";
import { planCase } from "./plan-case.js";
import { type CaseFile, renderCase, templatesHash } from "./render.js";
import { studyCases } from "./study-cases.js";
import { caseBounds, frameOf, type VariantBody } from "./study-frame.js";
import { type CaseContent, writeCase } from "./write-case.js";

export interface PlannedCase {
  path: string;
  variant: string;
  /** name of the condition */
  condition: string;
  plan: CasePlan;
  body: VariantBody;
}

export interface PreparedCase extends Omit<PlannedCase, "body"> {
  changed: boolean;
}

/**
 * Reads and surveys the bodies of a study and plans all of its cases; writes nothing. Throws an input problem for a body that is not
 * fit to mesh (unless `accept`) and for variants that cannot share a frame.
 */
export async function planStudy(study: Study, options: { accept?: boolean } = {}): Promise<PlannedCase[]> {
  const bodies = new Map<string, VariantBody>();
  for (const variant of study.variants) bodies.set(variant.name, await readBody(study, variant));
  const all = [...bodies.values()];
  requireMatches(
    study.parts,
    all.flatMap(({ set }) => set.parts.map(({ name }) => name)),
    study.path,
  );
  if (!options.accept) for (const body of all) requireFit(body);
  const frame = frameOf(study, all);
  return studyCases(study).map(({ path, variant, condition }) => {
    const body = bodies.get(variant.name)!;
    return { path, variant: variant.name, condition: condition.name, plan: planCase(study, frame, body, condition), body };
  });
}

/** Plans the cases of a study and writes those that are new or changed. Errors as in `planStudy` and `writeCase`. */
export async function prepareStudy(study: Study, options: { accept?: boolean; again?: boolean } = {}): Promise<PreparedCase[]> {
  const planned = await planStudy(study, options);
  const hashes = await inputHashes(study);
  const prepared: PreparedCase[] = [];
  for (const { body, ...each } of planned) {
    const { changed } = await writeCase(each.path, caseContent(study, each.plan, body, hashes), { again: options.again === true });
    prepared.push({ ...each, changed: changed.length > 0 });
  }
  return prepared;
}

async function readBody(study: Study, variant: Variant): Promise<VariantBody> {
  const set = await readSurfaces(variant.files);
  const wheelParts = rotatingParts(
    study.parts,
    set.parts.map(({ name }) => name),
  );
  const { unit, travel, up } = study.body;
  const survey = surveyBody(set, { unit, travel, up, ...(wheelParts.length > 0 ? { wheelParts } : {}) });
  return { variant: variant.name, set, survey };
}

function requireFit({ variant, survey }: VariantBody): void {
  if (survey.verdict !== "not-fit") return;
  const errors = survey.findings.filter((found) => found.severity === "error");
  throw inputProblem({
    code: "not-fit",
    message: `The body of variant '${variant}' is not fit to mesh: ${errors.map((found) => found.message).join(" ")}`,
    where: survey.files.map((file) => file.path).join(", "),
    remedy: "Mend the body (dragledger inspect shows where), or prepare with --accept to go on as it is.",
  });
}

async function inputHashes(study: Study): Promise<Map<string, string>> {
  const hashes = new Map<string, string>();
  for (const path of new Set(study.variants.flatMap(({ files }) => files))) hashes.set(path, await sha256OfFile(path));
  return hashes;
}

/** The files of one case and its run card. Pure but for the package's templates. */
export function caseContent(study: Study, plan: CasePlan, body: VariantBody, inputHash: Map<string, string>): CaseContent {
  const inside = new Set(plan.parts.map(({ patch }) => patch));
  const surface: CaseFile = {
    path: "constant/triSurface/body.stl",
    content: asciiStl(
      place(
        keepParts(body.set, (patch) => inside.has(patch)),
        plan.placement,
      ),
    ),
    executable: false,
  };
  const variant = study.variants.find(({ name }) => name === plan.variant)!;
  const card: CaseContent["card"] = {
    schema: "dragledger/run-card/1",
    tool: { name: "dragledger", version: packageVersion },
    study: { name: study.name, question: study.question, baseline: study.baseline },
    variant: plan.variant,
    condition: plan.condition,
    reference: {
      area: plan.reference.area.value,
      length: plan.reference.length.value,
      centre: plan.reference.centre.value,
      speed: plan.flow.speed.value,
      density: plan.air.density.value,
      symmetryFactor: plan.half.value ? 2 : 1,
    },
    wheelbase: plan.reference.wheelbase?.value ?? null,
    parts: plan.parts.map(({ name, patch }) => ({ name, patch })),
    placement: plan.placement,
    body: { bounds: caseBounds(body.survey.bounds, plan.placement), frontalArea: body.survey.frontalArea.value },
    mesh: {
      domain: { min: plan.domain.min.value, max: plan.domain.max.value },
      baseCell: plan.domain.baseCell.value,
      divisions: plan.domain.divisions.value,
      surfaceLevel: plan.mesh.surfaceLevel.value,
      boxes: plan.boxes.map(({ name, box, level }) => ({ name, box, level })),
      predictedCells: plan.mesh.predictedCells.value,
    },
    stop: { drag: plan.stop.drag.value, lift: plan.stop.lift.value, confidence: plan.stop.confidence.value },
    mostIterations: plan.iterations.most.value,
    plan: listPlan(plan),
    hashes: {
      inputs: variant.files.map((path) => ({ path: relative(study.folder, path), sha256: inputHash.get(path)! })),
      templates: templatesHash(),
    },
  };
  return { files: [...renderCase(plan), surface], card };
}
