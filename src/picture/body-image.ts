import { metresPer, vehicleAxes } from "../geometry/place.js";
import type { Survey } from "../geometry/survey.js";
import type { TriangleSet } from "../geometry/triangle-set.js";
import { dot, type Vector3 } from "../geometry/vector.js";
import type { Canvas } from "./canvas.js";
import { outlines } from "./outlines.js";
import { rasterise, type Seen, type View } from "./raster.js";
import { channels, inkTone, toneOf } from "./tones.js";

/** From where a body is looked at: front, looking rearward; side, from the vehicle's left; plan, from above. */
export type SeenFrom = "front" | "side" | "plan";

/** Drawn this many times as large along each side, then averaged. */
export const fine = 2;

/** Directions of the picture in file axes: towards the eye, to the right, up. */
export function directionsOf({ axes }: Pick<Survey, "axes">, seen: SeenFrom): Pick<View, "eye" | "right" | "up"> {
  const { rearward, right, up } = vehicleAxes(axes);
  const back = (v: Vector3) => v.map((value) => 0 - value) as Vector3;
  if (seen === "front") return { eye: back(rearward), right: back(right), up };
  if (seen === "side") return { eye: back(right), right: rearward, up };
  return { eye: up, right: rearward, up: right };
}

/** A view, unit and axes of the files, of the whole body in a box of pixels (already `fine` times as many as in the picture). */
export function viewIn(survey: Survey, seen: SeenFrom, width: number, most: number, margins: { side: number; ends: number }): View {
  const directions = directionsOf(survey, seen);
  const metre = 1 / metresPer[survey.unit.value];
  const { min, max } = survey.bounds;
  const range = (direction: Vector3): [number, number] => {
    const ends = [dot(min, direction) * metre, dot(max, direction) * metre];
    return [Math.min(...ends), Math.max(...ends)];
  };
  let [left, right] = range(directions.right);
  let [low, high] = range(directions.up);
  if (!(right > left && high > low)) [left, right, low, high] = [-1, 1, -1, 1];
  const scale = Math.min((width - 2 * margins.side) / (right - left), (most - 2 * margins.ends) / (high - low));
  const height = fine * Math.ceil((scale * (high - low) + 2 * margins.ends) / fine);
  return {
    ...directions,
    scale,
    originX: width / 2 - (scale * (left + right)) / 2,
    originY: height / 2 + (scale * (low + high)) / 2,
    width,
    height,
  };
}

/** Draws the body into the upper left of a canvas: parts in their tones, shaded by their slope, edges and outline in ink. */
export function drawBody(canvas: Canvas, set: TriangleSet, view: View): Seen {
  const seen = rasterise(set, view);
  const normals = seenNormals(set.positions, seen.triangle, view.eye);
  const light = lightOf(normals, seen.triangle, view);
  const ink = outlines(seen, view, set.partOf, normals);
  const tones = set.parts.map((_, part) => channels(toneOf(part)));
  const dark = channels(inkTone);
  const sum = [0, 0, 0];
  for (let y = 0; y < view.height / fine; y++)
    for (let x = 0; x < view.width / fine; x++) {
      sum.fill(0);
      let covered = 0;
      for (let row = fine * y; row < fine * (y + 1); row++)
        for (let at = row * view.width + fine * x, k = 0; k < fine; k++, at++) {
          const t = seen.triangle[at] - 1;
          if (t < 0) continue;
          covered++;
          const tone = tones[set.partOf[t]];
          const lit = light[t];
          const line = ink[at] === 1 ? 0.72 : 0;
          for (let c = 0; c < 3; c++) {
            // Above 1 the tone goes towards white, below it towards ink.
            const value = lit > 1 ? tone[c] + (lit - 1) * (255 - tone[c]) : dark[c] + lit * (tone[c] - dark[c]);
            sum[c] += value + line * (dark[c] - value);
          }
        }
      if (covered === 0) continue;
      const share = covered / (fine * fine);
      const to = 3 * (y * canvas.width + x);
      for (let c = 0; c < 3; c++) canvas.rgb[to + c] = Math.round((sum[c] / covered) * share + canvas.rgb[to + c] * (1 - share));
    }
  return seen;
}

/** 1 per triangle, of those that are seen: about 0.5 dark to 1.1 light; a main light from above the eye's left, a weak one from the eye. */
function lightOf(normals: Float32Array, triangle: Uint32Array, { eye, right, up }: View): Float32Array {
  const light = new Float32Array(normals.length / 3);
  for (const number of triangle) {
    if (number === 0 || light[number - 1] !== 0) continue;
    const at = 3 * (number - 1);
    const [x, y, z] = [normals[at], normals[at + 1], normals[at + 2]];
    const towards = x * eye[0] + y * eye[1] + z * eye[2];
    const rightwards = x * right[0] + y * right[1] + z * right[2];
    const upwards = x * up[0] + y * up[1] + z * up[2];
    light[number - 1] = 0.5 + 0.3 * towards + 0.42 * Math.max(0, 0.55 * towards - 0.3 * rightwards + 0.75 * upwards);
  }
  return light;
}

/** 3 per triangle: unit normal on the side of the eye, of the triangles that are seen only. */
function seenNormals(positions: Float32Array, triangle: Uint32Array, eye: Vector3): Float32Array {
  const normals = new Float32Array(positions.length / 3);
  let last = 0;
  for (const number of triangle) {
    if (number === 0 || number === last) continue;
    last = number;
    const to = 3 * (number - 1);
    if (normals[to] !== 0 || normals[to + 1] !== 0 || normals[to + 2] !== 0) continue;
    const at = 9 * (number - 1);
    const [ax, ay, az] = [positions[at], positions[at + 1], positions[at + 2]];
    const [ux, uy, uz] = [positions[at + 3] - ax, positions[at + 4] - ay, positions[at + 5] - az];
    const [vx, vy, vz] = [positions[at + 6] - ax, positions[at + 7] - ay, positions[at + 8] - az];
    const [nx, ny, nz] = [uy * vz - uz * vy, uz * vx - ux * vz, ux * vy - uy * vx];
    const size = Math.sqrt(nx * nx + ny * ny + nz * nz);
    if (size === 0) continue;
    const factor = (nx * eye[0] + ny * eye[1] + nz * eye[2] < 0 ? -1 : 1) / size;
    normals[to] = nx * factor;
    normals[to + 1] = ny * factor;
    normals[to + 2] = nz * factor;
  }
  return normals;
}
