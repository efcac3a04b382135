import { inputProblem } from "../../errors.js";
import { finding } from "../../finding.js";
import type { TriangleBuilder } from "./triangle-builder.js";

export const HEADER_BYTES = 84;
export const RECORD_BYTES = 50;

/** Triangles that the header announces; `head` holds the first 84 bytes at least. */
export const announcedTriangles = (head: Uint8Array): number => new DataView(head.buffer, head.byteOffset).getUint32(80, true);

export const binarySize = (triangles: number): number => HEADER_BYTES + RECORD_BYTES * triangles;

/** Reads binary STL piece by piece: one solid, one part. Normals and attributes are skipped. */
export class BinaryStlReader {
  private readonly announced: number;
  private header = true;
  private done = 0;
  private trailing = 0;

  constructor(
    private readonly into: TriangleBuilder,
    private readonly file: number,
    private readonly part: number,
    head: Uint8Array,
  ) {
    this.announced = announcedTriangles(head);
  }

  /** Reads the whole records in `bytes[0, length)` and returns how many bytes that is. `bytes` begins at an even address. */
  read(bytes: Uint8Array, length: number, _last: boolean): number {
    let at = 0;
    if (this.header) {
      if (length < HEADER_BYTES) return 0;
      at = HEADER_BYTES;
      this.header = false;
    }
    const records = Math.min(Math.floor((length - at) / RECORD_BYTES), this.announced - this.done);
    this.copy(bytes, at, records);
    at += records * RECORD_BYTES;
    this.done += records;
    if (this.done < this.announced) return at;
    this.trailing += length - at;
    return length;
  }

  finish(size: number): void {
    const { path } = this.into.files[this.file];
    if (this.done < this.announced) throw truncatedBinary(path, this.announced, size);
    if (this.trailing > 0)
      this.into.findings.push(
        finding(
          "trailing-bytes",
          "note",
          `${path}: ${this.trailing} bytes follow the ${this.announced} triangles that the header announces; they were not read.`,
          "Check that the file is whole: its header should announce every triangle.",
          { count: this.trailing },
        ),
      );
  }

  private copy(bytes: Uint8Array, from: number, records: number): void {
    const { into, part } = this;
    into.reserve(records);
    const view = new DataView(bytes.buffer, bytes.byteOffset);
    const { positions, partOf } = into;
    let at = from + 12;
    let to = 9 * into.triangles;
    let bad = -1;
    for (let record = 0; record < records; record++) {
      for (let k = 0; k < 36; k += 4) {
        const value = view.getFloat32(at + k, true);
        // Only NaN and the infinities do not give zero here.
        if (value - value !== 0 && bad < 0) bad = 9 * record + k / 4;
        positions[to++] = value;
      }
      at += RECORD_BYTES;
    }
    partOf.fill(part, into.triangles, into.triangles + records);
    if (bad >= 0) {
      const triangle = this.done + Math.floor(bad / 9);
      throw inputProblem({
        code: "coordinate-not-finite",
        message: `Triangle ${triangle + 1} has the coordinate ${positions[9 * into.triangles + bad]}; every coordinate must be a finite number.`,
        where: `${into.files[this.file].path}, byte ${binarySize(triangle) + 12 + 4 * (bad % 9)}`,
        remedy: "Export the surface again; such corners usually come from a failed scaling or an empty facet.",
      });
    }
    into.triangles += records;
  }
}

export function truncatedBinary(path: string, announced: number, size: number): Error {
  return inputProblem({
    code: "stl-truncated",
    message: `The header announces ${announced} triangles, which need ${binarySize(announced)} bytes, but the file has ${size}.`,
    where: path,
    remedy: "Copy or export the file again; it was cut off, or it is no binary STL.",
  });
}
