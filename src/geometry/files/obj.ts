import { cutPolygon } from "../silhouette/polygon.js";
import { DecimalScanner } from "./decimal.js";
import { partName } from "./part-names.js";
import { shown, TextFault, wordEnd } from "./text.js";
import type { TriangleBuilder } from "./triangle-builder.js";

const REMEDY = "Export the surface again, or repair the file at this line.";
/** A face of more corners is cut by a method whose time grows with the square of their number. */
const MOST_CORNERS = 2000;

const LOWER_V = 118;
const LOWER_F = 102;
const LOWER_G = 103;
const LOWER_O = 111;

/**
 * Reads the part of OBJ that describes flat faces: `v`, `f`, `g`, `o`. The latest `g` or `o` names the part; faces before any
 * belong to the part named by the file; a name that comes back continues its part. Faces of more than three corners are cut into
 * triangles. Everything else (normals, textures, materials, curves) is skipped.
 */
export class ObjReader {
  private vertices = new Float32Array(3 * 4096);
  private count = 0;
  private part = -1;
  private name: string;
  private before = 0;
  /** Vertex numbers of the face that is being read. */
  private readonly face = new Uint32Array(MOST_CORNERS);
  private readonly corners = new Float64Array(3 * MOST_CORNERS);
  private readonly number = new DecimalScanner();

  constructor(
    private readonly into: TriangleBuilder,
    private readonly file: number,
    stem: string,
  ) {
    this.name = stem;
  }

  /** Reads the complete lines in `bytes[0, length)`; returns how many bytes that is. At the `last`, `bytes[length]` is white space. */
  read(bytes: Uint8Array, length: number, last: boolean): number {
    const limit = last ? length : completeLines(bytes, length);
    let at = 0;
    while (at < limit) {
      while (at < limit && bytes[at] <= 32) at++;
      if (at >= limit) break;
      const end = lineEnd(bytes, at, limit);
      this.line(bytes, at, end);
      at = end;
    }
    this.before += limit;
    return limit;
  }

  finish(): void {
    if (this.part < 0) this.into.part(this.name, this.file);
  }

  private line(bytes: Uint8Array, at: number, end: number): void {
    const wide = at + 1 < end && bytes[at + 1] > 32;
    if (wide) return;
    switch (bytes[at]) {
      case LOWER_V:
        this.vertex(bytes, at + 1, end);
        break;
      case LOWER_F:
        this.polygon(bytes, at + 1, end);
        break;
      case LOWER_G:
      case LOWER_O: {
        const name = partName(bytes.subarray(at + 1, end));
        if (name !== "" && name !== this.name) {
          this.name = name;
          this.part = -1;
        }
        break;
      }
    }
  }

  private vertex(bytes: Uint8Array, from: number, end: number): void {
    if (3 * this.count === this.vertices.length) {
      const larger = new Float32Array(2 * this.vertices.length);
      larger.set(this.vertices);
      this.vertices = larger;
    }
    let at = from;
    for (let k = 0; k < 3; k++) {
      at = nextWord(bytes, at, end);
      const value = at < end ? this.number.scan(bytes, at) : Number.NaN;
      if (value - value !== 0) {
        const text = shown(bytes, at, end);
        throw /^[+-]?(nan|inf)/i.test(text) || (text !== "" && !Number.isNaN(Number(text)))
          ? this.fault("coordinate-not-finite", `The coordinate "${text}" is not a finite 32-bit number.`, at)
          : this.fault("obj-number", `Expected a coordinate, found "${text}".`, at);
      }
      this.vertices[3 * this.count + k] = value;
      at = this.number.end;
    }
    this.count++;
  }

  private polygon(bytes: Uint8Array, from: number, end: number): void {
    const { face, into } = this;
    let corners = 0;
    let at = nextWord(bytes, from, end);
    while (at < end) {
      if (corners === MOST_CORNERS) throw this.fault("obj-face", `A face has more than ${MOST_CORNERS} corners.`, at);
      face[corners++] = this.vertexNumber(bytes, at, end);
      at = nextWord(bytes, wordEnd(bytes, at, end), end);
    }
    if (corners < 3) throw this.fault("obj-face", `A face has ${corners} corners; it needs three at least.`, from - 1);
    if (this.part < 0) this.part = into.part(this.name, this.file);
    if (into.triangles + corners > into.partOf.length) into.reserve(corners + 1024);
    if (corners === 3) {
      this.keep(face[0], face[1], face[2]);
      return;
    }
    for (let k = 0; k < corners; k++)
      for (let axis = 0; axis < 3; axis++) this.corners[3 * k + axis] = this.vertices[3 * face[k] + axis];
    const cut = cutPolygon(this.corners, corners);
    for (let k = 0; k < cut.length; k += 3) this.keep(face[cut[k]], face[cut[k + 1]], face[cut[k + 2]]);
  }

  private keep(a: number, b: number, c: number): void {
    const { into, vertices } = this;
    let to = 9 * into.triangles;
    for (const vertex of [a, b, c]) for (let axis = 0; axis < 3; axis++) into.positions[to++] = vertices[3 * vertex + axis];
    into.partOf[into.triangles++] = this.part;
  }

  /** Index of the vertex that a face names: from 1 on, or backwards from -1; what follows a slash is no matter. */
  private vertexNumber(bytes: Uint8Array, from: number, end: number): number {
    let at = from;
    const backwards = bytes[at] === 45;
    if (backwards) at++;
    let value = 0;
    const first = at;
    while (at < end && bytes[at] >= 48 && bytes[at] <= 57 && value < 1e10) value = value * 10 + (bytes[at++] - 48);
    if (at === first || (at < end && bytes[at] > 32 && bytes[at] !== 47))
      throw this.fault("obj-face", `Expected the number of a vertex, found "${shown(bytes, from, end)}".`, from);
    if (value === 0 || value > this.count)
      throw this.fault(
        "obj-face",
        `A face names vertex ${shown(bytes, from, end)}; ${this.count} vertices are known so far.`,
        from,
      );
    return backwards ? this.count - value : value - 1;
  }

  private fault(code: string, message: string, at: number): TextFault {
    return new TextFault(code, message, REMEDY, this.before + at);
  }
}

const isLineEnd = (byte: number): boolean => byte === 10 || byte === 13;

/** Whether the line end at `at` is taken back by a backslash before it. */
function isContinued(bytes: Uint8Array, at: number): boolean {
  const before = at > 0 && bytes[at] === 10 && bytes[at - 1] === 13 ? at - 2 : at - 1;
  return before >= 0 && bytes[before] === 92;
}

function completeLines(bytes: Uint8Array, length: number): number {
  for (let at = length - 1; at >= 0; at--) if (bytes[at] === 10 && !isContinued(bytes, at)) return at + 1;
  // Old files end their lines with a carriage return alone.
  for (let at = length - 2; at >= 0; at--) if (bytes[at] === 13 && !isContinued(bytes, at)) return at + 1;
  return 0;
}

function lineEnd(bytes: Uint8Array, from: number, limit: number): number {
  let at = from;
  while (at < limit) {
    if (isLineEnd(bytes[at])) {
      if (!isContinued(bytes, at)) return at;
      if (bytes[at] === 13 && at + 1 < limit && bytes[at + 1] === 10) at++;
    }
    at++;
  }
  return at;
}

/** Start of the next word of a line; the backslash of a continued line is a blank, and a comment ends the line. */
function nextWord(bytes: Uint8Array, from: number, end: number): number {
  let at = from;
  while (at < end && (bytes[at] <= 32 || (bytes[at] === 92 && at + 1 < end && isLineEnd(bytes[at + 1])))) at++;
  return at < end && bytes[at] === 35 ? end : at;
}
