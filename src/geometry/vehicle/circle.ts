import { convexHull } from "./hull.js";

/** A circle in a plane fitted to points, and how well it fits. */
export interface Circle {
  x: number;
  y: number;
  radius: number;
  /** Greatest distance from the centre of a point that was kept. */
  reach: number;
  /** Root mean square distance from the circle of the points that were kept. */
  deviation: number;
  /** Share of the full angle that the kept points cover: 1 minus the widest gap over 2π, with the spacing of the rest allowed for. */
  covered: number;
  kept: number;
}

/**
 * Circle through the outermost points of a plane set (2 per point): the corners of its convex hull, so that the inside of a wheel and
 * a flat where it meets the ground do not count. Least squares of the distances (algebraic start after Kåsa, 1976, then
 * Gauss-Newton), repeated without points that are off by more than three robust standard deviations (1.4826 times the median), which
 * takes away a bulge at the ground or a valve. Null for fewer than three corners.
 */
export function outerCircle(points: Float64Array): Circle | null {
  let kept = convexHull(outermost(points));
  for (let round = 0; ; round++) {
    const fit = leastSquares(kept);
    if (fit === null) return null;
    const off = Array.from({ length: kept.length / 2 }, (_, k) =>
      Math.abs(Math.hypot(kept[2 * k] - fit.x, kept[2 * k + 1] - fit.y) - fit.radius),
    );
    const limit = Math.max(3 * 1.4826 * median(off), 2e-4 * fit.radius);
    const next = Float64Array.from(kept.filter((_, k) => off[k >> 1] <= limit));
    if (next.length === kept.length || next.length < kept.length / 2 || next.length < 6 || round === 20)
      return described(kept, fit);
    kept = next;
  }
}

interface Centre {
  x: number;
  y: number;
  radius: number;
}

function described(points: Float64Array, fit: Centre): Circle {
  const count = points.length / 2;
  const angles = new Float64Array(count);
  let reach = 0;
  let squares = 0;
  for (let k = 0; k < count; k++) {
    const dx = points[2 * k] - fit.x;
    const dy = points[2 * k + 1] - fit.y;
    const distance = Math.hypot(dx, dy);
    reach = Math.max(reach, distance);
    squares += (distance - fit.radius) ** 2;
    angles[k] = Math.atan2(dy, dx);
  }
  angles.sort();
  let gap = angles[0] + 2 * Math.PI - angles[count - 1];
  for (let k = 1; k < count; k++) gap = Math.max(gap, angles[k] - angles[k - 1]);
  const covered = Math.min(1, 1 - gap / (2 * Math.PI) + 1 / count);
  return { ...fit, reach, deviation: Math.sqrt(squares / count), covered, kept: count };
}

function leastSquares(points: Float64Array): Centre | null {
  const count = points.length / 2;
  if (count < 3) return null;
  let mx = 0;
  let my = 0;
  for (let k = 0; k < count; k++) {
    mx += points[2 * k] / count;
    my += points[2 * k + 1] / count;
  }
  let xx = 0;
  let xy = 0;
  let yy = 0;
  let xz = 0;
  let yz = 0;
  let zz = 0;
  for (let k = 0; k < count; k++) {
    const x = points[2 * k] - mx;
    const y = points[2 * k + 1] - my;
    const z = x * x + y * y;
    xx += x * x;
    xy += x * y;
    yy += y * y;
    xz += x * z;
    yz += y * z;
    zz += z;
  }
  const determinant = xx * yy - xy * xy;
  if (!(determinant > 1e-12 * (xx + yy) ** 2)) return null;
  let x = (xz * yy - yz * xy) / (2 * determinant);
  let y = (yz * xx - xz * xy) / (2 * determinant);
  let radius = Math.sqrt(zz / count + x * x + y * y);
  for (let step = 0; step < 10; step++) {
    const change = gaussNewton(points, mx + x, my + y, radius);
    if (change === null) break;
    x += change.x;
    y += change.y;
    radius += change.radius;
    if (Math.hypot(change.x, change.y, change.radius) < 1e-13 * radius) break;
  }
  return { x: mx + x, y: my + y, radius };
}

/** One step towards the least squares of distance minus radius. */
function gaussNewton(points: Float64Array, x: number, y: number, radius: number): Centre | null {
  const count = points.length / 2;
  let cc = 0;
  let cs = 0;
  let ss = 0;
  let c1 = 0;
  let s1 = 0;
  let cr = 0;
  let sr = 0;
  let r1 = 0;
  for (let k = 0; k < count; k++) {
    const dx = points[2 * k] - x;
    const dy = points[2 * k + 1] - y;
    const distance = Math.hypot(dx, dy);
    if (distance === 0) return null;
    const c = dx / distance;
    const s = dy / distance;
    const rest = distance - radius;
    cc += c * c;
    cs += c * s;
    ss += s * s;
    c1 += c;
    s1 += s;
    cr += c * rest;
    sr += s * rest;
    r1 += rest;
  }
  // The radius is eliminated: it follows from the mean of what is left.
  cc -= (c1 * c1) / count;
  cs -= (c1 * s1) / count;
  ss -= (s1 * s1) / count;
  cr -= (c1 * r1) / count;
  sr -= (s1 * r1) / count;
  const determinant = cc * ss - cs * cs;
  if (!(Math.abs(determinant) > 1e-12 * count * count)) return null;
  const dx = (cr * ss - sr * cs) / determinant;
  const dy = (sr * cc - cr * cs) / determinant;
  return { x: dx, y: dy, radius: (r1 - c1 * dx - s1 * dy) / count };
}

function median(values: number[]): number {
  const sorted = values.slice().sort((a, b) => a - b);
  const half = sorted.length >> 1;
  return sorted.length % 2 === 1 ? sorted[half] : (sorted[half - 1] + sorted[half]) / 2;
}

const SECTORS = 2880;

/** The outermost point of each of 2880 sectors about the middle of the points: all that can matter of a hull. */
function outermost(points: Float64Array): Float64Array {
  const count = points.length / 2;
  if (count <= SECTORS) return points;
  let left = Infinity;
  let right = -Infinity;
  let bottom = Infinity;
  let top = -Infinity;
  for (let k = 0; k < count; k++) {
    left = Math.min(left, points[2 * k]);
    right = Math.max(right, points[2 * k]);
    bottom = Math.min(bottom, points[2 * k + 1]);
    top = Math.max(top, points[2 * k + 1]);
  }
  const x = (left + right) / 2;
  const y = (bottom + top) / 2;
  const farthest = new Float64Array(SECTORS).fill(-1);
  const best = new Int32Array(SECTORS).fill(-1);
  for (let k = 0; k < count; k++) {
    const dx = points[2 * k] - x;
    const dy = points[2 * k + 1] - y;
    const sector = Math.min(SECTORS - 1, Math.floor(((Math.atan2(dy, dx) + Math.PI) / (2 * Math.PI)) * SECTORS));
    const distance = dx * dx + dy * dy;
    if (distance <= farthest[sector]) continue;
    farthest[sector] = distance;
    best[sector] = k;
  }
  const found = best.filter((k) => k >= 0);
  const kept = new Float64Array(2 * found.length);
  for (let k = 0; k < found.length; k++) kept.set(points.subarray(2 * found[k], 2 * found[k] + 2), 2 * k);
  return kept;
}
