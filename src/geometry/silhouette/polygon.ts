/**
 * Cuts a polygon in space into triangles: three indices of its corners per triangle, same sense of rotation. `corners`: 3 per
 * corner. Convex polygons are cut into a fan; others by ears (Meisters, 1975) in the plane of the area vector, so that a
 * re-entrant quad is cut on the diagonal that lies inside. What has no ear (a polygon that crosses itself) ends as a fan.
 */
export function cutPolygon(corners: Float64Array, count: number): number[] {
  const flat = flattened(corners, count);
  const ring = Array.from({ length: count }, (_, k) => k);
  const cut: number[] = [];
  if (isConvex(flat, count)) return fan(ring, cut);
  while (ring.length > 3) {
    const ear = ring.findIndex((_, k) => isEar(flat, ring, k));
    if (ear < 0) break;
    cut.push(ring[(ear + ring.length - 1) % ring.length], ring[ear], ring[(ear + 1) % ring.length]);
    ring.splice(ear, 1);
  }
  return fan(ring, cut);
}

function fan(ring: number[], into: number[]): number[] {
  for (let k = 1; k + 1 < ring.length; k++) into.push(ring[0], ring[k], ring[k + 1]);
  return into;
}

/** 2 per corner: the polygon seen along its area vector's greatest component, counter-clockwise. */
function flattened(corners: Float64Array, count: number): Float64Array {
  const area = [0, 0, 0];
  for (let k = 0; k < count; k++) {
    const a = 3 * k;
    const b = 3 * ((k + 1) % count);
    for (let axis = 0; axis < 3; axis++) {
      const u = (axis + 1) % 3;
      const v = (axis + 2) % 3;
      area[axis] +=
        (corners[a + u] - corners[u]) * (corners[b + v] - corners[v]) -
        (corners[a + v] - corners[v]) * (corners[b + u] - corners[u]);
    }
  }
  const size = area.map(Math.abs);
  const axis = size[0] >= size[1] && size[0] >= size[2] ? 0 : size[1] >= size[2] ? 1 : 2;
  const turned = area[axis] < 0;
  const u = (axis + (turned ? 2 : 1)) % 3;
  const v = (axis + (turned ? 1 : 2)) % 3;
  const flat = new Float64Array(2 * count);
  for (let k = 0; k < count; k++) {
    flat[2 * k] = corners[3 * k + u];
    flat[2 * k + 1] = corners[3 * k + v];
  }
  return flat;
}

/** Twice the signed area of the triangle of three corners. */
function turn(flat: Float64Array, a: number, b: number, c: number): number {
  const ux = flat[2 * b] - flat[2 * a];
  const uy = flat[2 * b + 1] - flat[2 * a + 1];
  const vx = flat[2 * c] - flat[2 * a];
  const vy = flat[2 * c + 1] - flat[2 * a + 1];
  return ux * vy - uy * vx;
}

function isConvex(flat: Float64Array, count: number): boolean {
  // All turns to the left, and only once round: every triangle of the fan is then turned to the left as well.
  for (let k = 0; k < count; k++) if (turn(flat, k, (k + 1) % count, (k + 2) % count) < 0) return false;
  for (let k = 1; k + 1 < count; k++) if (turn(flat, 0, k, k + 1) < 0) return false;
  return true;
}

function isEar(flat: Float64Array, ring: number[], k: number): boolean {
  const a = ring[(k + ring.length - 1) % ring.length];
  const b = ring[k];
  const c = ring[(k + 1) % ring.length];
  if (turn(flat, a, b, c) <= 0) return false;
  return ring.every(
    (p) => p === a || p === b || p === c || turn(flat, a, b, p) < 0 || turn(flat, b, c, p) < 0 || turn(flat, c, a, p) < 0,
  );
}
