import type { Segment } from "../history/history.js";
import { grouped } from "./figures.js";
import type { ReportedRun } from "./report-input.js";
import type { Naming } from "./run-names.js";

/** The files, rows and hashes behind one run. */
export interface Provenance {
  run: string;
  facts: { name: string; value: string }[];
  inputs: { path: string; sha256: string }[];
  /** which rows of which files of the histories were used; files that were used alike stand together */
  rows: { files: string[]; rows: string }[];
}

export function provenanceOf({ ledger, origin }: ReportedRun, naming: Naming): Provenance {
  const facts: Provenance["facts"] = [{ name: "case", value: origin.path }];
  if (ledger.recorded) facts.push({ name: "recorded", value: ledger.recorded });
  facts.push({ name: "case written by", value: origin.writtenBy ?? "another program" });
  if (origin.solver) facts.push({ name: "solver", value: origin.solver });
  if (origin.templates) facts.push({ name: "sha256 of the templates", value: origin.templates });
  return {
    run: naming.run(ledger.path),
    facts,
    inputs: origin.inputs,
    rows: usedRows(origin.segments),
  };
}

function usedRows(segments: Segment[]): Provenance["rows"] {
  const groups = new Map<string, string[]>();
  for (const { file, from, to, rows, used, reason } of segments) {
    const text = `${grouped(used)} of ${grouped(rows)} rows, ${from} to ${to}: ${reason}`;
    const files = groups.get(text) ?? [];
    if (!files.includes(file)) files.push(file);
    groups.set(text, files);
  }
  return [...groups].map(([rows, files]) => ({ rows, files }));
}
