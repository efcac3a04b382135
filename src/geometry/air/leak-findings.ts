import { type Finding, finding } from "../../finding.js";
import { counted, lengthWords, scaledPlaces } from "../checks/finding-words.js";
import type { Vector3 } from "../vector.js";
import type { Cavities } from "./cavities.js";
import type { KeepPointProof } from "./keep-point.js";
import type { Leak } from "./leak.js";

const placeWords = (at: Vector3, scale: number): string =>
  `(${at.map((value) => Number((scale * value).toFixed(2)) + 0).join(", ")}) m`;

/** In mm with three figures: cells are compared with those of the plan. */
const cellWords = (cell: number, scale: number): string => `${Number((1000 * scale * cell).toPrecision(3))} mm`;

const volumeWords = (cubicMetres: number): string =>
  cubicMetres < 0.1 ? `${Number((1000 * cubicMetres).toPrecision(2))} litres` : `${Number(cubicMetres.toPrecision(2))} m³`;

/**
 * What the leak test says: `leak`, `leak-not-tested` (null, or left out), `leak-cell-enlarged`.
 *
 * @param leak in the mesh unit; null where the surface is rubble, undefined where the test was left out
 * @param scale metres per mesh unit
 */
export function leakFindings(leak: Leak | null | undefined, scale: number): Finding[] {
  if (leak === undefined) return [];
  if (leak === null)
    return [
      finding(
        "leak-not-tested",
        "warning",
        "The surface is so much larger than its box that it cannot be a body's skin; whether air gets inside was not tested.",
        "Look at the triangles: a file of another kind, or of mixed units, looks like this.",
      ),
    ];
  const findings: Finding[] = [];
  const cell = cellWords(leak.cell, scale);
  if (leak.asked !== undefined)
    findings.push(
      finding(
        "leak-cell-enlarged",
        "note",
        `The leak test was made for cells of ${cell}, not for ${cellWords(leak.asked, scale)}: finer ones would take too much memory. Holes between the two were not looked for.`,
        "Test the parts with holes alone if such narrow ones matter.",
      ),
    );
  if (!leak.reached) return findings;
  const why = "The mesh would fill the inside, and its walls would count as the body's.";
  if (leak.holes.length === 0) {
    findings.push(
      finding(
        "leak",
        "warning",
        `Air gets into the inside at cells of ${cell}, but the way in could not be traced to an open edge. ${why}`,
        "Look at edges where more than two triangles meet and at shells that face the wrong way, repair these, and test again.",
      ),
    );
    return findings;
  }
  const [{ centre, width, doubt }] = leak.holes;
  const about = doubt === undefined ? "" : `, to ${lengthWords(scale * doubt)}`;
  const more = leak.holes.length > 1 ? `; ${leak.holes.length} ways in were found` : "";
  findings.push(
    finding(
      "leak",
      "warning",
      `Air gets into the inside at cells of ${cell}: the widest way in is ${lengthWords(scale * width)} wide${about}, at ${placeWords(centre, scale)}${more}. ${why}`,
      `Close the hole, or mesh with cells wider than it, or expect the flow to pass through it.`,
      {
        count: leak.holes.length,
        places: scaledPlaces(
          leak.holes.map((hole) => hole.centre),
          scale,
        ),
      },
    ),
  );
  return findings;
}

/** Air that the body closes off: `enclosed-air`. Its own inside is what a body should have and is no finding. */
export function cavityFindings(cavities: Cavities, scale: number): Finding[] {
  const { air, cell } = cavities;
  if (air.count === 0) return [];
  const pockets = cavities.largest.filter(({ kind }) => kind === "air");
  const [first] = pockets;
  return [
    finding(
      "enclosed-air",
      "note",
      `${counted(air.count, "space")} between the parts hold${air.count === 1 ? "s" : ""} ${volumeWords(scale ** 3 * air.volume)} of air that cells of ${cellWords(cell, scale)} do not reach from outside, the largest ${volumeWords(scale ** 3 * first.volume)} at ${placeWords(first.place, scale)}. The mesh leaves them out without a word, and their walls carry no force.`,
      "Nothing, if these spaces are shut on the vehicle as well; if air passes there, widen the gap or refine the mesh around it.",
      {
        count: air.count,
        places: scaledPlaces(
          pockets.slice(0, 10).map(({ place }) => place),
          scale,
        ),
      },
    ),
  ];
}

/** Why a keep-point cannot be trusted: `keep-point-not-outside`, `keep-point-near-surface`, `keep-point-on-face`. */
export function keepPointFindings(point: Vector3, proof: KeepPointProof, scale: number): Finding[] {
  if (proof.proven) return [];
  const at = placeWords(point, scale);
  const places = scaledPlaces([point], scale);
  if (!proof.outside)
    return [
      finding(
        "keep-point-not-outside",
        "error",
        `The keep-point ${at} does not hang together with the air outside: the mesh would keep what it stands in and drop the rest.`,
        "Move the keep-point into the free air ahead of or above the body.",
        { places },
      ),
    ];
  if (proof.cells < 2)
    return [
      finding(
        "keep-point-near-surface",
        "error",
        `The keep-point ${at} is ${lengthWords(scale * proof.clearance)} from the surface, ${Number(proof.cells.toPrecision(2))} cells; under two, its cell may be cut away.`,
        "Move the keep-point into the free air ahead of or above the body.",
        { places },
      ),
    ];
  return [
    finding(
      "keep-point-on-face",
      "error",
      `The keep-point ${at} lies within a twentieth of a cell of a face of the grid, where the mesher cannot tell which cell it is in.`,
      "Move the keep-point to the golden section of a cell.",
      { places },
    ),
  ];
}
