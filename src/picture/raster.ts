import type { TriangleSet } from "../geometry/triangle-set.js";
import type { Vector3 } from "../geometry/vector.js";

/** A camera without perspective: what is drawn larger is larger. */
export interface View {
  /** unit vector from the body to the eye, case axes; not along z */
  eye: Vector3;
  right: Vector3;
  up: Vector3;
  /** pixels per metre */
  scale: number;
  /** pixel of the point at the origin of the case axes */
  originX: number;
  originY: number;
  width: number;
  height: number;
}

/** What is seen in every pixel, rows from the top. */
export interface Seen {
  /** number of the nearest triangle + 1; 0 where nothing is seen */
  triangle: Uint32Array;
  /** towards the eye, metres */
  depth: Float32Array;
}

/** A view from the direction of `eye` that holds all of the bodies, `width` pixels wide with a margin of `margin` pixels. */
export function viewOf(sets: Pick<TriangleSet, "positions">[], eye: Vector3, width: number, margin: number): View {
  const size = Math.hypot(...eye);
  const e: Vector3 = [eye[0] / size, eye[1] / size, eye[2] / size];
  const flat = Math.hypot(e[0], e[1]);
  const right: Vector3 = [-e[1] / flat, e[0] / flat, 0];
  const up: Vector3 = [-e[2] * right[1], e[2] * right[0], e[0] * right[1] - e[1] * right[0]];
  let [left, rightmost, low, high] = [Infinity, -Infinity, Infinity, -Infinity];
  for (const { positions } of sets)
    for (let at = 0; at < positions.length; at += 3) {
      const x = positions[at] * right[0] + positions[at + 1] * right[1];
      const y = positions[at] * up[0] + positions[at + 1] * up[1] + positions[at + 2] * up[2];
      if (x < left) left = x;
      if (x > rightmost) rightmost = x;
      if (y < low) low = y;
      if (y > high) high = y;
    }
  if (!(rightmost > left && high > low)) [left, rightmost, low, high] = [-1, 1, -1, 1];
  // A tall body must not make a tall picture.
  const scale = Math.min((width - 2 * margin) / (rightmost - left), (0.75 * width - 2 * margin) / (high - low));
  const height = Math.ceil(scale * (high - low) + 2 * margin);
  return {
    eye: e,
    right,
    up,
    scale,
    originX: width / 2 - (scale * (left + rightmost)) / 2,
    originY: height / 2 + (scale * (low + high)) / 2,
    width,
    height,
  };
}

/** Depths closer than this share of the picture's width on the body, and than the rounding of a float32, are one surface. */
const oneSurface = 2e-6;

/**
 * The nearest triangle and its depth in every pixel's centre. Both sides of a triangle are seen. Where parts lie on each other the first
 * of them is seen throughout; left to rounding, they would change from pixel to pixel.
 */
export function rasterise({ positions, partOf }: Pick<TriangleSet, "positions" | "partOf">, view: View): Seen {
  const { width, height, eye, right, up, scale, originX, originY } = view;
  const triangle = new Uint32Array(width * height);
  const depth = new Float32Array(width * height).fill(-Infinity);
  const tie = (oneSurface * width) / scale;
  const [px, py, pz] = [new Float64Array(3), new Float64Array(3), new Float64Array(3)];
  for (let t = 0; t < partOf.length; t++) {
    const part = partOf[t];
    for (let k = 0, at = 9 * t; k < 3; k++, at += 3) {
      const x = positions[at];
      const y = positions[at + 1];
      const z = positions[at + 2];
      px[k] = originX + scale * (x * right[0] + y * right[1]);
      py[k] = originY - scale * (x * up[0] + y * up[1] + z * up[2]);
      pz[k] = x * eye[0] + y * eye[1] + z * eye[2];
    }
    const area = (px[1] - px[0]) * (py[2] - py[0]) - (px[2] - px[0]) * (py[1] - py[0]);
    if (area === 0 || !Number.isFinite(area)) continue;
    const top = Math.max(0, Math.ceil(Math.min(py[0], py[1], py[2]) - 0.5));
    const bottom = Math.min(height - 1, Math.floor(Math.max(py[0], py[1], py[2]) - 0.5));
    const from = Math.max(0, Math.ceil(Math.min(px[0], px[1], px[2]) - 0.5));
    const to = Math.min(width - 1, Math.floor(Math.max(px[0], px[1], px[2]) - 0.5));
    // Shares of the corners at a pixel's centre, and their change from one pixel to the next.
    const stepA = (py[1] - py[2]) / area;
    const stepB = (py[2] - py[0]) / area;
    for (let row = top; row <= bottom; row++) {
      const [x, y] = [from + 0.5, row + 0.5];
      let a = ((px[1] - x) * (py[2] - y) - (px[2] - x) * (py[1] - y)) / area;
      let b = ((px[2] - x) * (py[0] - y) - (px[0] - x) * (py[2] - y)) / area;
      for (let pixel = row * width + from; pixel <= row * width + to; pixel++, a += stepA, b += stepB) {
        const c = 1 - a - b;
        if (a < 0 || b < 0 || c < 0) continue;
        const near = a * pz[0] + b * pz[1] + c * pz[2];
        const known = triangle[pixel];
        if (known !== 0) {
          const apart = near - depth[pixel];
          const same = Math.abs(apart) <= tie + 2 ** -22 * Math.abs(near);
          const other = partOf[known - 1];
          if (same && part !== other ? part > other : apart <= 0) continue;
        }
        depth[pixel] = near;
        triangle[pixel] = t + 1;
      }
    }
  }
  return { triangle, depth };
}

/** 3 per triangle: unit normal on the side of the eye; 0 for a triangle without area. */
export function normalsTowards(positions: Float32Array, eye: Vector3): Float32Array {
  const normals = new Float32Array(positions.length / 3);
  for (let at = 0, to = 0; at < positions.length; at += 9, to += 3) {
    const [ax, ay, az] = [positions[at], positions[at + 1], positions[at + 2]];
    const [ux, uy, uz] = [positions[at + 3] - ax, positions[at + 4] - ay, positions[at + 5] - az];
    const [vx, vy, vz] = [positions[at + 6] - ax, positions[at + 7] - ay, positions[at + 8] - az];
    const [nx, ny, nz] = [uy * vz - uz * vy, uz * vx - ux * vz, ux * vy - uy * vx];
    const size = Math.hypot(nx, ny, nz);
    if (size === 0) continue;
    const factor = (nx * eye[0] + ny * eye[1] + nz * eye[2] < 0 ? -1 : 1) / size;
    normals[to] = nx * factor;
    normals[to + 1] = ny * factor;
    normals[to + 2] = nz * factor;
  }
  return normals;
}
