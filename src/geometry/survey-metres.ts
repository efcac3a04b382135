import type { Leak } from "./air/leak.js";
import type { OpenBorder } from "./checks/open-loops.js";
import type { FitAtCell } from "./fit-at-cell.js";
import type { BorderSurvey, CellFitSurvey, StanceSurvey, Wheel } from "./survey.js";
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

export const leakInMetres = ({ cell, asked, reached, holes }: Leak, scale: number): Leak => ({
  cell: cell * scale,
  ...(asked !== undefined && { asked: asked * scale }),
  reached,
  holes: holes.map(({ centre, width, doubt }) => ({
    centre: pointInMetres(centre, scale),
    width: width * scale,
    ...(doubt !== undefined && { doubt: doubt * scale }),
  })),
});

export function bordersInMetres(borders: OpenBorder[], parts: Part[], scale: number): BorderSurvey[] {
  return borders.map((border) => ({
    edges: border.edges,
    length: border.length * scale,
    span: border.span * scale,
    centre: pointInMetres(border.centre, scale),
    closed: border.closed,
    parts: border.parts.map((part) => parts[part].name),
  }));
}

export function fitInMetres({ leaks, cavities, cells }: FitAtCell, cell: number, parts: Part[], scale: number): CellFitSurvey {
  const volume = ({ count, volume: own }: { count: number; volume: number }) => ({ count, volume: own * scale ** 3 });
  const narrow = ({ least, median, cell: own, place }: { least: number; median: number; cell: number; place: Vector3 }) => ({
    least: least * scale,
    median: median * scale,
    cell: own * scale,
    place: pointInMetres(place, scale),
  });
  return {
    cell,
    leaks: leaks.map((leak) => leakInMetres(leak, scale)),
    enclosed: cavities === null ? null : { inside: volume(cavities.inside), air: volume(cavities.air) },
    thin: cells.thickness.thin.map((thin) => ({ part: parts[thin.part].name, share: thin.share, ...narrow(thin) })),
    gaps: cells.gaps.narrow.map((gap) => ({
      parts: [parts[gap.a].name, parts[gap.b].name],
      area: gap.area * scale ** 2,
      ...narrow(gap),
    })),
    sheets: cells.open.sheets.map(({ part, openEdges, exposed, place }) => ({
      part: parts[part].name,
      openEdges,
      exposed,
      place: pointInMetres(place, scale),
    })),
  };
}
