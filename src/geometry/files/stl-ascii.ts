import { finding } from "../../finding.js";
import { DecimalScanner } from "./decimal.js";
import { partName } from "./part-names.js";
import { shown, TextFault, wordEnd } from "./text.js";
import type { TriangleBuilder } from "./triangle-builder.js";

/** Four letters in one number, lower case; the words of the format are told apart by these. */
const packed = (letters: string): number => four(Buffer.from(letters, "latin1"), 0);
const four = (bytes: Uint8Array, at: number): number =>
  bytes[at] | (bytes[at + 1] << 8) | (bytes[at + 2] << 16) | (bytes[at + 3] << 24) | 0x20202020;
const [SOLI, OLID, ENDS, FACE, ACET, ENDF, OUTE, UTER, LOOP, ENDL, VERT, RTEX, NORM, RMAL] =
  "soli olid ends face acet endf oute uter loop endl vert rtex norm rmal".split(" ").map(packed);
// Each says whether the word at `at` is the one named. White space follows every word, so none reads past the piece by more than that.
const isSolid = (bytes: Uint8Array, at: number): boolean =>
  four(bytes, at) === SOLI && four(bytes, at + 1) === OLID && bytes[at + 5] <= 32;
const isEndsolid = (bytes: Uint8Array, at: number): boolean => four(bytes, at) === ENDS && isSolid(bytes, at + 3);
const isFacet = (bytes: Uint8Array, at: number): boolean =>
  four(bytes, at) === FACE && four(bytes, at + 1) === ACET && bytes[at + 5] <= 32;
const isEndfacet = (bytes: Uint8Array, at: number): boolean =>
  four(bytes, at) === ENDF && four(bytes, at + 4) === ACET && bytes[at + 8] <= 32;
const isOuter = (bytes: Uint8Array, at: number): boolean =>
  four(bytes, at) === OUTE && four(bytes, at + 1) === UTER && bytes[at + 5] <= 32;
const isLoop = (bytes: Uint8Array, at: number): boolean => four(bytes, at) === LOOP && bytes[at + 4] <= 32;
const isEndloop = (bytes: Uint8Array, at: number): boolean =>
  four(bytes, at) === ENDL && four(bytes, at + 3) === LOOP && bytes[at + 7] <= 32;
const isVertex = (bytes: Uint8Array, at: number): boolean =>
  four(bytes, at) === VERT && four(bytes, at + 2) === RTEX && bytes[at + 6] <= 32;
const isNormal = (bytes: Uint8Array, at: number): boolean =>
  four(bytes, at) === NORM && four(bytes, at + 2) === RMAL && bytes[at + 6] <= 32;

/** What comes next. */
enum Next {
  Solid,
  FacetOrEnd,
  Outer,
  Loop,
  Vertex,
  Coordinate,
  EndLoop,
  EndFacet,
}

/** Bytes from which the number of triangles in a file is estimated. */
const FIRST_LOOK = 1 << 16;

const REMEDY = "Export the surface again, or repair the file at this line.";

/**
 * Reads text STL piece by piece: any white space, any case, several solids, names with blanks, with or without `endsolid`.
 * Normals are skipped: the order of the corners says which way a triangle faces. Solids of one name are joined.
 */
export class AsciiStlReader {
  private next = Next.Solid;
  private part = -1;
  /** Coordinates there are of the triangle that is being read. */
  private filled = 0;
  /** Bytes of the file before the piece that is being read. */
  private before = 0;
  private readonly number = new DecimalScanner();
  /** How many solids each name has begun. */
  private readonly solids = new Map<string, number>();
  private unended = 0;

  /** Triangles to make room for at once: what the file has if it goes on as it began. */
  private expected = 0;
  private last = false;
  private readonly first: number;

  /**
   * @param unnamed the part's name where a solid has none
   * @param size bytes of the file, where that is certain; else 0
   */
  constructor(
    private readonly into: TriangleBuilder,
    private readonly file: number,
    private readonly unnamed: string,
    private readonly size: number,
  ) {
    this.first = into.triangles;
  }

  /**
   * Reads what is complete in `bytes[0, length)` and returns how many bytes that is; the rest is to be given again, with more
   * behind it. `last`: there is no more; `bytes[length]` is white space then, so that words end before it.
   */
  read(bytes: Uint8Array, length: number, last: boolean): number {
    this.last = last;
    const limit = last ? length : completeUntil(bytes, length);
    if (this.before === 0 && limit > FIRST_LOOK && this.size > 0) {
      // Counts facets at the beginning; a facet takes 50 bytes at least, so that no file makes this grow beyond its own size.
      const facets = facetsIn(bytes, FIRST_LOOK);
      this.expected = this.first + Math.ceil(1.02 * (facets / FIRST_LOOK) * this.size) + 16;
    }
    this.walk(bytes, limit);
    this.before += limit;
    return limit;
  }

  /** Says what was odd in the file as a whole. */
  finish(): void {
    if (this.next !== Next.Solid && this.next !== Next.FacetOrEnd) throw this.cutOff(0);
    if (this.next === Next.FacetOrEnd) this.unended++;
    const { path } = this.into.files[this.file];
    if (this.unended > 0)
      this.into.findings.push(
        finding(
          "missing-endsolid",
          "note",
          `${path}: ${this.unended} ${this.unended === 1 ? "solid is" : "solids are"} not closed by endsolid; the file may have been cut off between two facets.`,
          "Compare the number of triangles with the program that wrote the file.",
          { count: this.unended },
        ),
      );
    for (const [name, count] of this.solids)
      if (count > 1)
        this.into.findings.push(
          finding(
            "duplicate-part-name",
            "warning",
            `${path}: ${count} solids are named "${name}"; they were joined into one part, so their forces cannot be told apart.`,
            "Give each solid a name of its own if they are different parts.",
            { part: name, count },
          ),
        );
  }

  private walk(bytes: Uint8Array, limit: number): void {
    const { number, into } = this;
    let { next, filled } = this;
    let { positions, triangles } = into;
    let to = 9 * triangles + filled;
    let at = this.before === 0 && bytes[0] === 0xef && bytes[1] === 0xbb && bytes[2] === 0xbf ? 3 : 0;
    for (;;) {
      while (bytes[at] <= 32 && at < limit) at++;
      if (at >= limit) break;
      switch (next) {
        case Next.Coordinate: {
          const value = number.scan(bytes, at);
          // Only NaN and the infinities do not give zero here.
          if (value - value !== 0) throw this.badNumber(bytes, at, number.end, limit);
          positions[to++] = value;
          at = number.end;
          if (++filled === 9) {
            into.partOf[triangles++] = this.part;
            filled = 0;
            next = Next.EndLoop;
          } else if (filled === 3 || filled === 6) next = Next.Vertex;
          break;
        }
        case Next.Vertex:
          if (isVertex(bytes, at)) {
            at += 6;
            next = Next.Coordinate;
          } else if (isEndloop(bytes, at)) throw this.wrongCorners(`${filled / 3}`, at);
          else throw this.unexpected(bytes, at, limit, "vertex");
          break;
        case Next.Outer:
          // Everything up to "outer" is the normal, whatever it says.
          if (bytes[at] > 64) {
            if (isOuter(bytes, at)) next = Next.Loop;
            else if (isVertex(bytes, at) || isEndfacet(bytes, at)) throw this.unexpected(bytes, at, limit, "outer loop");
          }
          while (bytes[at] > 32) at++;
          break;
        case Next.Loop:
          if (!isLoop(bytes, at)) throw this.unexpected(bytes, at, limit, "loop");
          at += 4;
          next = Next.Vertex;
          break;
        case Next.EndLoop:
          if (isVertex(bytes, at)) throw this.wrongCorners("more than 3", at);
          if (!isEndloop(bytes, at)) throw this.unexpected(bytes, at, limit, "endloop");
          at += 7;
          next = Next.EndFacet;
          break;
        case Next.EndFacet:
          if (!isEndfacet(bytes, at)) throw this.unexpected(bytes, at, limit, "endfacet");
          at += 8;
          next = Next.FacetOrEnd;
          break;
        case Next.FacetOrEnd:
          if (isFacet(bytes, at)) {
            at += 5;
            next = Next.Outer;
            if (triangles === into.partOf.length) {
              into.triangles = triangles;
              into.reserve(Math.max(1024, this.expected - triangles));
              positions = into.positions;
            }
          } else if (isEndsolid(bytes, at)) {
            at = endOfName(bytes, at + 8, limit);
            next = Next.Solid;
          } else if (isSolid(bytes, at)) {
            this.unended++;
            at = this.beginSolid(bytes, at, limit);
          } else throw this.unexpected(bytes, at, limit, "facet or endsolid");
          break;
        case Next.Solid:
          if (!isSolid(bytes, at)) throw this.unexpected(bytes, at, limit, "solid");
          at = this.beginSolid(bytes, at, limit);
          next = Next.FacetOrEnd;
          break;
      }
    }
    this.next = next;
    this.filled = filled;
    into.triangles = triangles;
  }

  private beginSolid(bytes: Uint8Array, at: number, limit: number): number {
    const end = endOfName(bytes, at + 5, limit);
    const name = partName(bytes.subarray(at + 5, end)) || this.unnamed;
    this.solids.set(name, (this.solids.get(name) ?? 0) + 1);
    this.part = this.into.part(name, this.file);
    return end;
  }

  private unexpected(bytes: Uint8Array, at: number, limit: number, expected: string): TextFault {
    if (this.last && wordEnd(bytes, at, limit) === limit) return this.cutOff(at);
    return new TextFault("stl-syntax", `Expected ${expected}, found "${shown(bytes, at, limit)}".`, REMEDY, this.before + at);
  }

  private cutOff(at: number): TextFault {
    return new TextFault(
      "stl-truncated",
      "The file ends inside a facet; it was cut off.",
      "Copy or export the file again and compare its size with the original.",
      this.before + at,
    );
  }

  private wrongCorners(corners: string, at: number): TextFault {
    return new TextFault(
      "stl-facet-corners",
      `A facet has ${corners} corners; STL knows triangles only.`,
      "Export the surface as triangles.",
      this.before + at,
    );
  }

  private badNumber(bytes: Uint8Array, at: number, end: number, limit: number): TextFault {
    if (this.last && end === limit) return this.cutOff(at);
    const text = shown(bytes, at, end);
    const value = Number(text.replace(/^([+-]?)(inf|infinity)$/i, "$1Infinity"));
    return /^[+-]?nan\b/i.test(text) || Math.abs(Math.fround(value)) === Number.POSITIVE_INFINITY
      ? new TextFault(
          "coordinate-not-finite",
          `The coordinate "${text}" is not a finite 32-bit number.`,
          "Export the surface again; such corners usually come from a failed scaling or an empty facet.",
          this.before + at,
        )
      : new TextFault(
          "stl-number",
          `Expected a coordinate, found "${text}".`,
          "Write numbers with a decimal point and no unit, such as 1.25 or 3.1e-2.",
          this.before + at,
        );
  }
}

/**
 * How much of `bytes[0, length)` ends with a line or, where lines are long, with a facet, so that no word and no name is cut. Zero:
 * more is needed.
 */
function completeUntil(bytes: Uint8Array, length: number): number {
  for (let at = length - 1; at >= 0; at--) {
    if (bytes[at] === 10 || bytes[at] === 13) return at + 1;
    if (bytes[at] <= 32 && at >= 8 && isEndfacet(bytes, at - 8)) return at + 1;
  }
  return 0;
}

/**
 * Where the name that begins at `from` ends: at the end of the line, or, in files without lines, before `facet normal` and before
 * the `solid` that leads to it.
 */
function endOfName(bytes: Uint8Array, from: number, limit: number): number {
  let at = from;
  let solid = -1;
  while (at < limit && bytes[at] !== 10 && bytes[at] !== 13) {
    if (bytes[at] <= 32) {
      at++;
      continue;
    }
    if (solid < 0 && isSolid(bytes, at)) solid = at;
    const facet = isFacet(bytes, at);
    const begin = at;
    at = wordEnd(bytes, at, limit);
    if (!facet) continue;
    let following = at;
    while (following < limit && (bytes[following] === 32 || bytes[following] === 9)) following++;
    if (isNormal(bytes, following)) return solid < 0 ? begin : solid;
  }
  return at;
}

/** How many facets end in the first `limit` bytes. */
function facetsIn(bytes: Uint8Array, limit: number): number {
  let count = 0;
  for (let at = 0; at < limit; at++) if (isEndloop(bytes, at)) count++;
  return count;
}
