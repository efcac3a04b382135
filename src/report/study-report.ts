import { readFile } from "node:fs/promises";
import { basename, join } from "node:path";
import writeFileAtomic from "write-file-atomic";
import { compareCases } from "../compare/compare-cases.js";
import { Problem } from "../errors.js";
import { keepParts } from "../geometry/keep-parts.js";
import { place } from "../geometry/place.js";
import { readSurfaces } from "../geometry/read.js";
import { buildLedger } from "../ledger/build.js";
import type { CaseRecord } from "../ledger/case-record.js";
import { settleRecord } from "../ledger/converged.js";
import { windowOf } from "../ledger/window.js";
import { fixed, thousands } from "../number-text.js";
import { readCheckMesh } from "../openfoam/mesh-log.js";
import { packageVersion } from "../package-files.js";
import type { Study } from "../study/study.js";
import { buildPageModel } from "./build-page-model.js";
import { packBody } from "./pack-body.js";
import type { NamedBody } from "./page-model.js";
import { renderPage } from "./render-page.js";

export interface WrittenReport {
  path: string;
  bytes: number;
}

/** Reads what a report shows beside the records (bodies, mesh logs) and writes the page, whole or not at all. */
export async function writeStudyReport(input: {
  study: Study | null;
  records: CaseRecord[];
  path: string;
}): Promise<WrittenReport> {
  const { study, records, path } = input;
  const runs = [];
  for (const record of records)
    runs.push({
      record,
      ledger: buildLedger(record),
      window: windowOf(record),
      converged: settleRecord(record),
      mesh: await meshRows(record.path),
    });
  const card = records.find((record) => record.card)?.card ?? null;
  const page = renderPage(
    buildPageModel({
      title: study?.name ?? card?.study.name ?? records.map(({ variant }) => variant).join(", "),
      question: study?.question ?? card?.study.question ?? null,
      runs,
      comparisons: records.length > 1 ? compareCases(records) : [],
      bodies: study ? await studyBodies(study, records) : await caseBodies(records),
      toolVersion: packageVersion,
    }),
  );
  await writeFileAtomic(path, page);
  return { path, bytes: Buffer.byteLength(page) };
}

/** The bodies of a study as they were placed into its cases, whole, one per variant. */
async function studyBodies(study: Study, records: CaseRecord[]): Promise<NamedBody[]> {
  const bodies: NamedBody[] = [];
  for (const { name, files } of study.variants) {
    const placement = records.find((record) => record.variant === name)?.card?.placement;
    if (placement) bodies.push({ variant: name, body: packBody(place(await readSurfaces(files), placement)) });
  }
  return bodies;
}

/** The surfaces that cases hold themselves; a case without a readable one is shown without a body. */
async function caseBodies(records: CaseRecord[]): Promise<NamedBody[]> {
  const bodies: NamedBody[] = [];
  for (const { path, variant } of records) {
    try {
      const set = await readSurfaces([join(path, "constant", "triSurface", "body.stl")]);
      bodies.push({ variant, body: packBody(keepParts(set, () => true)) });
    } catch (error) {
      if (!(error instanceof Problem)) throw error;
    }
  }
  return bodies;
}

async function meshRows(casePath: string): Promise<[string, string][]> {
  const path = join(casePath, "log.checkMesh");
  const bytes = await readFile(path).catch(() => null);
  if (bytes === null) return [];
  try {
    const mesh = readCheckMesh(bytes, basename(path));
    return [
      ["cells", thousands(mesh.cells ?? 0)],
      ["mesh check", mesh.failedChecks === 0 ? "no failed check" : `${mesh.failedChecks} failed`],
      ["greatest non-orthogonality", `${fixed(mesh.maxNonOrthogonality, 1)} deg`],
      ["greatest skewness", fixed(mesh.maxSkewness, 2)],
    ];
  } catch (error) {
    if (error instanceof Problem) return [];
    throw error;
  }
}
