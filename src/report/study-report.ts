import { dirname, isAbsolute, relative } from "node:path";
import { compareCases } from "../compare/compare-cases.js";
import { buildLedger } from "../ledger/build.js";
import type { CaseRecord } from "../ledger/case-record.js";
import { settleRecord } from "../ledger/converged.js";
import { windowOf } from "../ledger/window.js";
import { packageVersion } from "../package-files.js";
import type { Study } from "../study/study.js";
import { writeWhole } from "../write-whole.js";
import { reportModel } from "./model.js";
import { readBodies } from "./read-bodies.js";
import { readMesh } from "./read-mesh.js";
import { readSolverBuild } from "./read-solver.js";
import type { ReportedRun, RunOrigin } from "./report-input.js";
import { type WriteOptions, writeReport } from "./write-report.js";

export interface WrittenReport {
  path: string;
  bytes: number;
}

/**
 * Reads what a report shows beside the records (bodies, logs) and writes the page, whole or not at all. The first record of a
 * condition is the baseline of its comparisons.
 */
export async function writeStudyReport(
  input: { study: Study | null; records: CaseRecord[]; path: string },
  options: WriteOptions = {},
): Promise<WrittenReport> {
  const { study, records, path } = input;
  const runs: ReportedRun[] = [];
  for (const record of records) runs.push(await reportedRun(record, dirname(path)));
  const card = records.find((record) => record.card)?.card ?? null;
  const page = writeReport(
    reportModel({
      title: study?.name ?? card?.study.name ?? records.map(({ variant }) => variant).join(", "),
      question: study?.question ?? card?.study.question ?? null,
      runs,
      comparisons: records.length > 1 ? compareCases(records) : [],
      bodies: await readBodies(study, records),
      toolVersion: packageVersion,
    }),
    options,
  );
  await writeWhole(path, page);
  return { path, bytes: Buffer.byteLength(page) };
}

/** One record with all that the page shows of it; paths are written as seen from `folder`. */
async function reportedRun(record: CaseRecord, folder: string): Promise<ReportedRun> {
  const { card, whole } = record;
  const ledger = buildLedger(record);
  const window = windowOf(record);
  const patches = card?.parts ?? record.parts.map(({ name, patches: own }) => ({ name, patch: own?.[0] ?? name }));
  return {
    ledger,
    history: {
      iterations: whole.time,
      cd: { values: whole.cd, mean: ledger.total.cd.value, halfWidth: ledger.total.cd.halfWidth },
      cl: { values: whole.cl, mean: ledger.total.cl.value, halfWidth: ledger.total.cl.halfWidth },
      startUp: window.first,
      from: window.from,
      to: window.to,
    },
    settling: settleRecord(record).quantities,
    plan: card?.plan ?? [],
    condition: card?.condition ?? null,
    leftOut: card?.leftOut ?? [],
    mesh: await readMesh(record.path, patches),
    origin: await originOf(record, folder),
  };
}

async function originOf(record: CaseRecord, folder: string): Promise<RunOrigin> {
  const { card, path } = record;
  return {
    path: seenFrom(folder, path),
    writtenBy: card ? `${card.tool.name} ${card.tool.version}` : null,
    solver: await readSolverBuild(path),
    templates: card?.hashes.templates ?? null,
    inputs: card?.hashes.inputs ?? [],
    segments: record.segments.map((segment) => ({ ...segment, file: seenFrom(path, segment.file) })),
  };
}

/** A path below a folder without it; any other as it is. */
function seenFrom(folder: string, path: string): string {
  const short = relative(folder, path);
  return short === "" || short.startsWith("..") || isAbsolute(short) ? path : short;
}
