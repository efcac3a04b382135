import { dot, type Vector3 } from "../vector.js";
import type { WheelFit } from "./wheels.js";

const between = (a: Vector3, b: Vector3): Vector3 => [a[0] - b[0], a[1] - b[1], a[2] - b[2]];

/**
 * Gives all pieces of one wheel (tyre, rim, disc) the axis, centre, radius and width of the largest of them: what turns together has
 * one speed of rotation, and that follows from the tread. Pieces belong to a wheel where their centre is nearer to its axle than half
 * its radius and not farther off sideways than its radius. A part keeps one entry per wheel.
 */
export function joinWheels(fits: WheelFit[]): WheelFit[] {
  const treads: WheelFit[] = [];
  for (const fit of fits.slice().sort((a, b) => b.radius - a.radius || a.part - b.part))
    if (!treads.some((tread) => belongs(fit, tread))) treads.push(fit);
  const joined: WheelFit[] = [];
  for (const fit of fits) {
    const tread = treads.find((other) => belongs(fit, other)) ?? fit;
    if (!joined.some((other) => other.part === fit.part && other.centre === tread.centre))
      joined.push({ ...tread, part: fit.part });
  }
  return joined;
}

function belongs(fit: WheelFit, tread: WheelFit): boolean {
  const offset = between(fit.centre, tread.centre);
  const sideways = Math.abs(dot(offset, tread.axis));
  return sideways < tread.radius && Math.sqrt(Math.max(0, dot(offset, offset) - sideways ** 2)) < tread.radius / 2;
}

/** Wheels on one axle line, seen from the side. */
export interface Axle {
  /** Coordinate along the rearward direction, mean of its wheels. */
  position: number;
  wheels: number;
}

/** Axles from the front to the rear: wheels whose centres are closer along the vehicle than half a radius share one. */
export function axlesOf(wheels: WheelFit[], rearward: Vector3): Axle[] {
  const along = wheels
    .map((wheel) => ({ position: dot(wheel.centre, rearward), radius: wheel.radius }))
    .sort((a, b) => a.position - b.position);
  const axles: { sum: number; wheels: number; last: number }[] = [];
  for (const { position, radius } of along) {
    const current = axles.at(-1);
    if (current !== undefined && position - current.last < radius / 2) {
      current.sum += position;
      current.wheels++;
      current.last = position;
    } else axles.push({ sum: position, wheels: 1, last: position });
  }
  return axles.map(({ sum, wheels: count }) => ({ position: sum / count, wheels: count }));
}

/** From the first axle to the middle of all others (the centre of a tandem); null with fewer than two. */
export function wheelbaseOf(axles: Axle[]): number | null {
  if (axles.length < 2) return null;
  const rear = axles.slice(1);
  return rear.reduce((sum, axle) => sum + axle.position, 0) / rear.length - axles[0].position;
}
