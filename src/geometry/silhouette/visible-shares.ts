import type { SurfaceMesh } from "../surface-mesh.js";
import { across, normalised, type Vector3 } from "../vector.js";

/** Pixels along the longer side of the picture: about two millimetres on a road vehicle. */
const PIXELS = 1024;
/** Lets a pixel on the edge between two triangles belong to both, whatever rounding says: no seams. */
const SEAM = -1e-9;
const NOBODY = 0xffff;

/**
 * Which share of the silhouette each part owns when the body is seen along `direction` and the nearest part hides the others; the
 * shares add up to 1 (to 0 where nothing has area). Depth buffer of 1024 pixels along the longer side, sampled at the middle of each
 * pixel: a part that is nowhere as wide as a pixel may be missed. Where two parts are equally near, the lower number owns the pixel,
 * so that the order of the triangles does not matter.
 */
export function visibleShares(
  mesh: Pick<SurfaceMesh, "vertices" | "corners" | "partOf">,
  parts: number,
  direction: Vector3,
): Float64Array {
  const { vertices, corners, partOf } = mesh;
  const shares = new Float64Array(parts);
  const points = projected(vertices, direction);
  const range = ranges(points, corners);
  const longer = Math.max(range.width, range.height);
  if (!(longer > 0)) return shares;
  const scale = PIXELS / longer;
  const columns = Math.max(1, Math.ceil(range.width * scale));
  const rows = Math.max(1, Math.ceil(range.height * scale));
  const depth = new Float32Array(columns * rows).fill(Infinity);
  const owner = new Uint16Array(columns * rows).fill(NOBODY);
  for (let t = 0, h = 0; t < partOf.length; t++, h += 3) {
    const a = 3 * corners[h];
    const b = 3 * corners[h + 1];
    const c = 3 * corners[h + 2];
    const ax = (points[a] - range.left) * scale;
    const bx = (points[b] - range.left) * scale;
    const cx = (points[c] - range.left) * scale;
    // Middles of pixels lie at whole numbers and a half.
    const left = Math.max(0, Math.ceil(Math.min(ax, bx, cx) - 0.5));
    const right = Math.min(columns - 1, Math.floor(Math.max(ax, bx, cx) - 0.5));
    if (left > right) continue;
    const ay = (points[a + 1] - range.bottom) * scale;
    const by = (points[b + 1] - range.bottom) * scale;
    const cy = (points[c + 1] - range.bottom) * scale;
    const bottom = Math.max(0, Math.ceil(Math.min(ay, by, cy) - 0.5));
    const top = Math.min(rows - 1, Math.floor(Math.max(ay, by, cy) - 0.5));
    if (bottom > top) continue;
    const twice = (bx - ax) * (cy - ay) - (by - ay) * (cx - ax);
    if (twice === 0) continue;
    const az = points[a + 2];
    const bx1 = (cy - ay) / twice;
    const by1 = (ax - cx) / twice;
    const cx1 = (ay - by) / twice;
    const cy1 = (bx - ax) / twice;
    const zx = bx1 * (points[b + 2] - az) + cx1 * (points[c + 2] - az);
    const zy = by1 * (points[b + 2] - az) + cy1 * (points[c + 2] - az);
    const part = partOf[t];
    for (let row = bottom; row <= top; row++) {
      const y = row + 0.5 - ay;
      for (let column = left; column <= right; column++) {
        const x = column + 0.5 - ax;
        // Barycentric weights of the second and third corner.
        const wb = x * bx1 + y * by1;
        const wc = x * cx1 + y * cy1;
        if (wb < SEAM || wc < SEAM || wb + wc > 1 - SEAM) continue;
        const z = Math.fround(az + x * zx + y * zy);
        const at = row * columns + column;
        if (z < depth[at] || (z === depth[at] && part < owner[at])) {
          depth[at] = z;
          owner[at] = part;
        }
      }
    }
  }
  let seen = 0;
  for (let at = 0; at < owner.length; at++) {
    if (owner[at] === NOBODY) continue;
    seen++;
    shares[owner[at]]++;
  }
  if (seen > 0) for (let part = 0; part < parts; part++) shares[part] /= seen;
  return shares;
}

/** 3 per vertex: across, upwards and along the direction of view. */
function projected(vertices: Float32Array, direction: Vector3): Float32Array {
  const w = normalised(direction);
  const { u, v } = across(w);
  const points = new Float32Array(vertices.length);
  for (let at = 0; at < vertices.length; at += 3) {
    const x = vertices[at];
    const y = vertices[at + 1];
    const z = vertices[at + 2];
    points[at] = u[0] * x + u[1] * y + u[2] * z;
    points[at + 1] = v[0] * x + v[1] * y + v[2] * z;
    points[at + 2] = w[0] * x + w[1] * y + w[2] * z;
  }
  return points;
}

function ranges(points: Float32Array, corners: Uint32Array): { left: number; bottom: number; width: number; height: number } {
  let left = Infinity;
  let right = -Infinity;
  let bottom = Infinity;
  let top = -Infinity;
  for (let h = 0; h < corners.length; h++) {
    const x = points[3 * corners[h]];
    const y = points[3 * corners[h] + 1];
    if (x < left) left = x;
    if (x > right) right = x;
    if (y < bottom) bottom = y;
    if (y > top) top = y;
  }
  return { left, bottom, width: right - left, height: top - bottom };
}
