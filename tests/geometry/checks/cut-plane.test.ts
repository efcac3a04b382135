import { describe, expect, it } from "vitest";
import { cutPlaneDeviation } from "../../../src/geometry/checks/cut-plane.js";
import { surfaceMesh } from "../../../src/geometry/surface-mesh.js";
import { bodyOf, box, joined, shifted, type Triangles } from "../shapes.js";

describe("cutPlaneDeviation", () => {
  const half = (move: (x: number, y: number, z: number) => number[] = (...p) => p): Triangles => {
    // The right half of a finely cut box of 4 by 2 by 1, open at y = 0.
    const shape: Triangles = [];
    for (let k = 0; k < 8; k++) {
      const block = box([k / 2, 0, 0], [(k + 1) / 2, 1, 1]);
      for (let t = 0; t < 12; t++) {
        const triangle = block.slice(9 * t, 9 * t + 9);
        const flat = (axis: number, value: number): boolean => [0, 3, 6].every((at) => triangle[at + axis] === value);
        const inner = (flat(0, k / 2) && k > 0) || (flat(0, (k + 1) / 2) && k < 7);
        if (!flat(1, 0) && !inner)
          for (let at = 0; at < 9; at += 3) shape.push(...move(triangle[at], triangle[at + 1], triangle[at + 2]));
      }
    }
    return shape;
  };
  const deviation = (shape: Triangles, plane = 0) => cutPlaneDeviation(surfaceMesh(bodyOf({ shape })), 1, plane, 1e-4);

  it("finds a plane cut in its plane, on either side, wherever the plane is", () => {
    for (const [shape, plane] of [
      [half(), 0],
      [half((x, y, z) => [x, -y, z]), 0],
      [shifted(half(), [0, 8, 0]), 8],
    ] as const)
      expect(deviation(shape, plane)).toMatchObject({ vertices: 18, deviation: 0, stray: 0, beyond: 0, isPlanar: true });
  });

  it("measures how far a vertex of the cut strays, inwards and beyond", () => {
    const inwards = deviation(half((x, y, z) => [x, y === 0 && x === 2 && z === 1 ? 0.0078125 : y, z]));
    expect(inwards).toMatchObject({ deviation: 0.0078125, place: [2, 0.0078125, 1], stray: 1, beyond: 0, isPlanar: false });
    const beyond = deviation(half((x, y, z) => [x, y === 0 && x === 2 && z === 1 ? -0.0078125 : y, z]));
    expect(beyond).toMatchObject({
      deviation: 0.0078125,
      stray: 1,
      beyond: 1,
      beyondBy: 0.0078125,
      beyondPlace: [2, -0.0078125, 1],
    });
    // Within the tolerance.
    expect(deviation(half((x, y, z) => [x, y === 0 && x === 2 ? 5e-5 : y, z]))).toMatchObject({ stray: 0, isPlanar: true });
  });

  it("looks at the cut only, and at nothing where it is closed", () => {
    const hole = shifted(box([1, 5, 0], [2, 6, 1]).slice(9), [0, 0, 3]);
    expect(deviation(joined(half(), hole))).toMatchObject({ vertices: 18, deviation: 0 });
    expect(deviation(box([0, 0, 0], [4, 1, 1]))).toMatchObject({ vertices: 0, place: null, isPlanar: true });
    expect(deviation([])).toMatchObject({ vertices: 0, beyond: 0 });
  });

  it("counts what lies beyond the plane", () => {
    const found = deviation(joined(half(), box([1, -0.25, 2], [2, 0.5, 3])));
    expect(found).toMatchObject({ beyond: 4, beyondBy: 0.25, isPlanar: true });
    expect(found.beyondPlace?.[1]).toBe(-0.25);
  });
});
