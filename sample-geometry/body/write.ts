import { asciiStl, binaryStl } from "../../src/geometry/files/write-stl.js";
import type { TriangleSet } from "../../src/geometry/triangle-set.js";
import type { SamplePart } from "./pickup.js";

/** A part as the bytes of its STL file. */
export function bytesOf(part: SamplePart): Uint8Array {
  const triangles = part.surface.positions.length / 9;
  const set: TriangleSet = {
    positions: Float32Array.from(part.surface.positions),
    partOf: new Uint16Array(triangles),
    parts: [{ name: part.name, patch: part.name, file: 0 }],
    files: [{ path: part.file, format: part.format === "text" ? "stl-ascii" : "stl-binary", triangles }],
    findings: [],
  };
  return part.format === "text" ? asciiStl(set) : binaryStl(set);
}
