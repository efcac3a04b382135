import type { Point } from "./flat-region.js";

/** 0 before `from`, 1 after `to`, a smooth rise between. */
export function ramp(x: number, from: number, to: number): number {
  const t = Math.max(0, Math.min(1, (x - from) / (to - from)));
  return t * t * (3 - 2 * t);
}

/** 1 between `from` and `to`, falling smoothly to 0 over `width` outside them. */
export function plateau(x: number, from: number, to: number, width: number): number {
  return ramp(x, from - width, from) * (1 - ramp(x, to, to + width));
}

/** A smooth curve through points with growing x: cubic Hermite pieces, slopes from the neighbours (Catmull and Rom 1974); level at both ends. */
export function throughPoints(x: number, points: Point[]): number {
  const last = points.length - 1;
  if (x <= points[0][0]) return points[0][1];
  if (x >= points[last][0]) return points[last][1];
  const k = points.findIndex((point) => point[0] > x) - 1;
  const slopeAt = (n: number): number =>
    n === 0 || n === last ? 0 : (points[n + 1][1] - points[n - 1][1]) / (points[n + 1][0] - points[n - 1][0]);
  const length = points[k + 1][0] - points[k][0];
  const t = (x - points[k][0]) / length;
  const rise = points[k + 1][1] - points[k][1];
  const [a, b] = [slopeAt(k) * length, slopeAt(k + 1) * length];
  return points[k][1] + t * (a + t * (3 * rise - 2 * a - b + t * (a + b - 2 * rise)));
}
