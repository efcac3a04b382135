import type { PackedPart } from "../page-model.js";

export interface PartMesh {
  name: string;
  /** 3 per vertex, metres, case axes */
  vertices: Float32Array;
  /** 3 per triangle */
  indices: Uint32Array;
}

function bytesOf(base64: string): ArrayBuffer {
  const text = atob(base64);
  const bytes = new Uint8Array(text.length);
  for (let at = 0; at < text.length; at++) bytes[at] = text.charCodeAt(at);
  return bytes.buffer;
}

/** A packed part as vertices and triangles again. */
export function unpackPart({ name, min, max, positions, indices }: PackedPart): PartMesh {
  const grid = new Uint16Array(bytesOf(positions));
  const vertices = new Float32Array(grid.length);
  for (let at = 0; at < grid.length; at++) {
    const axis = at % 3;
    vertices[at] = min[axis]! + (grid[at]! / 65535) * (max[axis]! - min[axis]!);
  }
  return { name, vertices, indices: new Uint32Array(bytesOf(indices)) };
}
