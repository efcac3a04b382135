import type { RunCard } from "../case/run-card.js";
import { inputProblem } from "../errors.js";
import { type Finding, finding } from "../finding.js";
import type { CaseParts } from "./case-record.js";
import { cutSeries, onCommonRows } from "./common-rows.js";
import { ownDirections } from "./directions.js";
import type { ForceObject } from "./force-objects.js";
import { type PartSeries, type RunReference, seriesOf, seriesOfTable } from "./part-series.js";
import { type ReferenceOverrides, referenceOf } from "./reference.js";

/** Header values and run card agree to the digits that a header is printed with. */
const printed = 1e-5;

/**
 * A case prepared here: its run card gives reference and parts, and the force objects carry the names it was written with: `whole`,
 * `part-<patch>` and `coefficients`. Throws an input problem when the whole has no history.
 */
export function ownCase(card: RunCard, objects: readonly ForceObject[], options: ReferenceOverrides, path: string): CaseParts {
  const reference = referenceOf(card, { header: "", densitySource: "" }, options, path);
  const run: RunReference = { reference, axes: ownDirections, writtenDensity: () => card.reference.density };
  const findings: Finding[] = [];
  const objectOf = (name: string) => objects.find((each) => each.name === name);
  const series = (object: string, name: string): PartSeries | null => {
    const found = objectOf(object);
    return found ? seriesOf(found, name, run) : null;
  };
  const table = objectOf("coefficients");
  const whole = series("whole", "whole") ?? series("coefficients", "whole");
  if (whole === null)
    throw inputProblem({
      code: "no-whole",
      message: "The case has a run card, but no history of the force object `whole`.",
      where: path,
      remedy: "Run the case again; its dictionaries were changed by hand.",
    });
  const parts: PartSeries[] = [];
  for (const { name, patch } of card.parts) {
    const part = series(`part-${patch}`, name);
    if (part) parts.push(part);
    else
      findings.push(
        finding("part-not-recorded", "error", "has no force history.", "Prepare and run the case again.", { part: name }),
      );
  }
  const { kept, dropped, leftOut } = onCommonRows([whole, ...parts], (each) => each.time, cutSeries);
  for (const each of leftOut)
    findings.push(
      finding(
        "object-left-out",
        "error",
        "was recorded over other iterations than most objects of the case, and is left out.",
        "Run the case again: tables of two runs stand together.",
        { part: each.name },
      ),
    );
  if (leftOut.includes(whole))
    throw inputProblem({
      code: "no-whole",
      message: "The whole was recorded over other iterations than its parts: no row can be compared.",
      where: path,
      remedy: "Run the case again: tables of two runs stand together.",
    });
  if (table) findings.push(...changedReference(card, table));
  return {
    reference,
    whole: kept[0],
    parts: kept.slice(1),
    table: whole.cdPressure !== null && table ? seriesOfTable(table, "coefficients", run) : null,
    dropped,
    oblique: false,
    findings,
  };
}

/** Coefficients are put on the run card's reference whatever the table's was; a table with another one tells of a changed case. */
function changedReference({ reference }: RunCard, { coefficients }: ForceObject): Finding[] {
  const header = coefficients?.header ?? {};
  const expected = { speed: reference.speed, area: reference.area / reference.symmetryFactor };
  return (["speed", "area"] as const).flatMap((key) => {
    const [found, written] = [header[key], expected[key]];
    if (found === undefined || Math.abs(found - written) <= printed * Math.abs(written)) return [];
    return [
      finding(
        "reference-changed",
        "error",
        `The coefficient table was written with the reference ${key} ${found}, the run card says ${written}: the case was changed after it was prepared.`,
        "Prepare and run the case again; if the flow was changed too, the run card no longer says what was computed.",
      ),
    ];
  });
}
