import { type Finding, finding } from "../../finding.js";
import type { Part } from "../triangle-set.js";
import type { Crossings } from "./crossings.js";
import { counted, firstOf, pairWords, partsOf, placesInTurn, scaledPlaces } from "./finding-words.js";

/** Shells that reach into each other: allowed, and normal for wheels, mirrors and the like; worth knowing where it was not meant. `scale`: metres per mesh unit. */
export function overlapFindings({ betweenShells, betweenParts, partPairs }: Crossings, parts: Part[], scale: number): Finding[] {
  const findings: Finding[] = [];
  if (betweenParts.count > 0) {
    const listed = partPairs.map((pair) => `${pairWords(pair, parts)} ${pair.count}`);
    findings.push(
      finding(
        "parts-overlap",
        "note",
        `${counted(partPairs.length, "pair")} of parts reach into each other (pairs of triangles that cross): ${firstOf(listed, 6)}. The mesh keeps what is outside of both, so wetted area is less than the sum of the parts.`,
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
        `${counted(betweenShells.count, "pair")} of triangles of different shells of one part cross: the part is made of pieces that reach into each other, and the mesh keeps what is outside of all: ${where.text}.`,
        "Nothing, where it is meant; else unite the pieces.",
        { count: betweenShells.count, part: where.only, places: scaledPlaces(betweenShells.places, scale) },
      ),
    );
  }
  return findings;
}
