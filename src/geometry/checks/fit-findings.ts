import { type Finding, finding } from "../../finding.js";
import type { Part } from "../triangle-set.js";
import type { CoincidentFaces, CoincidentPair } from "./coincident.js";
import type { Crossings } from "./crossings.js";
import type { CutDeviation } from "./cut-plane.js";
import {
  areaWords,
  counted,
  firstOf,
  lengthWords,
  pairWords,
  partsOf,
  placesInTurn,
  scaledPlaces,
  shareWords,
} from "./finding-words.js";
import type { Gaps, NarrowGap } from "./gaps.js";
import type { SheetPart } from "./sheets.js";
import type { Slivers } from "./slivers.js";
import type { Thickness, ThinPart } from "./thickness.js";

const early = (complete: boolean): string => (complete ? "" : " The search ended early: there are more.");

/** Shells that reach into each other: allowed, and normal for wheels, mirrors and the like; worth knowing where it was not meant. `scale`: metres per mesh unit. */
export function overlapFindings(
  { betweenShells, betweenParts, partPairs, complete }: Crossings,
  parts: Part[],
  scale: number,
): Finding[] {
  const findings: Finding[] = [];
  if (betweenParts.count > 0) {
    const listed = partPairs.map((pair) => `${pairWords(pair, parts)} ${pair.count}`);
    findings.push(
      finding(
        "parts-overlap",
        "note",
        `${counted(partPairs.length, "pair of parts reaches", "pairs of parts reach")} into each other (pairs of triangles that cross): ${firstOf(listed, 6)}. The mesh keeps what is outside of both, so wetted area is less than the sum of the parts.${early(complete)}`,
        "Nothing, where it is meant; else move the parts apart or join them along one edge.",
        { count: betweenParts.count, places: scaledPlaces(placesInTurn(partPairs.map((pair) => pair.places)), scale) },
      ),
    );
  }
  if (betweenShells.count > 0) {
    const where = partsOf(betweenShells.perPart, parts);
    findings.push(
      finding(
        "shells-overlap",
        "note",
        `${counted(betweenShells.count, "pair of triangles of different shells of one part crosses", "pairs of triangles of different shells of one part cross")}: the part is made of pieces that reach into each other, and the mesh keeps what is outside of all: ${where.text}.${early(complete)}`,
        "Nothing, where it is meant; else unite the pieces.",
        { count: betweenShells.count, part: where.only, places: scaledPlaces(betweenShells.places, scale) },
      ),
    );
  }
  return findings;
}

/** Triangles far lower than long. `scale`: metres per mesh unit. */
export function sliverFindings(slivers: Slivers, parts: Part[], scale: number): Finding[] {
  if (slivers.count === 0) return [];
  const where = partsOf(slivers.perPart, parts);
  const folded =
    slivers.folded > 0
      ? ` ${counted(slivers.folded, "of them faces", "of them face")} away from all neighbours, so the surface folds there and the mesher sees edges that the shape has not.`
      : "";
  return [
    finding(
      "sliver-triangles",
      slivers.folded > 0 ? "warning" : "note",
      `${counted(slivers.count, "triangle is", "triangles are")} more than ${slivers.limit} times as long as high (the worst ${Number(slivers.worst.toPrecision(2))} times): such normals hang on the last digits of their corners, and the mesher snaps to and finds edges by normals.${folded} Parts: ${where.text}.`,
      "Mesh the surface again with a least edge length, or merge corners closer than a tenth of a millimetre when exporting.",
      { count: slivers.count, part: where.only, places: scaledPlaces(slivers.places, scale) },
    ),
  ];
}

/** Below this, faces on each other are a seam, not a skin: m². */
const SEAM = 1e-6;

/** Faces that lie on each other. `scale`: metres per mesh unit. */
export function coincidentFindings(coincident: CoincidentFaces, parts: Part[], scale: number): Finding[] {
  const findings: Finding[] = [];
  const within = lengthWords(coincident.tolerance * scale);
  const listed = (pairs: CoincidentPair[], way: "same" | "opposite"): string =>
    firstOf(pairs.map((pair) => `${pairWords(pair, parts)} ${areaWords(pair[way].area * scale ** 2)}`));
  const of = (way: "same" | "opposite"): CoincidentPair[] =>
    coincident.pairs.filter((pair) => pair[way].area > 0).sort((p, q) => q[way].area - p[way].area);
  const more = (pairs: CoincidentPair[], way: "same" | "opposite") => ({
    count: coincident[way].count,
    part: pairs.length === 1 && pairs[0].a === pairs[0].b ? parts[pairs[0].a].name : null,
    places: scaledPlaces(placesInTurn(pairs.map((pair) => pair.places)), scale),
  });
  const same = of("same");
  if (same.length > 0) {
    const area = coincident.same.area * scale ** 2;
    const apart = same.some(({ a, b }) => a !== b);
    findings.push(
      finding(
        "coincident-faces",
        area > SEAM ? "warning" : "note",
        `${areaWords(area)} of surface is there twice: triangles lie on others within ${within} and face the same way (${listed(same, "same")}). ${
          apart
            ? "The mesh takes either part at random, so force moves between their entries in the ledger, and areas count twice."
            : "Areas count twice."
        }${early(coincident.complete)}`,
        "Remove one of the two skins, or set one back by more than a cell.",
        more(same, "same"),
      ),
    );
  }
  const opposite = of("opposite");
  if (opposite.length > 0)
    findings.push(
      finding(
        "touching-faces",
        "note",
        `${areaWords(coincident.opposite.area * scale ** 2)} of surface lies on surface that faces the other way, within ${within} (${listed(opposite, "opposite")}). Where solids touch, no air is lost; a sheet folded onto itself has no thickness, and the mesh may take either of its sides.${early(coincident.complete)}`,
        "Let solids overlap by a cell instead of touching; give a folded sheet thickness, or keep one side of it.",
        more(opposite, "opposite"),
      ),
    );
  return findings;
}

/** Open parts without an inside. `scale`: metres per mesh unit. */
export function sheetFindings(sheets: SheetPart[], parts: Part[], scale: number): Finding[] {
  if (sheets.length === 0) return [];
  return [
    finding(
      "sheet-part",
      "note",
      `${counted(sheets.length, "part is a sheet", "parts are sheets")}, open and with air on both sides: ${openParts(sheets, parts)}. The mesh closes around both sides, and forces of both go into the part's one entry; the thickness is lost.`,
      "Nothing, where a thin panel is meant; else close the part to a solid of at least two cells.",
      whereOf(sheets, parts, scale),
    ),
  ];
}

/** Open parts that are inside out; closed ones are `topologyFindings`'s. `scale`: metres per mesh unit. */
export function inwardFindings(inward: SheetPart[], parts: Part[], scale: number): Finding[] {
  if (inward.length === 0) return [];
  return [
    finding(
      "inward-part",
      "warning",
      `${counted(inward.length, "open part faces", "open parts face")} inwards: ${openParts(inward, parts)}. The mesh does not mind, but volume is wrong, and thickness cannot be judged there.`,
      "Turn the normals of these parts outwards.",
      whereOf(inward, parts, scale),
    ),
  ];
}

const openParts = (found: SheetPart[], parts: Part[]): string =>
  firstOf(found.map(({ part, openEdges }) => `${parts[part].name} (${counted(openEdges, "open edge")})`));

const whereOf = (found: SheetPart[], parts: Part[], scale: number) => ({
  count: found.length,
  part: found.length === 1 ? parts[found[0].part].name : null,
  places: scaledPlaces(found.map(({ place }) => place).slice(0, 10), scale),
});

/** Shares of a part's area: below the first nothing is said, from the second on it is a warning. */
const THIN = { note: 0.01, warning: 0.1 };
/** A wall thicker than a cell's diagonal has cell middles in it everywhere, however it lies: thin, but not lost. */
const LOST = Math.sqrt(3);
const GAP = { note: 0.01, warning: 0.25 };

/** Parts thinner than the cells can show. `scale`: metres per mesh unit. */
export function thicknessFindings(thickness: Thickness, parts: Part[], scale: number): Finding[] {
  const worth = thickness.thin.filter(({ share }) => share >= THIN.note);
  const words = ({ part, share, least, median, cell }: ThinPart): string =>
    `${parts[part].name} (${shareWords(share)} of its area, mostly ${lengthWords(median * scale)}, least ${lengthWords(least * scale)}, cell ${lengthWords(cell * scale)})`;
  return bySeverity(worth, ({ share, median, cell }) => share >= THIN.warning && median < LOST * cell).map(([severity, found]) =>
    finding(
      "thin-part",
      severity,
      `${counted(found.length, "part is", "parts are")} thinner than ${thickness.cells} surface cells: ${firstOf(found.map(words), 4)}. ${severity === "warning" ? "The mesh can lose such a wall or tear holes into it." : "The mesh rounds such a wall off, and can tear it below one cell."}${sampled(thickness)}`,
      "Refine there to at least two cells across, or give the part more thickness.",
      {
        count: found.length,
        part: found.length === 1 ? parts[found[0].part].name : null,
        places: scaledPlaces(found.map(({ place }) => place).slice(0, 10), scale),
      },
    ),
  );
}

/** Gaps with less air than the cells can fill. `scale`: metres per mesh unit. */
export function gapFindings(gaps: Gaps, parts: Part[], scale: number): Finding[] {
  const share = ({ shareOfA, shareOfB }: NarrowGap): number => Math.max(shareOfA, shareOfB);
  const worth = gaps.narrow.filter((gap) => share(gap) >= GAP.note);
  const words = (gap: NarrowGap): string =>
    `${pairWords(gap, parts)} (${areaWords(gap.area * scale ** 2)}, mostly ${lengthWords(gap.median * scale)}, least ${lengthWords(gap.least * scale)}, cell ${lengthWords(gap.cell * scale)})`;
  return bySeverity(worth, (gap) => share(gap) >= GAP.warning).map(([severity, found]) =>
    finding(
      "narrow-gap",
      severity,
      `${counted(found.length, "gap is", "gaps are")} narrower than ${gaps.cells} surface cells: between ${firstOf(found.map(words), 4)}. The mesh closes such a gap or fills it with one ragged cell, and the flow through it is not that of the shape.${sampled(gaps)}`,
      "Refine there to at least two cells across, or close the gap on purpose, in all variants alike.",
      {
        count: found.length,
        part: found.length === 1 && found[0].a === found[0].b ? parts[found[0].a].name : null,
        places: scaledPlaces(found.map(({ place }) => place).slice(0, 10), scale),
      },
    ),
  );
}

function bySeverity<T>(found: T[], isWarning: (entry: T) => boolean): ["warning" | "note", T[]][] {
  const warnings = found.filter(isWarning);
  const notes = found.filter((entry) => !isWarning(entry));
  const groups: ["warning" | "note", T[]][] = [
    ["warning", warnings],
    ["note", notes],
  ];
  return groups.filter(([, entries]) => entries.length > 0);
}

const sampled = ({ rays, sampledTriangles, triangles }: Pick<Gaps, "rays" | "sampledTriangles" | "triangles">): string =>
  sampledTriangles < triangles ? ` (${rays} rays from ${sampledTriangles} of ${triangles} triangles.)` : "";

/** The cut of a half body against its plane. `scale`: metres per mesh unit. */
export function cutFindings(cut: CutDeviation, scale: number): Finding[] {
  const findings: Finding[] = [];
  const tolerance = lengthWords(cut.tolerance * scale);
  if (!cut.isPlanar)
    findings.push(
      finding(
        "cut-not-planar",
        "warning",
        `${cut.stray} of the ${cut.vertices} vertices of the half body's open cut ${cut.stray === 1 ? "lies" : "lie"} more than ${tolerance} off the symmetry plane, the farthest ${lengthWords(cut.deviation * scale)}. The mesh leaves a sliver of air or a step there.`,
        "Cut the body again by the plane, and move the cut's vertices into it.",
        { count: cut.stray, places: cut.place === null ? [] : scaledPlaces([cut.place], scale) },
      ),
    );
  if (cut.beyond > 0)
    findings.push(
      finding(
        "crosses-symmetry-plane",
        "warning",
        `${counted(cut.beyond, "vertex of the half body lies", "vertices of the half body lie")} beyond the symmetry plane, by up to ${lengthWords(cut.beyondBy * scale)}. What is beyond it is left out of the mesh, and areas and forces of these parts are not half of the whole.`,
        "Cut the body at the plane, or calculate the whole body.",
        { count: cut.beyond, places: cut.beyondPlace === null ? [] : scaledPlaces([cut.beyondPlace], scale) },
      ),
    );
  return findings;
}
