import { inputProblem } from "../errors.js";
import { type Finding, finding } from "../finding.js";
import { readSurfaces } from "../geometry/files/read.js";
import { fitSurveyed } from "../geometry/fit-at-cell.js";
import { fileMetres } from "../geometry/place.js";
import { surveyBody } from "../geometry/survey-body.js";
import { conditionsOf } from "../study/conditions.js";
import { requireMatches, rotatingParts } from "../study/part-rules.js";
import type { Study, Variant } from "../study/study.js";
import { caseBounds } from "./body-in-case.js";
import { caseContent } from "./case-content.js";
import { levelOf } from "./grid.js";
import { sha256OfFile } from "./hash.js";
import type { CasePlan } from "./plan.js";
import { keepPointOf, planCase } from "./plan-case.js";
import { studyCases } from "./study-cases.js";
import { frameOf, predictedFor, type StudyFrame, type VariantBody } from "./study-frame.js";
import { fitVariant } from "./variant-fit.js";
import { wheelFindings } from "./wheels.js";
import { writeCase } from "./write-case.js";

export interface PlannedCase {
  /** absolute path of the case folder */
  path: string;
  variant: string;
  /** name of the condition */
  condition: string;
  plan: CasePlan;
  /** What is odd about this variant in this domain; what the body itself has is in its survey. */
  findings: Finding[];
}

export interface PreparedCase extends PlannedCase {
  /** false: the folder was as planned and was not touched */
  changed: boolean;
  /** What happened to the folder beside writing it, for people: results kept aside, files edited by hand and left. */
  remarks: string[];
}

export interface PrepareOptions {
  /** go on with a body that the survey calls not fit */
  accept?: boolean;
  /** set up changed cases again although they hold results, which are kept aside, or files edited by hand, which are lost */
  again?: boolean;
}

/**
 * Reads and surveys the bodies of a study once and plans all of its cases, the baseline first; writes nothing.
 *
 * @throws Problem(input) `not-fit` unless accepted; `rule-without-part`; as `readSurfaces`, `frameOf`, `fitVariant`, `turningWheels`.
 */
export async function planStudy(study: Study, options: Pick<PrepareOptions, "accept"> = {}): Promise<PlannedCase[]> {
  return planBodies(study, await readBodies(study, options));
}

/**
 * Plans the cases of a study and writes those that are new or have changed. Nothing is written before all of them are planned.
 *
 * @throws Problem(input) as `planStudy` and `writeCase`.
 */
export async function prepareStudy(study: Study, options: PrepareOptions = {}): Promise<PreparedCase[]> {
  const bodies = await readBodies(study, options);
  const planned = planBodies(study, bodies);
  const inputs = new Map<string, string>();
  for (const path of new Set(study.variants.flatMap(({ files }) => files))) inputs.set(path, await sha256OfFile(path));
  const prepared: PreparedCase[] = [];
  for (const each of planned) {
    const body = bodies.find(({ variant }) => variant === each.variant)!;
    const content = caseContent(study, each.plan, body, inputs);
    const { changed, remarks } = await writeCase(each.path, content, { again: options.again === true });
    prepared.push({ ...each, changed, remarks });
  }
  return prepared;
}

function planBodies(study: Study, bodies: VariantBody[]): PlannedCase[] {
  const frame = frameOf(study, bodies, conditionsOf(study));
  const stands = new Map(
    bodies.map((body) => [
      body.variant,
      {
        body,
        findings: [...fitVariant(study, frame, body), ...fitForCells(body, frame)],
        ...predictedFor(study, frame, body),
      },
    ]),
  );
  return studyCases(study).map(({ path, variant, condition }) => {
    const { body, findings, exposed, ...predicted } = stands.get(variant.name)!;
    const plan = planCase({ study, frame, body, predicted, condition });
    return {
      path,
      variant: variant.name,
      condition: condition.name,
      plan,
      findings: [
        ...findings,
        ...hiddenParts(plan, frame, exposed),
        ...wheelFindings(study, body.survey, frame.placement, condition),
      ],
    };
  });
}

async function readBodies(study: Study, { accept = false }: Pick<PrepareOptions, "accept">): Promise<VariantBody[]> {
  const bodies: VariantBody[] = [];
  for (const variant of study.variants) bodies.push(await readBody(study, variant));
  const names = bodies.flatMap(({ set }) => set.parts.map(({ name }) => name));
  requireMatches(study.parts, names, study.path);
  if (!accept) for (const body of bodies) requireFit(body);
  return bodies;
}

async function readBody(study: Study, variant: Variant): Promise<VariantBody> {
  const set = await readSurfaces(variant.files);
  const wheelParts = rotatingParts(
    study.parts,
    set.parts.map(({ name }) => name),
  );
  const { unit, travel, up } = study.body;
  // Without a rule the survey tells wheels by their names. Its cells are not known yet: see `fitForCells`.
  const survey = surveyBody(set, { unit, travel, up, cell: null, ...(wheelParts.length > 0 ? { wheelParts } : {}) });
  return { variant: variant.name, set, survey };
}

/** Leaks, thin parts, gaps and closed air at the cells that the mesh will have at each part. */
function fitForCells({ set, survey }: VariantBody, frame: StudyFrame): Finding[] {
  const { grid, placement } = frame;
  const cellOf = new Map(
    survey.parts
      .filter(({ triangles }) => triangles > 0)
      .map(({ patch, bounds }) => [
        patch,
        grid.domain.baseCell / 2 ** levelOf({ patch, bounds: caseBounds(bounds, placement) }, grid),
      ]),
  );
  return fitSurveyed(set, survey, grid.surfaceCell, cellOf, fileMetres(keepPointOf(frame), placement)).findings;
}

function requireFit({ variant, survey }: VariantBody): void {
  if (survey.verdict !== "not-fit") return;
  const errors = survey.findings.filter(({ severity }) => severity === "error");
  throw inputProblem({
    code: "not-fit",
    message: `The body of variant '${variant}' is not fit to mesh: ${errors.map(({ message }) => message).join(" ")}`,
    where: survey.files.map(({ path }) => path).join(", "),
    remedy: "Mend the body (dragledger inspect shows the places), or prepare with --accept to go on with it as it is.",
  });
}

/** Parts that the air hardly reaches get no faces in the mesh, and no entry in the ledger. */
function hiddenParts({ parts }: CasePlan, { grid }: StudyFrame, exposed: ReadonlyMap<string, number>): Finding[] {
  const hidden = parts.filter(({ patch, level }) => (exposed.get(patch) ?? 0) < (grid.domain.baseCell / 2 ** level) ** 2);
  if (hidden.length === 0) return [];
  const names = hidden.map(({ name }) => name);
  return [
    finding(
      "part-hidden",
      "warning",
      `${hidden.length} ${hidden.length === 1 ? "part has" : "parts have"} less than one cell's face in the air (${names.slice(0, 5).join(", ")}${names.length > 5 ? ", ..." : ""}): hidden in other parts, doubled, or too small for these cells. The mesh may lose ${hidden.length === 1 ? "it" : "them"}.`,
      "Leave such parts out, or ask for more cells.",
      { count: hidden.length, part: hidden.length === 1 ? names[0]! : null },
    ),
  ];
}
