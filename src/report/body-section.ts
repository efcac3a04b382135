import type { Comparison } from "../compare/comparison.js";
import type { TriangleSet } from "../geometry/triangle-set.js";
import type { Box } from "../geometry/vector.js";
import { thinBody } from "../picture/thin-body.js";
import { counts } from "./figures.js";
import { partNames, runsSideBySide } from "./part-matrix.js";
import type { ReportedBody, ReportedRun } from "./report-input.js";
import type { Naming } from "./run-names.js";

/** The bodies to draw, and how their parts go with the ledger. */
export interface BodySection {
  variants: BodyVariant[];
  /** what the differences on the body are of; null when there are none */
  basis: string | null;
  /** greatest size of a part's drag difference, counts */
  largest: number;
}

export interface BodyVariant {
  name: string;
  /** thinned where it is too large for a page */
  set: TriangleSet;
  /** Triangles of the body itself, and how far, metres, thinning moved a corner at most. */
  triangles: number;
  moved: number;
  /** in the order of `set.parts` */
  parts: BodyPart[];
}

export interface BodyPart {
  name: string;
  /** ledger part that holds its forces: itself, or the mirror image that a half model computes; null when no run has it */
  row: string | null;
  /** which of the tones it is painted in */
  tone: number;
  /** drag difference of its ledger part against the baseline, counts; null where nothing was compared */
  delta: number | null;
}

/** How far, as a share of the body's length, the bounds of a part and its mirror image may be apart. */
const mirrorTolerance = 1e-3;

/** More triangles than this make a page too large to send; the picture is then drawn with fewer. */
const mostTriangles = 250_000;

/** Pairs bodies with ledgers; null without bodies. Differences are those of the first condition. */
export function bodySection(
  bodies: ReportedBody[],
  runs: ReportedRun[],
  comparisons: Comparison[],
  naming: Naming,
): BodySection | null {
  if (bodies.length === 0) return null;
  const shown = runsSideBySide(runs);
  const rows = partNames(shown);
  const tones = [...rows];
  let largest = 0;
  const variants = bodies.map(({ variant, path, set }): BodyVariant => {
    const run = shown.find(({ ledger }) => (path === undefined ? ledger.variant === variant : ledger.path === path));
    const comparison = comparisons.find(({ b }) => run !== undefined && b.path === run.ledger.path);
    const bounds = partBounds(set);
    const parts = set.parts.map(({ name, patch }, index): BodyPart => {
      const row = rowOf({ name, patch }, index, set, bounds, rows, run?.leftOut ?? []);
      const found = comparison?.differences.find((each) => each.name === "cd" && each.part !== null && each.part === row);
      const delta = found ? counts(found.delta) : null;
      if (delta !== null) largest = Math.max(largest, Math.abs(delta));
      const key = row ?? name;
      if (!tones.includes(key)) tones.push(key);
      return { name, row, tone: tones.indexOf(key), delta };
    });
    const thinned = thinBody(set, mostTriangles);
    return {
      name: path === undefined ? variant : naming.run(path),
      set: thinned.set,
      triangles: set.partOf.length,
      moved: thinned.moved,
      parts,
    };
  });
  const pair = comparisons.find(({ b }) => shown.some(({ ledger }) => ledger.path === b.path));
  return { variants, basis: pair ? naming.run(pair.a.path) : null, largest };
}

/** A part of the ledger by its name or, in a case's own surface, its patch; a part that a half model leaves out by its mirror image. */
function rowOf(
  part: { name: string; patch: string },
  index: number,
  set: TriangleSet,
  bounds: Box[],
  rows: string[],
  leftOut: string[],
): string | null {
  if (rows.includes(part.name)) return part.name;
  if (rows.includes(part.patch)) return part.patch;
  if (!leftOut.includes(part.name) && !leftOut.includes(part.patch)) return null;
  const own = bounds[index]!;
  const length = Math.max(...bounds.map(({ max }) => max[0])) - Math.min(...bounds.map(({ min }) => min[0]));
  const image: Box = { min: [own.min[0], -own.max[1], own.min[2]], max: [own.max[0], -own.min[1], own.max[2]] };
  const twin = set.parts.findIndex(
    ({ name }, other) => other !== index && rows.includes(name) && apart(bounds[other]!, image) <= mirrorTolerance * length,
  );
  return twin < 0 ? null : set.parts[twin]!.name;
}

const apart = (one: Box, other: Box): number =>
  Math.max(
    ...one.min.map((value, axis) => Math.abs(value - other.min[axis]!)),
    ...one.max.map((value, axis) => Math.abs(value - other.max[axis]!)),
  );

/** One box per part; an empty part has an inside-out one. */
export function partBounds({ positions, partOf, parts }: TriangleSet): Box[] {
  const boxes = parts.map((): Box => ({ min: [Infinity, Infinity, Infinity], max: [-Infinity, -Infinity, -Infinity] }));
  for (let at = 0; at < positions.length; at++) {
    const { min, max } = boxes[partOf[Math.floor(at / 9)]!]!;
    const axis = at % 3;
    if (positions[at]! < min[axis]!) min[axis] = positions[at]!;
    if (positions[at]! > max[axis]!) max[axis] = positions[at]!;
  }
  return boxes;
}
