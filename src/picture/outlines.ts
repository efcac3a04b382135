import type { Seen, View } from "./raster.js";

/** How large a step of depth is an edge, as a share of the picture's width on the body. */
const depthStep = 0.012;
/** Faces whose normals are farther apart than this (cosine) meet at an edge. */
const crease = Math.cos((38 * Math.PI) / 180);

/** 1 where a line is drawn: the border of a part, of the body, of what lies before something else, and sharp edges. */
export function outlines(
  { triangle, depth }: Seen,
  { width, height, scale }: View,
  partOf: Uint16Array,
  normals: Float32Array,
): Uint8Array {
  const ink = new Uint8Array(width * height);
  const step = (depthStep * width) / scale;
  const compare = (at: number, other: number): void => {
    const [one, two] = [triangle[at], triangle[other]];
    if (one === two) return;
    if (one !== 0 && two !== 0 && partOf[one - 1] === partOf[two - 1] && Math.abs(depth[at] - depth[other]) < step) {
      const [n, m] = [3 * (one - 1), 3 * (two - 1)];
      if (normals[n] * normals[m] + normals[n + 1] * normals[m + 1] + normals[n + 2] * normals[m + 2] > crease) return;
    }
    // The line lies on what is nearer.
    ink[depth[at] >= depth[other] ? at : other] = 1;
  };
  for (let row = 0; row < height; row++)
    for (let column = 0; column < width; column++) {
      const at = row * width + column;
      if (column + 1 < width) compare(at, at + 1);
      if (row + 1 < height) compare(at, at + width);
    }
  return ink;
}
