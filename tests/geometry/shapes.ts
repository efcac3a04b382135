import type { TriangleSet } from "../../src/geometry/triangle-set.js";
import type { Vector3 } from "../../src/geometry/vector.js";

/** Corners of triangles, 9 numbers each, in doubles: rounded only when a set is made of them. */
export type Triangles = number[];

/** A body of named parts. */
export function bodyOf(parts: Record<string, Triangles>): TriangleSet {
  const names = Object.keys(parts);
  return {
    positions: Float32Array.from(names.flatMap((name) => parts[name])),
    partOf: Uint16Array.from(names.flatMap((name, k) => new Array(parts[name].length / 9).fill(k))),
    parts: names.map((name) => ({ name, patch: name, file: 0 })),
    files: [{ path: "body.stl", format: "stl-ascii", triangles: names.reduce((sum, name) => sum + parts[name].length / 9, 0) }],
    findings: [],
  };
}

export const joined = (...shapes: Triangles[]): Triangles => shapes.flat();

/** Every corner moved by `map`; a map that mirrors must be followed by `turnedOver`. */
export function moved(shape: Triangles, map: (point: Vector3) => Vector3): Triangles {
  const result: Triangles = [];
  for (let at = 0; at < shape.length; at += 3) result.push(...map([shape[at], shape[at + 1], shape[at + 2]]));
  return result;
}

export const shifted = (shape: Triangles, [x, y, z]: Vector3): Triangles => moved(shape, (p) => [p[0] + x, p[1] + y, p[2] + z]);

export function turnedOver(shape: Triangles): Triangles {
  const result: Triangles = [];
  for (let at = 0; at < shape.length; at += 9)
    result.push(...shape.slice(at, at + 3), ...shape.slice(at + 6, at + 9), ...shape.slice(at + 3, at + 6));
  return result;
}

/** Rotation by `angle` (radians) about a unit axis (Rodrigues). */
export function turned(shape: Triangles, [kx, ky, kz]: Vector3, angle: number): Triangles {
  const c = Math.cos(angle);
  const s = Math.sin(angle);
  return moved(shape, ([x, y, z]) => {
    const dot = (kx * x + ky * y + kz * z) * (1 - c);
    return [
      x * c + (ky * z - kz * y) * s + kx * dot,
      y * c + (kz * x - kx * z) * s + ky * dot,
      z * c + (kx * y - ky * x) * s + kz * dot,
    ];
  });
}

/** From a grid of points: (rows + 1) × columns, closed around the columns; degenerate triangles at poles are left out. */
function tube(rows: number, columns: number, point: (row: number, column: number) => Vector3): Triangles {
  const result: Triangles = [];
  const same = (a: Vector3, b: Vector3): boolean => a.every((value, k) => value === b[k]);
  const add = (a: Vector3, b: Vector3, c: Vector3): void => {
    if (!same(a, b) && !same(b, c) && !same(c, a)) result.push(...a, ...b, ...c);
  };
  for (let row = 0; row < rows; row++)
    for (let column = 0; column < columns; column++) {
      const next = (column + 1) % columns;
      const a = point(row, column);
      const b = point(row, next);
      const c = point(row + 1, next);
      const d = point(row + 1, column);
      add(a, b, c);
      add(a, c, d);
    }
  return result;
}

/** A surface of revolution about z through (radius, z) pairs from bottom to top; radius 0 at both ends closes it. */
export function revolved(profile: [number, number][], columns: number): Triangles {
  return tube(profile.length - 1, columns, (row, column) => {
    const angle = (2 * Math.PI * column) / columns;
    const [r, z] = profile[row];
    return r === 0 ? [0, 0, z] : [r * Math.cos(angle), r * Math.sin(angle), z];
  });
}

export function sphere(radius: number, rows: number, centre: Vector3 = [0, 0, 0]): Triangles {
  const profile = Array.from({ length: rows + 1 }, (_, k): [number, number] => {
    const angle = (Math.PI * k) / rows;
    return [k === 0 || k === rows ? 0 : radius * Math.sin(angle), -radius * Math.cos(angle)];
  });
  return shifted(revolved(profile, 2 * rows), centre);
}

export const ellipsoid = (a: number, b: number, c: number, rows: number): Triangles =>
  moved(sphere(1, rows), ([x, y, z]) => [a * x, b * y, c * z]);

/** About z; cylinder of `length` between two half spheres. */
export function capsule(radius: number, length: number, rows: number): Triangles {
  const profile: [number, number][] = [];
  for (let k = 0; k <= rows; k++) {
    const angle = ((Math.PI / 2) * k) / rows;
    profile.push([k === 0 ? 0 : radius * Math.sin(angle), -length / 2 - radius * Math.cos(angle)]);
  }
  for (let k = rows; k >= 0; k--) {
    const angle = ((Math.PI / 2) * k) / rows;
    profile.push([k === 0 ? 0 : radius * Math.sin(angle), length / 2 + radius * Math.cos(angle)]);
  }
  return revolved(profile, 4 * rows);
}

/** About z, base at 0. */
export const cone = (radius: number, height: number, columns: number): Triangles =>
  revolved(
    [
      [0, 0],
      [radius, 0],
      [0, height],
    ],
    columns,
  );

export const cylinder = (radius: number, length: number, columns: number): Triangles =>
  revolved(
    [
      [0, -length / 2],
      [radius, -length / 2],
      [radius, length / 2],
      [0, length / 2],
    ],
    columns,
  );

/** About z. */
export function torus(major: number, minor: number, rows: number): Triangles {
  const point = (row: number, column: number): Vector3 => {
    const a = (2 * Math.PI * (row % rows)) / rows;
    const b = (2 * Math.PI * column) / (2 * rows);
    const r = major + minor * Math.cos(a);
    return [r * Math.cos(b), r * Math.sin(b), minor * Math.sin(a)];
  };
  return tube(rows, 2 * rows, point);
}

/** Twelve triangles, outward. */
export function box(min: Vector3, max: Vector3): Triangles {
  const corner = (k: number): Vector3 => [k & 1 ? max[0] : min[0], k & 2 ? max[1] : min[1], k & 4 ? max[2] : min[2]];
  const quads = [
    [0, 4, 6, 2],
    [1, 3, 7, 5],
    [0, 1, 5, 4],
    [2, 6, 7, 3],
    [0, 2, 3, 1],
    [4, 5, 7, 6],
  ];
  return quads.flatMap(([a, b, c, d]) => [a, b, c, a, c, d].flatMap(corner));
}

/** Mulberry32: the same numbers in [0, 1) every time for the same seed. */
export function random(seed: number): () => number {
  let state = seed >>> 0;
  return () => {
    state = (state + 0x6d2b79f5) >>> 0;
    let t = state;
    t = Math.imul(t ^ (t >>> 15), t | 1);
    t ^= t + Math.imul(t ^ (t >>> 7), t | 61);
    return ((t ^ (t >>> 14)) >>> 0) / 2 ** 32;
  };
}

/** Triangles in another order, and each begun at another corner. */
export function shuffled(shape: Triangles, seed: number): Triangles {
  const next = random(seed);
  const order = Array.from({ length: shape.length / 9 }, (_, k) => k);
  for (let k = order.length - 1; k > 0; k--) {
    const other = Math.floor(next() * (k + 1));
    [order[k], order[other]] = [order[other], order[k]];
  }
  return order.flatMap((t) => {
    const first = Math.floor(next() * 3);
    return [0, 1, 2].flatMap((k) => shape.slice(9 * t + 3 * ((first + k) % 3), 9 * t + 3 * ((first + k) % 3) + 3));
  });
}

/** Directions spread evenly over the sphere (Fibonacci spiral). */
export const directions = (count: number): Vector3[] =>
  Array.from({ length: count }, (_, k) => {
    const z = 1 - (2 * k + 1) / count;
    const angle = k * Math.PI * (3 - Math.sqrt(5));
    const r = Math.sqrt(1 - z * z);
    return [r * Math.cos(angle), r * Math.sin(angle), z];
  });
