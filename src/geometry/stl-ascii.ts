import { finding } from "../finding.js";
import { DecimalScanner } from "./decimal.js";
import { partName } from "./part-names.js";
import { completeUntil, isWord, shown, TextFault, wordEnd } from "./text.js";
import type { TriangleBuilder } from "./triangle-builder.js";

const word = (text: string): Uint8Array => Buffer.from(text, "latin1");
const SOLID = word("solid");
const ENDSOLID = word("endsolid");
const FACET = word("facet");
const ENDFACET = word("endfacet");
const NORMAL = word("normal");
const OUTER = word("outer");
const LOOP = word("loop");
const ENDLOOP = word("endloop");
const VERTEX = word("vertex");

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

const REMEDY = "Export the surface again, or repair the file at this line.";

/**
 * Reads text STL piece by piece: any white space, any case, several solids, names with blanks, with or without `endsolid`.
 * Normals are skipped: the order of the corners says which way a triangle faces. Solids of one name are joined.
 */
export class AsciiStlReader {
  private next = Next.Solid;
  private part = -1;
  /** Coordinates of the triangle that is being read, and how many of them there are. */
  private readonly triangle = new Float32Array(9);
  private filled = 0;
  /** Bytes of the file before the piece that is being read. */
  private before = 0;
  private readonly number = new DecimalScanner();
  /** How many solids each name has begun. */
  private readonly solids = new Map<string, number>();
  private unended = 0;

  /** @param unnamed the part's name where a solid has none */
  constructor(
    private readonly into: TriangleBuilder,
    private readonly file: number,
    private readonly unnamed: string,
  ) {}

  /**
   * Reads what is complete in `bytes[0, length)` and returns how many bytes that is; the rest is to be given again, with more
   * behind it. `last`: there is no more.
   */
  read(bytes: Uint8Array, length: number, last: boolean): number {
    const limit = last ? length : completeUntil(bytes, length);
    this.walk(bytes, limit);
    this.before += limit;
    return limit;
  }

  /** Says what was odd in the file as a whole. */
  finish(): void {
    if (this.next !== Next.Solid && this.next !== Next.FacetOrEnd)
      throw new TextFault(
        "stl-truncated",
        "The file ends inside a facet; it was cut off.",
        "Copy or export the file again and compare its size with the original.",
        this.before,
      );
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
    const { number, triangle } = this;
    let at = this.before === 0 && bytes[0] === 0xef && bytes[1] === 0xbb && bytes[2] === 0xbf ? 3 : 0;
    for (;;) {
      while (at < limit && bytes[at] <= 32) at++;
      if (at >= limit) return;
      switch (this.next) {
        case Next.Coordinate: {
          const value = number.scan(bytes, at, limit);
          // Only NaN and the infinities do not give zero here.
          if (value - value !== 0) throw this.badNumber(bytes, at, number.end);
          triangle[this.filled++] = value;
          at = number.end;
          if (this.filled === 9) {
            this.keep();
            this.next = Next.EndLoop;
          } else if (this.filled === 3 || this.filled === 6) this.next = Next.Vertex;
          break;
        }
        case Next.Vertex:
          if (isWord(bytes, at, limit, VERTEX)) {
            at += 6;
            this.next = Next.Coordinate;
          } else if (isWord(bytes, at, limit, ENDLOOP)) throw this.wrongCorners(`${this.filled / 3}`, at);
          else throw this.unexpected(bytes, at, limit, "vertex");
          break;
        case Next.Outer:
          if (isWord(bytes, at, limit, OUTER)) this.next = Next.Loop;
          else if (isWord(bytes, at, limit, VERTEX) || isWord(bytes, at, limit, ENDFACET))
            throw this.unexpected(bytes, at, limit, "outer loop");
          // Everything else is the normal, whatever it says.
          at = wordEnd(bytes, at, limit);
          break;
        case Next.Loop:
          if (!isWord(bytes, at, limit, LOOP)) throw this.unexpected(bytes, at, limit, "loop");
          at += 4;
          this.filled = 0;
          this.next = Next.Vertex;
          break;
        case Next.EndLoop:
          if (isWord(bytes, at, limit, VERTEX)) throw this.wrongCorners("more than 3", at);
          if (!isWord(bytes, at, limit, ENDLOOP)) throw this.unexpected(bytes, at, limit, "endloop");
          at += 7;
          this.next = Next.EndFacet;
          break;
        case Next.EndFacet:
          if (!isWord(bytes, at, limit, ENDFACET)) throw this.unexpected(bytes, at, limit, "endfacet");
          at += 8;
          this.next = Next.FacetOrEnd;
          break;
        case Next.FacetOrEnd:
          if (isWord(bytes, at, limit, FACET)) {
            at += 5;
            this.next = Next.Outer;
          } else if (isWord(bytes, at, limit, ENDSOLID)) {
            at = endOfName(bytes, at + 8, limit);
            this.next = Next.Solid;
          } else if (isWord(bytes, at, limit, SOLID)) {
            this.unended++;
            at = this.beginSolid(bytes, at, limit);
          } else throw this.unexpected(bytes, at, limit, "facet or endsolid");
          break;
        case Next.Solid:
          if (!isWord(bytes, at, limit, SOLID)) throw this.unexpected(bytes, at, limit, "solid");
          at = this.beginSolid(bytes, at, limit);
          break;
      }
    }
  }

  private beginSolid(bytes: Uint8Array, at: number, limit: number): number {
    const end = endOfName(bytes, at + 5, limit);
    const name = partName(bytes.subarray(at + 5, end)) || this.unnamed;
    this.solids.set(name, (this.solids.get(name) ?? 0) + 1);
    this.part = this.into.part(name, this.file);
    this.next = Next.FacetOrEnd;
    return end;
  }

  private keep(): void {
    const { into } = this;
    if (into.triangles === into.partOf.length) into.reserve(1024);
    into.positions.set(this.triangle, 9 * into.triangles);
    into.partOf[into.triangles++] = this.part;
  }

  private unexpected(bytes: Uint8Array, at: number, limit: number, expected: string): TextFault {
    return new TextFault("stl-syntax", `Expected ${expected}, found "${shown(bytes, at, limit)}".`, REMEDY, this.before + at);
  }

  private wrongCorners(corners: string, at: number): TextFault {
    return new TextFault(
      "stl-facet-corners",
      `A facet has ${corners} corners; STL knows triangles only.`,
      "Export the surface as triangles.",
      this.before + at,
    );
  }

  private badNumber(bytes: Uint8Array, at: number, end: number): TextFault {
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
    if (solid < 0 && isWord(bytes, at, limit, SOLID)) solid = at;
    const facet = isWord(bytes, at, limit, FACET);
    const begin = at;
    at = wordEnd(bytes, at, limit);
    if (!facet) continue;
    let following = at;
    while (following < limit && (bytes[following] === 32 || bytes[following] === 9)) following++;
    if (isWord(bytes, following, limit, NORMAL)) return solid < 0 ? begin : solid;
  }
  return at;
}
