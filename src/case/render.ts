import { readdirSync, readFileSync } from "node:fs";
import { join } from "node:path";
import ejs from "ejs";
import type { Vector3 } from "../geometry/vector.js";
import { packageFile } from "../package-files.js";
import { sha256 } from "./hash.js";
import type { CasePlan } from "./plan.js";

export interface CaseFile {
  /** relative to the case folder, with / */
  path: string;
  content: string | Uint8Array;
  executable: boolean;
}

/** The only form in which a name reaches a dictionary. Throws for anything else: a name that gets here uncleaned is a defect. */
export function word(text: string): string {
  if (!/^[A-Za-z][A-Za-z0-9_-]*$/.test(text)) throw new Error(`'${text}' is no word that a dictionary may hold`);
  return text;
}

/** A number as the solver reads it back unchanged to ten digits. */
export function number(value: number): string {
  if (typeof value !== "number" || !Number.isFinite(value)) throw new Error(`${value} is no number that a dictionary may hold`);
  return String(Number(value.toPrecision(10)));
}

const vector = (value: Vector3): string => `(${value.map(number).join(" ")})`;

const header = (object: string, kind = "dictionary"): string =>
  `FoamFile\n{\n    version 2.0;\n    format  ascii;\n    class   ${word(kind)};\n    object  ${word(object)};\n}\n`;

interface Template {
  path: string;
  render: (data: object) => string;
  text: string;
}

let loaded: { templates: Template[]; hash: string } | null = null;

/** The case templates of the package, compiled once, and one hash over all of them. */
function caseTemplates(): { templates: Template[]; hash: string } {
  if (loaded) return loaded;
  const root = packageFile("templates", "case");
  const paths = readdirSync(root, { recursive: true, encoding: "utf8" })
    .map((path) => path.replaceAll("\\", "/"))
    .filter((path) => path.endsWith(".ejs"))
    .sort();
  const templates = paths.map((path) => {
    const text = readFileSync(join(root, path), "utf8");
    return {
      path: path.slice(0, -".ejs".length),
      text,
      render: ejs.compile(text, { strict: true, destructuredLocals: localNames }),
    };
  });
  loaded = { templates, hash: sha256(templates.map(({ path, text }) => `${path}\0${text}\0`).join("")) };
  return loaded;
}

export const templatesHash = (): string => caseTemplates().hash;

const localNames = [
  "header",
  "word",
  "n",
  "vector",
  "half",
  "min",
  "max",
  "baseCell",
  "divisions",
  "featureAngle",
  "layers",
  "parts",
  "wheels",
  "boxes",
  "maxCells",
  "cellsBetweenLevels",
  "surfaceLevel",
  "keepPoint",
  "layerExpansion",
  "finalLayer",
  "mostIterations",
  "writeEvery",
  "density",
  "speed",
  "domainArea",
  "referenceLength",
  "viscosity",
  "movingGround",
  "k",
  "omega",
  "nut",
];

/** All text files of a case. Pure but for reading the package's templates the first time. */
export function renderCase(plan: CasePlan): CaseFile[] {
  const data = {
    header,
    word,
    n: number,
    vector,
    half: plan.half.value,
    min: plan.domain.min.value,
    max: plan.domain.max.value,
    baseCell: plan.domain.baseCell.value,
    divisions: plan.domain.divisions.value,
    featureAngle: plan.mesh.featureAngle.value,
    layers: plan.mesh.layers.value,
    parts: plan.parts,
    wheels: plan.parts.filter((part) => part.wheel !== null),
    boxes: plan.boxes,
    // The mesher stops refining without an error at this limit: far enough away, the run's mesh check tells if it was met.
    maxCells: 3 * plan.mesh.predictedCells.value,
    cellsBetweenLevels: plan.mesh.cellsBetweenLevels.value,
    surfaceLevel: plan.mesh.surfaceLevel.value,
    keepPoint: plan.domain.keepPoint.value,
    layerExpansion: plan.mesh.layerExpansion.value,
    finalLayer: plan.mesh.finalLayer.value,
    mostIterations: plan.iterations.most.value,
    writeEvery: plan.iterations.writeEvery.value,
    density: plan.air.density.value,
    speed: plan.flow.speed.value,
    domainArea: plan.reference.area.value / (plan.half.value ? 2 : 1),
    referenceLength: plan.reference.length.value,
    viscosity: plan.air.kinematicViscosity.value,
    movingGround: plan.condition.ground === "moving",
    k: plan.flow.k.value,
    omega: plan.flow.omega.value,
    nut: plan.flow.nut.value,
  };
  return caseTemplates().templates.map(({ path, render }) => ({ path, content: render(data), executable: path === "Allrun" }));
}
