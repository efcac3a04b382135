import { basename, resolve } from "node:path";
import { readRunCard } from "../case/read-run-card.js";
import type { RunCard } from "../case/run-card.js";
import { inputProblem } from "../errors.js";
import { type Finding, finding } from "../finding.js";
import type { History, Segment } from "../history/history.js";
import { readCaseHistories } from "../history/read-case.js";
import { readCaseDictionaries } from "./case-dictionaries.js";
import { seriesAt } from "./common-rows.js";
import { forceObjects } from "./force-objects.js";
import { foreignCase } from "./foreign-case.js";
import type { Reference } from "./ledger.js";
import { ownCase } from "./own-case.js";
import type { PartSeries } from "./part-series.js";
import { printedDigits } from "./print-precision.js";
import type { ReferenceOverrides } from "./reference.js";

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
  /** Significant digits of the tables: sums can agree no better. */
  printedDigits: number;
  /** Drag or lift runs along no axis of the case: each is then a difference of printed numbers. */
  oblique: boolean;
  segments: Segment[];
  findings: Finding[];
}

/** What reading the objects of a case gives, made here or elsewhere. */
export interface CaseParts {
  reference: Reference;
  whole: PartSeries;
  parts: PartSeries[];
  /** the whole from its coefficient table, when `whole` came from forces; on rows of its own */
  table: PartSeries | null;
  /** rows that not every object has */
  dropped: number;
  oblique: boolean;
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
  const objects = forceObjects(histories, dictionaries);
  if (objects.length === 0)
    throw inputProblem({
      code: "no-forces",
      message: "The case holds no force or coefficient history.",
      where: path,
      remedy: card
        ? "Run it first: dragledger run."
        : "Give a case whose postProcessing folder holds the output of a forces or forceCoeffs object.",
    });
  const read = card ? ownCase(card, objects, options, path) : foreignCase(objects, dictionaries, options, path);
  const { reference, whole, parts, table, dropped, oblique } = read;
  const used = objects.flatMap((object) => object.histories);
  const findings = [...read.findings];
  if (dropped > 0) findings.push(finding("rows-not-common", "note", `${dropped} rows that not every object has are left out.`, ""));
  return {
    path,
    variant: card?.variant ?? basename(resolve(path)),
    condition: card?.condition.name ?? "",
    card,
    reference,
    whole,
    parts,
    tableCd: (table && seriesAt(table, whole.time)?.cd) ?? null,
    printedDigits: printedDigits(used),
    oblique,
    segments: used.flatMap((history) => history.segments),
    findings: [...findings, ...historyFindings(used)],
  };
}

/** What is odd about the tables; what several objects share is said once, anything else with the object it is about. */
function historyFindings(histories: readonly History[]): Finding[] {
  const all = histories.flatMap((history) => history.findings.map((found) => ({ ...found, part: found.part ?? history.object })));
  const merged = new Map<string, Finding & { parts: Set<string> }>();
  for (const found of all) {
    const key = `${found.code}\n${found.message}`;
    const same = merged.get(key);
    if (same) same.parts.add(found.part);
    else merged.set(key, { ...found, parts: new Set([found.part]) });
  }
  return [...merged.values()].map(({ parts, ...found }) =>
    parts.size === 1 ? found : { ...found, part: null, count: parts.size },
  );
}
