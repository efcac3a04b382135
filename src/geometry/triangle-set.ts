import type { Finding } from "../finding.js";

/** One named surface of a body, as read. */
export interface Part {
  /** The name in the file, for people. */
  name: string;
  /** The same name made safe for the solver: `[A-Za-z][A-Za-z0-9_-]*`, unique within the body. */
  patch: string;
  /** Index into `files` of the file that it first appeared in. */
  file: number;
}

export interface SurfaceFile {
  path: string;
  format: "stl-binary" | "stl-ascii" | "obj";
  triangles: number;
}

/** All triangles of a body, as read from one or more files. Units and axes are those of the files. */
export interface TriangleSet {
  /** 9 per triangle: x0 y0 z0 x1 y1 z1 x2 y2 z2; counter-clockwise seen from outside. */
  positions: Float32Array;
  /** 1 per triangle: index into `parts`. */
  partOf: Uint16Array;
  parts: Part[];
  files: SurfaceFile[];
  /** What was odd while reading (duplicate names joined, trailing bytes, missing endsolid, ...). */
  findings: Finding[];
}
