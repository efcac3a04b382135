import { join } from "node:path";
import { Problem } from "../errors.js";
import { readSurfaces } from "../geometry/files/read.js";
import { place } from "../geometry/place.js";
import type { TriangleSet } from "../geometry/triangle-set.js";
import type { CaseRecord } from "../ledger/case-record.js";
import type { Study } from "../study/study.js";
import type { ReportedBody } from "./report-input.js";

/**
 * The bodies behind some cases: of a study the variants as they were placed into its cases, otherwise the surface that each case holds itself, a
 * half one completed by its mirror image. A case without a readable surface is shown without a body.
 */
export async function readBodies(study: Study | null, records: CaseRecord[]): Promise<ReportedBody[]> {
  if (study) return studyBodies(study, records);
  const bodies: ReportedBody[] = [];
  for (const { path, variant, card } of records) {
    const set = await readable([join(path, "constant", "triSurface", "body.stl")]);
    if (set) bodies.push({ variant, path, set: card?.reference.symmetryFactor === 2 ? withMirrorImage(set) : set });
  }
  return bodies;
}

async function studyBodies(study: Study, records: CaseRecord[]): Promise<ReportedBody[]> {
  const bodies: ReportedBody[] = [];
  for (const { name, files } of study.variants) {
    const placement = records.find((record) => record.variant === name)?.card?.placement;
    const set = placement && (await readable(files));
    if (set) bodies.push({ variant: name, set: place(set, placement) });
  }
  return bodies;
}

async function readable(files: string[]): Promise<TriangleSet | null> {
  try {
    return await readSurfaces(files);
  } catch (error) {
    if (error instanceof Problem) return null;
    throw error;
  }
}

/** A body and its mirror image about y = 0, part by part, both turned outward. */
export function withMirrorImage(set: TriangleSet): TriangleSet {
  const { length } = set.positions;
  const positions = new Float32Array(2 * length);
  positions.set(set.positions);
  for (let at = 0; at < length; at += 9)
    for (let corner = 0; corner < 3; corner++) {
      // Two corners change places, or the image would be inside out.
      const from = at + 3 * [0, 2, 1][corner]!;
      const to = length + at + 3 * corner;
      positions[to] = set.positions[from]!;
      positions[to + 1] = -set.positions[from + 1]!;
      positions[to + 2] = set.positions[from + 2]!;
    }
  const partOf = new Uint16Array(2 * set.partOf.length);
  partOf.set(set.partOf);
  partOf.set(set.partOf, set.partOf.length);
  return { ...set, positions, partOf };
}
