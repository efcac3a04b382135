import { gridSteps, type PackedMesh } from "../packed-mesh.js";

export interface MeshArrays {
  /** 3 per vertex, metres, case axes */
  vertices: Float32Array;
  /** 3 per triangle */
  indices: Uint32Array;
}

/** A packed mesh as vertices and triangles again. Rejects when the text is damaged. */
export async function unpackMesh({ min, max, vertices: count, triangles, positions, indices }: PackedMesh): Promise<MeshArrays> {
  const grid = new Uint16Array(3 * count);
  joinPlanes(grid, await inflated(positions));
  for (let at = 3; at < grid.length; at++) grid[at]! += grid[at - 3]!;
  const vertices = new Float32Array(grid.length);
  for (let at = 0; at < grid.length; at++) {
    const axis = at % 3;
    vertices[at] = min[axis]! + (grid[at]! / gridSteps) * (max[axis]! - min[axis]!);
  }
  const corners = new Uint32Array(3 * triangles);
  joinPlanes(corners, await inflated(indices));
  for (let at = 1; at < corners.length; at++) corners[at]! += corners[at - 1]!;
  return { vertices, indices: corners };
}

async function inflated(base64: string): Promise<Uint8Array> {
  const text = atob(base64);
  const bytes = Uint8Array.from(text, (letter) => letter.charCodeAt(0));
  const plain = new Blob([bytes]).stream().pipeThrough(new DecompressionStream("deflate"));
  return new Uint8Array(await new Response(plain).arrayBuffer());
}

function joinPlanes(values: Uint16Array | Uint32Array, planes: Uint8Array): void {
  if (planes.length !== values.byteLength) throw new Error("the packed body is damaged");
  for (let at = 0; at < values.length; at++) {
    let value = 0;
    for (let byte = 0; byte < values.BYTES_PER_ELEMENT; byte++) value += planes[byte * values.length + at]! * 2 ** (8 * byte);
    values[at] = value;
  }
}
