import { inputProblem } from "../../errors.js";
import type { Finding } from "../../finding.js";
import type { SurfaceFile, TriangleSet } from "../triangle-set.js";
import { cleanPatchNames } from "./part-names.js";

const FIRST_ROOM = 4096;
/** More spare room than this share is given back at the end. */
const SPARE = 0.2;

/** A part index is kept in 16 bits per triangle. */
const MOST_PARTS = 65_535;

/**
 * Collects triangles from several files. `positions` and `partOf` are public so that a reader can write into them without a call
 * per triangle: it asks for room, writes from `triangles` on, and then raises `triangles`.
 */
export class TriangleBuilder {
  /** 9 per triangle; only the first 9 · triangles entries mean anything. */
  positions = new Float32Array(0);
  /** 1 per triangle */
  partOf = new Uint16Array(0);
  triangles = 0;
  readonly files: SurfaceFile[] = [];
  readonly findings: Finding[] = [];
  private readonly names: string[] = [];
  private readonly fileOfPart: number[] = [];
  private readonly partOfName = new Map<string, number>();

  /** Makes room for `more` triangles on top of those there are. `exactly`: no more than that will come. */
  reserve(more: number, exactly = false): void {
    const needed = this.triangles + more;
    if (this.partOf.length >= needed) return;
    const room = exactly ? needed : Math.max(needed, FIRST_ROOM, 2 * this.partOf.length);
    try {
      const positions = new Float32Array(9 * room);
      positions.set(this.positions.subarray(0, 9 * this.triangles));
      const partOf = new Uint16Array(room);
      partOf.set(this.partOf.subarray(0, this.triangles));
      this.positions = positions;
      this.partOf = partOf;
    } catch (cause) {
      throw inputProblem({
        code: "surface-too-large",
        message: `The surface has at least ${needed} triangles, which need ${Math.ceil((38 * needed) / 1e6)} MB in one piece; the machine does not give that much.`,
        remedy: "Decimate the surface, or work on a machine with more memory.",
        cause,
      });
    }
  }

  /**
   * Index of the part of this name within `file` (an index into `files`); a new part the first time.
   *
   * @throws Problem(input) `duplicate-part-name` when another file has a part of that name, `too-many-parts`.
   */
  part(name: string, file: number): number {
    const known = this.partOfName.get(name);
    if (known !== undefined) {
      const first = this.fileOfPart[known];
      if (first === file) return known;
      throw inputProblem({
        code: "duplicate-part-name",
        message: `Both ${this.files[first].path} and ${this.files[file].path} hold a part named "${name}".`,
        where: this.files[file].path,
        remedy:
          "Give only one of the files, or rename the part in one of them (the file itself, for a part without a name of its own).",
      });
    }
    if (this.names.length === MOST_PARTS)
      throw inputProblem({
        code: "too-many-parts",
        message: `The surface has more than ${MOST_PARTS} parts.`,
        where: this.files[file].path,
        remedy: "Join the solids of the file into the few parts whose forces are wanted.",
      });
    this.names.push(name);
    this.fileOfPart.push(file);
    this.partOfName.set(name, this.names.length - 1);
    return this.names.length - 1;
  }

  finish(): TriangleSet {
    const patches = cleanPatchNames(this.names);
    const spare = this.partOf.length - this.triangles > SPARE * this.triangles;
    const positions = this.positions.subarray(0, 9 * this.triangles);
    const partOf = this.partOf.subarray(0, this.triangles);
    return {
      positions: spare ? positions.slice() : positions,
      partOf: spare ? partOf.slice() : partOf,
      parts: this.names.map((name, k) => ({ name, patch: patches[k], file: this.fileOfPart[k] })),
      files: this.files,
      findings: this.findings,
    };
  }
}
