import { type Finding, finding } from "../../finding.js";
import type { Part } from "../triangle-set.js";
import type { Vector3 } from "../vector.js";
import type { Stance } from "../vehicle/stance.js";

/** Share of its radius by which a wheel may stand lower than its tread: more is not a tyre's deflection but a ride height gone wrong. */
const SUNK = 0.1;

/**
 * What is odd about how the wheels meet the ground, which is at the body's lowest point. `scale`: metres per mesh unit; `cell`: metres,
 * of the mesh at the surface. Places in metres.
 */
export function stanceFindings(stance: Stance, parts: Part[], scale: number, cell: number): Finding[] {
  const findings: Finding[] = [];
  const mm = (metres: number): string => `${Number((1000 * metres).toPrecision(3))} mm`;
  const place = (at: Vector3): Vector3 => at.map((value) => value * scale) as Vector3;
  const names = (wheels: Stance["wheels"]): string => wheels.map(({ position }) => position).join(", ");
  const onePart = (wheels: Stance["wheels"]): string | null =>
    wheels.length === 1 && wheels[0].parts.length === 1 ? parts[wheels[0].parts[0]].name : null;

  const hovering = stance.wheels.filter(({ contact }) => contact === null);
  if (hovering.length > 0) {
    const widest = Math.max(...hovering.map(({ gap }) => gap)) * scale;
    const { clearance } = stance;
    const cause =
      clearance !== null && clearance.height === 0 && hovering.length === stance.wheels.length
        ? `part "${parts[clearance.part].name}" reaches lower than every wheel`
        : "the ground is at the body's lowest point";
    findings.push(
      finding(
        "wheel-hovers",
        "warning",
        `${hovering.length} of ${stance.wheels.length} wheels do not touch the ground (${names(hovering)}; up to ${mm(widest)} above it): ${cause}. ` +
          (widest < 2 * cell
            ? `The gap is narrower than two cells of ${mm(cell)}: the mesh closes it here and there, and what is left is a jet that no tyre has.`
            : "Air passes under the wheel, which changes its drag and the lift of its axle."),
        "Bring all wheels to one height, lowest of all; better, press them into the ground by some millimetres.",
        { part: onePart(hovering), count: hovering.length, places: hovering.slice(0, 10).map(({ centre }) => place(centre)) },
      ),
    );
  }
  const sunk = stance.wheels.filter(({ axleHeight, radius }) => radius - axleHeight > SUNK * radius);
  if (sunk.length > 0)
    findings.push(
      finding(
        "wheel-sunk",
        "warning",
        `${sunk.length} of ${stance.wheels.length} axles stand more than a tenth of the radius lower than their tread is high (${names(sunk)}; up to ${mm(Math.max(...sunk.map(({ axleHeight, radius }) => radius - axleHeight)) * scale)}): more than a tyre gives way.`,
        "Check the ride height, or which parts are wheels.",
        { part: onePart(sunk), count: sunk.length, places: sunk.slice(0, 10).map(({ centre }) => place(centre)) },
      ),
    );
  const onLine = stance.wheels.filter(({ contact }) => contact !== null && contact.length * scale < 2 * cell);
  if (onLine.length > 0)
    findings.push(
      finding(
        "contact-line",
        "note",
        `${onLine.length} of ${stance.wheels.length} wheels touch the ground over less than two cells of ${mm(cell)} (${names(onLine)}; the longest patch is ${mm(Math.max(...onLine.map(({ contact }) => contact?.length ?? 0)) * scale)} long, a millimetre up). Beside such a line the tyre and the ground form a wedge thinner than any cell.`,
        "Press the tyres into the ground by some millimetres, or flatten them, so that the patch is longer; a mesh without layers there also copes.",
        {
          part: onePart(onLine),
          count: onLine.length,
          places: onLine.slice(0, 10).map(({ contact, centre }) => place(contact?.centre ?? centre)),
        },
      ),
    );
  return findings;
}
