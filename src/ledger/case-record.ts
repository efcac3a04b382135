import { basename } from "node:path";
import { readRunCard } from "../case/read-run-card.js";
import type { RunCard } from "../case/run-card.js";
import { inputProblem } from "../errors.js";
import { type Finding, finding } from "../finding.js";
import type { Vector3 } from "../geometry/vector.js";
import type { History, Segment } from "../history/history.js";
import { readCaseHistories } from "../history/read-case.js";
import { type CaseDictionaries, readCaseDictionaries } from "./case-dictionaries.js";
import { onCommonRows } from "./common-rows.js";
import { type ForceObject, forceObjects } from "./force-objects.js";
import type { Reference } from "./ledger.js";
import { type Directions, directionsOf, type PartSeries, type RunReference, seriesOf } from "./part-series.js";
import { type FileReference, type ReferenceOverrides, referenceOf } from "./reference.js";
import { type WholeAndParts, wholeAndParts } from "./whole-and-parts.js";
import { densityFromTables } from "./written-density.js";

export type { ReferenceOverrides } from "./reference.js";

/** All that is known of a finished or running case: its reference and the coefficients of the whole and its parts, row by row. */
export interface CaseRecord {
  path: string;
  variant: string;
  /** name of the condition; empty for a case made elsewhere */
  condition: string;
  card: RunCard | null;
  reference: Reference;
  whole: PartSeries;
  parts: PartSeries[];
  /** The coefficient table of the whole, on the run's reference, when forces were used: for the cross-check. */
  tableCd: Float64Array | null;
  segments: Segment[];
  findings: Finding[];
}

/**
 * Reads a case, made here or elsewhere. Values come from the run card or from headers and dictionaries; options win. Throws an input
 * problem when the case holds no force history or its reference cannot be known.
 */
export async function readCaseRecord(path: string, options: ReferenceOverrides = {}): Promise<CaseRecord> {
  const [card, histories, dictionaries] = await Promise.all([
    readRunCard(path),
    readCaseHistories(path),
    readCaseDictionaries(path),
  ]);
  const objects = forceObjects(histories, dictionaries.patchesOf);
  if (objects.length === 0)
    throw inputProblem({
      code: "no-forces",
      message: "The case holds no force or coefficient history.",
      where: path,
      remedy: card
        ? "Run it first: dragledger run."
        : "Give a case whose postProcessing folder holds the output of a forces or forceCoeffs object.",
    });
  const { axes, findings } = directionsFor(card, objects);
  const inferred = card ? null : densityFromTables(objects, axes);
  const reference = referenceOf(card, fileReference(objects, dictionaries, inferred), options, path);
  requireReference(objects, reference, path);
  const run: RunReference = {
    reference,
    axes,
    writtenDensity: card?.reference.density ?? inferred ?? dictionaries.density ?? reference.density,
  };
  const found = card ? ownParts(card, objects, run, path) : foreignParts(objects, run, path);
  if (!card && dictionaries.symmetryPlane && options.half === undefined)
    findings.push(
      finding(
        "may-be-half",
        "warning",
        "The mesh has a symmetry plane, so the forces may be those of half a vehicle; they are taken as they stand.",
        "Say so with --half and the whole area with --area, if it is.",
      ),
    );
  const { series, dropped } = onCommonRows([found.whole, ...found.parts]);
  if (dropped > 0) findings.push(finding("rows-not-common", "note", `${dropped} rows that not every object has are left out.`, ""));
  const used = objects.flatMap((object) => object.histories);
  return {
    path,
    variant: card?.variant ?? basename(path),
    condition: card?.condition.name ?? "",
    card,
    reference,
    whole: series[0]!,
    parts: series.slice(1),
    tableCd: tableOf(objects, run, series[0]!),
    segments: used.flatMap((history) => history.segments),
    findings: [...findings, ...found.findings, ...historyFindings(used)],
  };
}

function fileReference(objects: ForceObject[], { density }: CaseDictionaries, inferred: number | null): FileReference {
  const table = objects.find((object) => object.coefficients)?.coefficients;
  return {
    area: table?.header.area,
    length: table?.header.length,
    speed: table?.header.speed,
    centre: table?.header.centre ?? objects.find((object) => object.moments?.centre)?.moments?.centre ?? undefined,
    header: table ? `header of ${table.file}` : "header of the moment table",
    density: inferred ?? density,
    densitySource: inferred === null ? "rhoInf in system/controlDict" : "ratio of a force table to a coefficient table",
  };
}

const rearward: Vector3 = [1, 0, 0];
const upward: Vector3 = [0, 0, 1];

function directionsFor(card: RunCard | null, objects: ForceObject[]): { axes: Directions; findings: Finding[] } {
  if (card) return { axes: directionsOf(rearward, upward), findings: [] };
  const header = objects.find((object) => object.coefficients?.header.drag && object.coefficients.header.lift)?.coefficients
    ?.header;
  if (header?.drag && header.lift) return { axes: directionsOf(header.drag, header.lift), findings: [] };
  return {
    axes: directionsOf(rearward, upward),
    findings: [
      finding(
        "directions-assumed",
        "warning",
        "No table says which way drag and lift point: drag is taken along +x, lift along +z.",
        "Compare with the inlet of the case before using the numbers.",
      ),
    ],
  };
}

/** Coefficients need an area, and forces a speed and a density as well; without them there is no ledger. */
function requireReference(objects: ForceObject[], reference: Reference, where: string): void {
  const tables = objects.some((object) => object.coefficients);
  const needed = { area: reference.area, ...(tables ? {} : { speed: reference.speed, density: reference.density }) };
  const missing = Object.entries(needed)
    .filter(([, value]) => value === null)
    .map(([key]) => key);
  if (missing.length === 0) return;
  throw inputProblem({
    code: "unknown-reference",
    message: `The files of the case do not say the reference ${missing.join(", ")}.`,
    where,
    remedy: `Give ${missing.map((key) => `--${key}`).join(" and ")}.`,
  });
}

function ownParts(card: RunCard, objects: ForceObject[], run: RunReference, path: string): WholeAndParts {
  const series = (object: string, name: string): PartSeries | null => {
    const found = objects.find((each) => each.name === object);
    return found ? seriesOf(found, name, run) : null;
  };
  const whole = series("whole", "whole") ?? series("coefficients", "whole");
  if (whole === null)
    throw inputProblem({
      code: "no-whole",
      message: "The case has a run card, but no history of the force object `whole`.",
      where: path,
      remedy: "Run the case again; its dictionaries were changed by hand.",
    });
  const findings: Finding[] = [];
  const parts: PartSeries[] = [];
  for (const { name, patch } of card.parts) {
    const part = series(`part-${patch}`, name);
    if (part) parts.push(part);
    else
      findings.push(
        finding("part-not-recorded", "error", "has no force history.", "Prepare and run the case again.", { part: name }),
      );
  }
  return { whole, parts, findings };
}

function foreignParts(objects: ForceObject[], run: RunReference, path: string): WholeAndParts {
  const series = objects.map((object) => seriesOf(object, object.name, run)).filter((each) => each !== null);
  if (series.length === 0)
    throw inputProblem({
      code: "unknown-reference",
      message: "None of the force tables of the case can be turned into coefficients with what is known.",
      where: path,
      remedy: "Give --area, --speed and --density.",
    });
  return wholeAndParts(series);
}

/** Cd of the whole from a coefficient table, beside a whole that came from forces. */
function tableOf(objects: ForceObject[], run: RunReference, whole: PartSeries): Float64Array | null {
  if (whole.cdPressure === null) return null;
  for (const object of objects) {
    if (object.coefficients === null || object.forces !== null) continue;
    const table = seriesOf(object, object.name, run);
    const isWhole = object.name === "coefficients" || (object.patches !== null && samePatches(object.patches, whole.patches));
    if (table && isWhole && table.cd.length === whole.cd.length) return table.cd;
  }
  return null;
}

const samePatches = (a: string[], b: string[] | null): boolean =>
  b !== null && [...a].sort().join("\n") === [...b].sort().join("\n");

/** What is odd about the tables, each said once with the object it is about. */
function historyFindings(histories: History[]): Finding[] {
  return histories.flatMap((history) => history.findings.map((found) => ({ ...found, part: found.part ?? history.object })));
}
