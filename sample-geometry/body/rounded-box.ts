import type { Vector3 } from "../../src/geometry/vector.js";
import { Surface } from "./surface.js";

/** A box with rounded edges, symmetric about y = 0. Metres. */
export interface RoundedBox {
  x: [from: number, to: number];
  /** Greatest |y|. */
  side: number;
  z: [from: number, to: number];
  radius: number;
  /** Widest edge of a triangle on the flat faces. */
  spacing: number;
}

/** Pieces of an eighth turn: an edge is rounded by two facets. */
const turnPieces = 1;

/**
 * The box as a closed surface. `bend` moves each point afterwards (it must leave y = 0 where it is, and treat y and -y alike).
 *
 * Each point of a gridded box is pulled on to the rounded one: the nearest point of the box shrunk by the radius, and from there the
 * radius outwards.
 */
export function roundedBox(box: RoundedBox, bend: (point: Vector3) => Vector3 = (point) => point): Surface {
  const { radius } = box;
  const xs = stations(box.x[0], box.x[1], radius, box.spacing);
  const zs = stations(box.z[0], box.z[1], radius, box.spacing);
  const ys = stations(-box.side, box.side, radius, box.spacing).filter((y) => y > -1e-12);
  if (ys[0] > 1e-12) ys.unshift(0);
  const core = {
    x: [box.x[0] + radius, box.x[1] - radius],
    y: box.side - radius,
    z: [box.z[0] + radius, box.z[1] - radius],
  };
  const place = (x: number, y: number, z: number): Vector3 => {
    const near: Vector3 = [clamp(x, core.x[0], core.x[1]), Math.min(y, core.y), clamp(z, core.z[0], core.z[1])];
    const out: Vector3 = [x - near[0], y - near[1], z - near[2]];
    const scale = radius / Math.max(Math.hypot(...out), 1e-12);
    return bend([near[0] + scale * out[0], Math.abs(y) < 1e-12 ? 0 : near[1] + scale * out[1], near[2] + scale * out[2]]);
  };
  const surface = new Surface();
  const [x0, x1, y1, z0, z1] = [box.x[0], box.x[1], box.side, box.z[0], box.z[1]];
  // Rows and points of a row are chosen such that (row direction) x (point direction) looks inward, as Surface.grid wants it.
  surface.grid(ys.map((y) => xs.map((x) => place(x, y, z1))));
  surface.grid(xs.map((x) => ys.map((y) => place(x, y, z0))));
  surface.grid(zs.map((z) => ys.map((y) => place(x1, y, z))));
  surface.grid(ys.map((y) => zs.map((z) => place(x0, y, z))));
  surface.grid(xs.map((x) => zs.map((z) => place(x, y1, z))));
  surface.addMirrorImage();
  return surface;
}

function stations(from: number, to: number, radius: number, spacing: number): number[] {
  const flat = Math.max(1, Math.ceil((to - from - 2 * radius) / spacing));
  // tan: equal steps of the angle once pulled on to the round edge.
  const edge = Array.from(
    { length: turnPieces },
    (_, k) => radius * (1 - Math.tan(((turnPieces - k) / turnPieces) * (Math.PI / 4))),
  );
  const inner = Array.from({ length: flat + 1 }, (_, k) => from + radius + (k / flat) * (to - from - 2 * radius));
  return [...edge.map((d) => from + d), ...inner, ...edge.reverse().map((d) => to - d)];
}

function clamp(value: number, least: number, greatest: number): number {
  return Math.max(least, Math.min(greatest, value));
}
