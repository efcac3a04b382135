import { describe, expect, it } from "vitest";
import { asciiStl, binaryStl } from "../../../src/geometry/files/write-stl.js";
import type { TriangleSet } from "../../../src/geometry/triangle-set.js";

/** Parts take their triangles from `partOf`; their patches are part-0, part-1, ... */
function setOf(positions: number[], partOf: number[], names: string[]): TriangleSet {
  return {
    positions: Float32Array.from(positions),
    partOf: Uint16Array.from(partOf),
    parts: names.map((name, k) => ({ name, patch: `part-${k}`, file: 0 })),
    files: [{ path: "body.stl", format: "stl-ascii", triangles: partOf.length }],
    findings: [],
  };
}

const triangleInXy = [0, 0, 0, 2, 0, 0, 0, 3, 0];
const triangleInYz = [1, 0, 0, 1, 1, 0, 1, 0, 1];
const text = (bytes: Uint8Array): string => Buffer.from(bytes).toString("utf8");

/** A second, slow reader of the text: names and corners of each block. */
function blocksOf(file: string): { name: string; corners: number[] }[] {
  const blocks: { name: string; corners: number[] }[] = [];
  for (const line of file.split("\n")) {
    if (line.startsWith("solid ")) blocks.push({ name: line.slice(6), corners: [] });
    else if (line.startsWith("vertex ")) blocks.at(-1)?.corners.push(...line.slice(7).split(" ").map(Number));
  }
  return blocks;
}

describe("binaryStl", () => {
  const bytes = binaryStl(setOf([...triangleInXy, ...triangleInYz], [1, 0], ["a", "b"]));
  const view = new DataView(bytes.buffer);

  it("has a header of 80 bytes that does not begin with solid, the count, and 50 bytes a triangle", () => {
    expect(bytes.length).toBe(84 + 2 * 50);
    expect(text(bytes.slice(0, 5)).toLowerCase()).not.toBe("solid");
    expect(view.getUint32(80, true)).toBe(2);
  });

  it("keeps the order of the triangles, computes normals, and leaves the attribute 0", () => {
    const record = (k: number): number[] => Array.from({ length: 12 }, (_, j) => view.getFloat32(84 + 50 * k + 4 * j, true));
    expect(record(0)).toEqual([0, 0, 1, ...triangleInXy]);
    expect(record(1)).toEqual([1, 0, 0, ...triangleInYz]);
    expect([view.getUint16(84 + 48, true), view.getUint16(84 + 98, true)]).toEqual([0, 0]);
  });

  it("gives a triangle without area the normal 0 0 0", () => {
    const flat = new DataView(binaryStl(setOf([1, 1, 1, 2, 2, 2, 3, 3, 3], [0], ["a"])).buffer);
    expect([0, 4, 8].map((offset) => flat.getFloat32(84 + offset, true))).toEqual([0, 0, 0]);
  });

  it("writes an empty body as a header and a zero", () => {
    const empty = binaryStl(setOf([], [], []));
    expect(empty.length).toBe(84);
    expect(new DataView(empty.buffer).getUint32(80, true)).toBe(0);
  });
});

describe("asciiStl", () => {
  it("writes one block per part in part order, empty parts included", () => {
    const set = setOf([...triangleInXy, ...triangleInYz, ...triangleInXy], [2, 0, 2], ["cab", "none", "bed"]);
    const file = text(asciiStl(set));
    expect(blocksOf(file)).toEqual([
      { name: "part-0", corners: triangleInYz },
      { name: "part-1", corners: [] },
      { name: "part-2", corners: [...triangleInXy, ...triangleInXy] },
    ]);
    expect(file.match(/^endsolid part-\d$/gm)).toHaveLength(3);
    expect(file).toContain("facet normal 1 0 0\n");
    expect(file.endsWith("endsolid part-2\n")).toBe(true);
  });

  it("takes the names of the blocks from nameOf and lets none of them forge a line", () => {
    const set = setOf(triangleInXy, [0], ["door\nendsolid door\nsolid hidden"]);
    const file = text(asciiStl(set, (part) => part.name));
    expect(blocksOf(file).map((block) => block.name)).toEqual(["door endsolid door solid hidden"]);
  });

  it("gives every coordinate back bit for bit, over chunk borders too", () => {
    const triangles = 9000;
    const positions = new Float32Array(9 * triangles);
    const bits = new Uint32Array(positions.buffer);
    // A linear congruential sequence (Numerical Recipes, from memory) spreads over all float32 patterns.
    let state = 12345;
    for (let k = 0; k < bits.length; k++) {
      do {
        state = (Math.imul(state, 1664525) + 1013904223) >>> 0;
        bits[k] = state;
      } while (!Number.isFinite(positions[k]));
    }
    const set = setOf([], [], ["all"]);
    const blocks = blocksOf(text(asciiStl({ ...set, positions, partOf: new Uint16Array(triangles) })));
    const corners = (blocks[0]?.corners ?? []).map(Math.fround);
    expect(corners.length).toBe(positions.length);
    expect(corners.findIndex((value, k) => !Object.is(value, positions[k]))).toBe(-1);
  });

  it.each([Number.NaN, Number.POSITIVE_INFINITY])("refuses a corner at %s and says where", (value) => {
    const set = setOf([...triangleInXy, 0, 0, 0, 1, value, 0, 1, 0, 0], [0, 1], ["cab", "bed"]);
    for (const write of [binaryStl, asciiStl]) {
      expect(() => write(set)).toThrow(
        expect.objectContaining({
          kind: "input",
          code: "coordinate-not-finite",
          where: "part bed",
          message: expect.stringContaining("Triangle 2"),
        }),
      );
    }
  });
});
