import type { Leak } from "./checks/leak.js";
import type { StanceSurvey, Wheel } from "./survey.js";
import type { Part } from "./triangle-set.js";
import type { Vector3 } from "./vector.js";
import type { Stance } from "./vehicle/stance.js";
import type { WheelFit } from "./vehicle/wheels.js";

/** A point, `scale` metres per unit, in metres. */
export const pointInMetres = (at: Vector3, scale: number): Vector3 => at.map((value) => value * scale) as Vector3;

export function wheelInMetres(wheel: WheelFit, stance: Stance, parts: Part[], scale: number): Wheel {
  const standing = stance.wheels.find(({ centre }) => centre === wheel.centre)!;
  const { contact } = standing;
  return {
    part: parts[wheel.part].name,
    position: standing.position,
    centre: pointInMetres(wheel.centre, scale),
    axis: wheel.axis,
    radius: wheel.radius * scale,
    width: wheel.width * scale,
    fitError: wheel.fitError * scale,
    axleHeight: standing.axleHeight * scale,
    gap: standing.gap * scale,
    contact:
      contact === null
        ? null
        : {
            centre: pointInMetres(contact.centre, scale),
            length: contact.length * scale,
            width: contact.width * scale,
            area: contact.area * scale ** 2,
          },
  };
}

export function stanceInMetres({ ground, track, overhangs, clearance }: Stance, parts: Part[], scale: number): StanceSurvey {
  const metres = (value: number | null): number | null => (value === null ? null : value * scale);
  return {
    ground: ground * scale,
    track: { front: metres(track.front), rear: metres(track.rear) },
    overhangs: overhangs === null ? null : { front: overhangs.front * scale, rear: overhangs.rear * scale },
    clearance:
      clearance === null
        ? null
        : {
            height: clearance.height * scale,
            place: pointInMetres(clearance.place, scale),
            part: parts[clearance.part].name,
          },
  };
}

export const leakInMetres = ({ cell, reached, holes }: Leak, scale: number): Leak => ({
  cell: cell * scale,
  reached,
  holes: holes.map(({ centre, width }) => ({ centre: pointInMetres(centre, scale), width: width * scale })),
});
