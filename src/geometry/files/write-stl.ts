import { inputProblem } from "../../errors.js";
import type { Part, TriangleSet } from "../triangle-set.js";
import { FloatText } from "./float-text.js";

const HEADER_BYTES = 80;
const RECORD_BYTES = 50;
/** Never begins with "solid": readers tell a text file by that word, and the solver refuses a binary file that begins with it. */
const HEADER = "binary triangles, three corners each, counter-clockwise from outside";

const BLANK = 32;
const encode = (text: string): Uint8Array => new TextEncoder().encode(text);
const FACET = encode("facet normal");
const LOOP = encode("\nouter loop");
const VERTEX = encode("\nvertex");
const END = encode("\nendloop\nendfacet\n");

/**
 * One binary STL solid of all triangles, in their order; parts are not kept, because the format has no place for them.
 * Unit and axes are those of `set`. Normals by the right-hand rule (0 0 0 for a triangle without area), attribute 0.
 *
 * @throws Problem(input) `coordinate-not-finite` when a corner is not a finite number.
 */
export function binaryStl(set: TriangleSet): Uint8Array {
  requireFinite(set);
  const { positions } = set;
  const triangles = positions.length / 9;
  const bytes = new Uint8Array(HEADER_BYTES + 4 + RECORD_BYTES * triangles);
  bytes.set(encode(HEADER));
  const view = new DataView(bytes.buffer);
  view.setUint32(HEADER_BYTES, triangles, true);
  const normal = new Float64Array(3);
  let at = HEADER_BYTES + 4;
  for (let triangle = 0; triangle < triangles; triangle++) {
    normalOf(positions, 9 * triangle, normal);
    for (let axis = 0; axis < 3; axis++) view.setFloat32(at + 4 * axis, normal[axis], true);
    for (let k = 0; k < 9; k++) view.setFloat32(at + 12 + 4 * k, positions[9 * triangle + k], true);
    at += RECORD_BYTES;
  }
  return bytes;
}

/**
 * A text STL file with one `solid` block per part, in the order of `set.parts`; a part without triangles gives an empty block.
 * Coordinates carry the fewest digits that give the same float32 back (see `shortestFloat32`); normals carry six decimals, since
 * every reader computes them anew. Unit and axes are those of `set`.
 *
 * `nameOf` chooses the name of a block, the part's `patch` by default. Control characters in it (a line break would forge a
 * block) become blanks.
 *
 * @throws Problem(input) `coordinate-not-finite` when a corner is not a finite number.
 */
export function asciiStl(set: TriangleSet, nameOf: (part: Part) => string = (part) => part.patch): Uint8Array {
  requireFinite(set);
  const { positions } = set;
  const bits = new Int32Array(positions.buffer, positions.byteOffset, positions.length);
  const { order, start } = trianglesByPart(set);
  const normal = new Float64Array(3);
  const out = new FloatText();
  set.parts.forEach((part, index) => {
    const name = oneLine(nameOf(part));
    out.text(`solid ${name}\n`);
    for (let k = start[index]; k < start[index + 1]; k++) {
      const at = 9 * order[k];
      normalOf(positions, at, normal);
      out.bytes(FACET);
      for (let axis = 0; axis < 3; axis++) {
        out.byte(BLANK);
        out.sixDecimals(normal[axis]);
      }
      out.bytes(LOOP);
      for (let j = at; j < at + 9; j += 3) {
        out.bytes(VERTEX);
        for (let axis = j; axis < j + 3; axis++) {
          out.byte(BLANK);
          out.float32(positions[axis], bits[axis]);
        }
      }
      out.bytes(END);
    }
    out.text(`endsolid ${name}\n`);
  });
  return out.finish();
}

// biome-ignore lint/suspicious/noControlCharactersInRegex: control characters are what is looked for
const oneLine = (name: string): string => name.replace(/[\u0000-\u001f\u007f-\u009f\u2028\u2029]+/g, " ").trim();

/** Unit normal of the triangle whose nine coordinates begin at `at`; zeros without area. */
function normalOf(positions: Float32Array, at: number, normal: Float64Array): void {
  const ax = positions[at];
  const ay = positions[at + 1];
  const az = positions[at + 2];
  const ux = positions[at + 3] - ax;
  const uy = positions[at + 4] - ay;
  const uz = positions[at + 5] - az;
  const vx = positions[at + 6] - ax;
  const vy = positions[at + 7] - ay;
  const vz = positions[at + 8] - az;
  const nx = uy * vz - uz * vy;
  const ny = uz * vx - ux * vz;
  const nz = ux * vy - uy * vx;
  const length = Math.sqrt(nx * nx + ny * ny + nz * nz);
  const scale = length > 0 ? 1 / length : 0;
  normal[0] = nx * scale;
  normal[1] = ny * scale;
  normal[2] = nz * scale;
}

/** Triangle numbers sorted by part (in file order within a part), and where each part starts; `start` has one more entry than parts. */
function trianglesByPart(set: TriangleSet): { order: Uint32Array; start: Uint32Array } {
  const start = new Uint32Array(set.parts.length + 1);
  for (const part of set.partOf) start[part + 1]++;
  for (let part = 0; part < set.parts.length; part++) start[part + 1] += start[part];
  const next = start.slice();
  const order = new Uint32Array(set.partOf.length);
  set.partOf.forEach((part, triangle) => {
    order[next[part]++] = triangle;
  });
  return { order, start };
}

function requireFinite(set: TriangleSet): void {
  const { positions } = set;
  let bad = 0;
  // Infinity - Infinity and NaN - NaN are NaN, any finite difference with itself is 0.
  while (bad < positions.length && positions[bad] - positions[bad] === 0) bad++;
  if (bad === positions.length) return;
  const triangle = Math.floor(bad / 9);
  const part = set.parts[set.partOf[triangle]];
  throw inputProblem({
    code: "coordinate-not-finite",
    message: `Triangle ${triangle + 1} has a corner at ${positions[bad]}; every coordinate must be a finite number.`,
    where: part ? `part ${part.name}` : undefined,
    remedy: "Export the surface again; such corners usually come from a failed scaling or an empty facet.",
  });
}
