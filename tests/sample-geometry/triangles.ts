import { readFileSync } from "node:fs";
import { fileURLToPath } from "node:url";
import type { Vector3 } from "../../src/geometry/vector.js";

export type Triangle = [Vector3, Vector3, Vector3];

export const folder = fileURLToPath(new URL("../../sample-geometry/geometry/", import.meta.url));

/** A reader of its own, apart from src/: the committed files are checked as they lie there. Corners as float32 numbers. */
export function trianglesOf(file: string): Triangle[] {
  const bytes = readFileSync(folder + file);
  const corners: Vector3[] = [];
  if (bytes.subarray(0, 6).toString() === "solid ") {
    for (const line of bytes.toString().split("\n")) {
      if (line.startsWith("vertex "))
        corners.push(
          line
            .slice(7)
            .split(" ")
            .map((text) => Math.fround(Number(text))) as Vector3,
        );
    }
  } else {
    const count = bytes.readUInt32LE(80);
    for (let k = 0; k < 3 * count; k++) {
      const at = 84 + 50 * Math.floor(k / 3) + 12 + 12 * (k % 3);
      corners.push([bytes.readFloatLE(at), bytes.readFloatLE(at + 4), bytes.readFloatLE(at + 8)]);
    }
  }
  return Array.from({ length: corners.length / 3 }, (_, k) => [corners[3 * k], corners[3 * k + 1], corners[3 * k + 2]]);
}

/** Directed edges without exactly one partner in the opposite direction; 0 for a closed, consistently turned, manifold surface. */
export function unpairedEdges(triangles: Triangle[]): number {
  const numbers = new Map<string, number>();
  const numberOf = (corner: Vector3): number => {
    const key = corner.join();
    const known = numbers.get(key) ?? numbers.size;
    numbers.set(key, known);
    return known;
  };
  const base = 3 * triangles.length;
  const uses = new Map<number, number>();
  for (const triangle of triangles) {
    const [a, b, c] = triangle.map(numberOf);
    for (const edge of [a * base + b, b * base + c, c * base + a]) uses.set(edge, (uses.get(edge) ?? 0) + 1);
  }
  let unpaired = 0;
  for (const [edge, count] of uses) {
    const opposite = (edge % base) * base + Math.floor(edge / base);
    if (count !== 1 || uses.get(opposite) !== 1) unpaired++;
  }
  return unpaired;
}

/** m³ by the divergence theorem; positive when the triangles are turned outward. */
export function volumeOf(triangles: Triangle[]): number {
  return triangles.reduce((sum, [a, b, c]) => sum + dot(a, cross(b, c)) / 6, 0);
}

/** Longest side over the height upon it, divided by the same of an equilateral triangle. */
export function slenderness(triangle: Triangle): number {
  const [a, b, c] = triangle;
  const doubleArea = Math.hypot(...cross(minus(b, a), minus(c, a)));
  const longest = Math.max(Math.hypot(...minus(b, a)), Math.hypot(...minus(c, b)), Math.hypot(...minus(a, c)));
  return ((longest * longest) / doubleArea) * (Math.sqrt(3) / 2);
}

/**
 * How often a closed surface winds about a point (1 inside, 0 outside): the sum of the solid angles of its triangles over 4 pi
 * (van Oosterom and Strackee 1983).
 */
export function windingNumber(point: Vector3, triangles: Float64Array): number {
  let sum = 0;
  for (let at = 0; at < triangles.length; at += 9) {
    const ax = triangles[at] - point[0];
    const ay = triangles[at + 1] - point[1];
    const az = triangles[at + 2] - point[2];
    const bx = triangles[at + 3] - point[0];
    const by = triangles[at + 4] - point[1];
    const bz = triangles[at + 5] - point[2];
    const cx = triangles[at + 6] - point[0];
    const cy = triangles[at + 7] - point[1];
    const cz = triangles[at + 8] - point[2];
    const a = Math.sqrt(ax * ax + ay * ay + az * az);
    const b = Math.sqrt(bx * bx + by * by + bz * bz);
    const c = Math.sqrt(cx * cx + cy * cy + cz * cz);
    const volume = ax * (by * cz - bz * cy) + ay * (bz * cx - bx * cz) + az * (bx * cy - by * cx);
    const spread =
      a * b * c + (ax * bx + ay * by + az * bz) * c + (bx * cx + by * cy + bz * cz) * a + (cx * ax + cy * ay + cz * az) * b;
    sum += 2 * Math.atan2(volume, spread);
  }
  return sum / (4 * Math.PI);
}

/** The triangles as text, each beginning at its first corner in text order, sorted: equal for equal surfaces. */
export function asSet(triangles: Triangle[]): string[] {
  return triangles
    .map((triangle) => {
      const corners = triangle.map((corner) => corner.join());
      const first = corners.indexOf([...corners].sort()[0]);
      return [corners[first], corners[(first + 1) % 3], corners[(first + 2) % 3]].join(" ");
    })
    .sort();
}

export function mirrored(triangles: Triangle[]): Triangle[] {
  const flip = ([x, y, z]: Vector3): Vector3 => [x, y === 0 ? 0 : -y, z];
  return triangles.map(([a, b, c]) => [flip(a), flip(c), flip(b)]);
}

function minus(a: Vector3, b: Vector3): Vector3 {
  return [a[0] - b[0], a[1] - b[1], a[2] - b[2]];
}

function dot(a: Vector3, b: Vector3): number {
  return a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
}

function cross(a: Vector3, b: Vector3): Vector3 {
  return [a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]];
}
