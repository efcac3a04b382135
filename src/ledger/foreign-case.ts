import { relative } from "node:path";
import { inputProblem } from "../errors.js";
import { type Finding, finding } from "../finding.js";
import type { CaseDictionaries } from "./case-dictionaries.js";
import type { CaseParts } from "./case-record.js";
import { cutSeries, onCommonRows, seriesAt } from "./common-rows.js";
import { areOblique, statedDirections } from "./directions.js";
import type { ForceObject } from "./force-objects.js";
import type { Reference } from "./ledger.js";
import { type Directions, type PartSeries, type RunReference, seriesOf, seriesOfTable } from "./part-series.js";
import { type FileReference, type ReferenceOverrides, referenceOf } from "./reference.js";
import { sameSeries } from "./series-sums.js";
import { samePatches, type WholeAndParts, wholeAndParts } from "./whole-and-parts.js";
import { type WrittenDensity, writtenDensityOf } from "./written-density.js";

/** What all steps of reading one case need. */
interface Source {
  path: string;
  options: ReferenceOverrides;
  objects: ForceObject[];
  axes: Directions;
  densities: Map<ForceObject, WrittenDensity>;
}

interface Reading extends WholeAndParts {
  run: RunReference;
  dropped: number;
}

/**
 * A case made elsewhere. Reference values come from the header of the coefficient table of the whole (of the first table when there is
 * none), the density from force and coefficient tables together or from the control dictionary; options win. Throws an input problem that
 * names the options which supply what is missing.
 */
export function foreignCase(
  recorded: readonly ForceObject[],
  dictionaries: CaseDictionaries,
  options: ReferenceOverrides,
  path: string,
): CaseParts {
  const { axes, objects, findings } = statedDirections(recorded);
  const densities = new Map<ForceObject, WrittenDensity>();
  for (const object of objects) {
    const density = writtenDensityOf(object, objects, axes);
    if (density) densities.set(object, density);
  }
  const source: Source = { path, options, objects, axes, densities };
  const tables = objects.filter((object) => object.coefficients);
  const [first] = tables;
  let reading = readWith(first, source);
  // Whatever the reference, the same object comes out as the whole; its own header then counts.
  const main = tables.find((object) => isWhole(object, reading)) ?? first;
  if (main !== first) reading = readWith(main, source);
  if (main && tables.some((object) => !sameReference(object, main)))
    findings.push(
      finding(
        "references-differ",
        "note",
        `The coefficient tables stand on different reference values; all are put on those of ${main.name}.`,
        "Give one reference for all with --area, --length and --centre.",
      ),
    );
  const { whole, parts, run, dropped } = reading;
  if (dictionaries.symmetryPlane && options.half === undefined)
    findings.push(
      finding(
        "may-be-half",
        "warning",
        "The mesh has a symmetry plane, so the forces may be those of half a vehicle; they are taken as they stand.",
        "Say so with --half and the whole area with --area, if it is.",
      ),
    );
  return {
    reference: run.reference,
    whole,
    parts,
    table: tableOf(reading, objects),
    dropped,
    oblique: areOblique(axes),
    findings: [...findings, ...reading.findings, ...assumptions(source, run.reference, whole, main)],
  };
}

function readWith(main: ForceObject | undefined, source: Source): Reading {
  const { objects, axes, densities, options, path } = source;
  const reference = referenceOf(null, fileReference(main, source), options, path);
  requireReference(objects, reference, path);
  const [anyDensity] = densities.values();
  const run: RunReference = {
    reference,
    axes,
    // An object of which nothing is known was written like the others of its case.
    writtenDensity: (object) => densities.get(object)?.value ?? anyDensity?.value ?? reference.density,
  };
  const series = objects.map((object) => seriesOf(object, object.name, run)).filter((each) => each !== null);
  if (series.length === 0)
    throw inputProblem({
      code: "unknown-reference",
      message: "None of the force tables of the case can be turned into coefficients with what is known.",
      where: path,
      remedy: "Give --area, --speed and --density.",
    });
  const { kept, dropped, leftOut } = onCommonRows(series, (each) => each.time, cutSeries);
  const found = wholeAndParts(kept);
  const missing = leftOut.map((each) =>
    finding(
      "object-left-out",
      "warning",
      "was recorded at other times than the longest object of the case, and is left out.",
      "Remove the tables of earlier runs, or record all objects at the same times.",
      { part: each.name },
    ),
  );
  return { ...found, run, dropped, findings: [...missing, ...found.findings] };
}

function fileReference(main: ForceObject | undefined, { objects, densities, path }: Source): FileReference {
  const header = main?.coefficients?.header;
  const [told] = densities.values();
  const stated = objects.find((object) => object.statedDensity !== null)?.statedDensity ?? undefined;
  return {
    area: header?.area,
    length: header?.length,
    speed: header?.speed,
    centre: header?.centre ?? objects.find((object) => object.moments?.centre)?.moments?.centre ?? undefined,
    header: main?.coefficients ? `header of ${relative(path, main.coefficients.file)}` : "header of the moment table",
    density: told?.value ?? stated,
    densitySource: told?.source ?? "rhoInf in system/controlDict",
  };
}

const headerKeys = ["area", "length", "speed", "centre"] as const;

const sameReference = (a: ForceObject, b: ForceObject): boolean =>
  headerKeys.every((key) => JSON.stringify(a.coefficients?.header[key]) === JSON.stringify(b.coefficients?.header[key]));

/** Coefficients need an area, and forces a speed and a density as well; without them there is no ledger. */
function requireReference(objects: readonly ForceObject[], reference: Reference, where: string): void {
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

/** The object records the same as the whole: by patches where they are known, else by values. */
function isWhole(object: ForceObject, { whole, run }: Reading): boolean {
  if (object.name === whole.name) return true;
  if (object.patches !== null && whole.patches !== null) return samePatches(object.patches, whole.patches);
  const table = seriesOfTable(object, object.name, run);
  const aligned = table && seriesAt(table, whole.time);
  return aligned !== null && sameSeries(aligned, whole);
}

/** The coefficient table of the whole, beside a whole that came from forces. */
function tableOf(reading: Reading, objects: readonly ForceObject[]): PartSeries | null {
  if (reading.whole.cdPressure === null) return null;
  const table = objects.find((object) => object.coefficients && isWhole(object, reading));
  return table ? seriesOfTable(table, table.name, reading.run) : null;
}

/** What had to be taken for granted to use an option. */
function assumptions(
  { objects, densities, options }: Source,
  reference: Reference,
  whole: PartSeries,
  main: ForceObject | undefined,
): Finding[] {
  const findings: Finding[] = [];
  if (main?.coefficients && main.coefficients.header.pitch === undefined && whole.cm !== null && whole.cdPressure === null)
    findings.push(
      finding(
        "pitch-axis-taken",
        "warning",
        `The table of ${main.name} does not say about which axis, length and point its moment is: nose-up about the reference centre, on the reference length, is taken.`,
        "Compare with pitchAxis, lRef and CofR of the force object.",
      ),
    );
  if (densities.size === 0 && options.density !== undefined && objects.some((object) => object.forces))
    findings.push(
      finding(
        "written-density-taken",
        "warning",
        `Nothing says with which density the force tables were written; ${options.density} kg/m³ from the option is taken.`,
        "If the case was run with rhoInf 1, coefficients are too small by that factor: give --density 1.",
      ),
    );
  if (options.wheelbase !== undefined && options.centre === undefined && reference.centre !== null && whole.cm !== null)
    findings.push(
      finding(
        "axle-centre-taken",
        "warning",
        `The axle lifts take the moment centre of the tables (${reference.centre.join(" ")}) as the point on the ground at mid-wheelbase.`,
        "Give that point with --centre, if it is another one.",
      ),
    );
  return findings;
}
