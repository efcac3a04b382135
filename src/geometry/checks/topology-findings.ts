import { type Finding, finding } from "../../finding.js";
import type { MeshTopology, Occurrence } from "../topology.js";
import type { Part } from "../triangle-set.js";
import type { Mirror } from "../vehicle/mirror.js";
import type { Crossings } from "./crossings.js";
import { lengthWords, partsOf, scaledPlaces } from "./finding-words.js";

/** What the topology (and the crossings, where they were looked for) mean for a mesh, with figures. `scale`: metres per mesh unit. */
export function topologyFindings(
  topology: MeshTopology,
  crossings: Crossings | null,
  parts: Part[],
  scale: number,
  mirror: Mirror,
): Finding[] {
  const findings: Finding[] = [];
  const add = (code: string, severity: Finding["severity"], found: Occurrence, message: string, remedy: string): void => {
    if (found.count === 0) return;
    const where = partsOf(found.perPart, parts);
    findings.push(
      finding(code, severity, `${message} ${where.text}.`, remedy, {
        count: found.count,
        part: where.only,
        places: scaledPlaces(found.places, scale),
      }),
    );
  };
  const borders = `${topology.borderCount} ${topology.borderCount === 1 ? "border" : "borders"}`;
  const widest = lengthWords(topology.borders.reduce((most, { span }) => Math.max(most, span), 0) * scale);
  add(
    "open-edges",
    mirror.kind === "half" ? "note" : "warning",
    topology.open,
    mirror.kind === "half"
      ? `${topology.open.count} edges belong to one triangle only (${borders}, the widest ${widest} across). The body is a half, so its cut is open; check that nothing else is:`
      : `${topology.open.count} edges belong to one triangle only (${borders}, the widest ${widest} across): holes or sheets. Through a hole wider than a cell the mesh grows into the body:`,
    "Close the holes, weld parts that should touch, or make sure that each hole is smaller than the cells there.",
  );
  add(
    "non-manifold-edges",
    "warning",
    topology.nonManifold,
    `${topology.nonManifold.count} edges join more than two triangles: walls inside, or parts that share an edge. Inside and outside are not plain there:`,
    "Remove inner walls, or let the parts overlap instead of touching along an edge.",
  );
  add(
    "flipped-edges",
    "warning",
    topology.flipped,
    `${topology.flipped.count} edges join triangles that face opposite ways. Volume and normals are wrong there; areas and the silhouette are not:`,
    "Unify the normals so that they point outwards.",
  );
  add(
    "inside-out",
    "warning",
    topology.insideOut,
    `${topology.insideOut.count} closed ${topology.insideOut.count === 1 ? "shell faces" : "shells face"} inwards (negative volume). That is right for the wall of a cavity only:`,
    "Turn the shell over, or leave out the cavity.",
  );
  add(
    "duplicate-triangles",
    "warning",
    topology.duplicate,
    `${topology.duplicate.count} triangles lie on another one with the same corners: areas count twice:`,
    "Remove the doubled surface; often a part was exported twice.",
  );
  if (crossings !== null) {
    add(
      "self-intersections",
      "warning",
      crossings.within,
      `${crossings.within.count} pairs of triangles of one shell pass through each other${crossings.complete ? "" : " (the search ended early: there are more)"}. The surface folds through itself there, and the mesh takes what it meets first:`,
      "Repair the fold, or separate what should be two overlapping shells.",
    );
  }
  add(
    "degenerate-triangles",
    "note",
    topology.degenerate,
    `${topology.degenerate.count} triangles have no area (no higher than the rounding of their coordinates). They do no harm to areas, but can upset a mesher:`,
    "Clean the surface when exporting it.",
  );
  return findings;
}
