/** Corners of the convex hull of plane points (2 per point), counter-clockwise, without points on its sides (Andrew, 1979). */
export function convexHull(points: Float64Array): Float64Array {
  const order = Array.from({ length: points.length / 2 }, (_, k) => k).sort(
    (a, b) => points[2 * a] - points[2 * b] || points[2 * a + 1] - points[2 * b + 1],
  );
  const half = (indices: number[]): number[] => {
    const chain: number[] = [];
    for (const k of indices) {
      while (chain.length >= 2 && !turnsLeft(points, chain[chain.length - 2], chain[chain.length - 1], k)) chain.pop();
      chain.push(k);
    }
    chain.pop();
    return chain;
  };
  const hull = [...half(order), ...half(order.reverse())];
  const corners = new Float64Array(2 * hull.length);
  for (let k = 0; k < hull.length; k++) corners.set(points.subarray(2 * hull[k], 2 * hull[k] + 2), 2 * k);
  return corners;
}

/** Strictly, beyond the rounding of 32-bit coordinates: a point on a flat is no corner. */
function turnsLeft(points: Float64Array, a: number, b: number, c: number): boolean {
  const ux = points[2 * b] - points[2 * a];
  const uy = points[2 * b + 1] - points[2 * a + 1];
  const vx = points[2 * c] - points[2 * a];
  const vy = points[2 * c + 1] - points[2 * a + 1];
  return ux * vy - uy * vx > 1e-6 * Math.hypot(ux, uy) * Math.hypot(vx, vy);
}

/** Area within a ring of corners (2 per corner), counter-clockwise. */
export function ringArea(ring: Float64Array): number {
  let twice = 0;
  for (let k = 0; k + 3 < ring.length; k += 2) twice += turn(ring, 0, k, k + 2);
  return twice / 2;
}

const turn = (ring: Float64Array, a: number, b: number, c: number): number =>
  (ring[b] - ring[a]) * (ring[c + 1] - ring[a + 1]) - (ring[b + 1] - ring[a + 1]) * (ring[c] - ring[a]);
