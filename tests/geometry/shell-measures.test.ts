import { describe, expect, it } from "vitest";
import { mostShells, shellMeasures } from "../../src/geometry/shell-measures.js";
import { shellsOf } from "../../src/geometry/shells.js";
import { surfaceMesh } from "../../src/geometry/surface-mesh.js";
import { bodyOf, box, joined, shifted, sphere, type Triangles, turnedOver } from "./shapes.js";

const shellsIn = (parts: Record<string, Triangles>) => {
  const mesh = surfaceMesh(bodyOf(parts));
  return shellMeasures(mesh, shellsOf(mesh));
};

describe("measures by shell", () => {
  it("two boxes in one part and an open one in another: area, volume, centroid, bounds, which is closed", () => {
    const open = box([10, 0, 0], [11, 1, 1]).slice(9);
    const shells = shellsIn({ boxes: joined(box([0, 0, 0], [1, 2, 3]), box([5, 5, 5], [6, 6, 6])), open });
    expect(shells).toHaveLength(3);
    expect(shells[0]).toMatchObject({ triangles: 12, parts: [0], closed: true, centroid: [0.5, 1, 1.5] });
    expect(shells[0].area).toBeCloseTo(22, 12);
    expect(shells[0].volume).toBeCloseTo(6, 12);
    expect(shells[0].bounds).toEqual({ min: [0, 0, 0], max: [1, 2, 3] });
    expect(shells[1]).toMatchObject({ triangles: 12, parts: [0], closed: true, centroid: [5.5, 5.5, 5.5] });
    expect(shells[2]).toMatchObject({ triangles: 11, parts: [1], closed: false });
    expect(shells[2].area).toBeCloseTo(5.5, 12);
  });

  it("a shell that runs over two parts counts once, and a cavity's wall has a negative volume", () => {
    const shape = box([0, 0, 0], [2, 2, 2]);
    const shells = shellsIn({
      front: shape.slice(0, 54),
      rear: shape.slice(54),
      cavity: turnedOver(box([0.5, 0.5, 0.5], [1, 1, 1])),
    });
    expect(shells).toHaveLength(2);
    expect(shells.find(({ parts }) => parts.length === 2)).toMatchObject({ parts: [0, 1], closed: true, volume: 8 });
    expect(shells.find(({ parts }) => parts.length === 1)?.volume).toBeCloseTo(-0.125, 12);
  });

  it("is the same, to the last bit, for triangles in another order", () => {
    const shape = joined(sphere(1, 12), shifted(sphere(0.5, 9), [3, 0, 0]));
    const reversed: Triangles = [];
    for (let at = shape.length - 9; at >= 0; at -= 9) reversed.push(...shape.slice(at, at + 9));
    expect(shellsIn({ shape: reversed })).toEqual(shellsIn({ shape }));
  });

  it("keeps the largest of very many", () => {
    const loose = Array.from({ length: 3 * mostShells }, (_, k) => [k, 0, 0, k + 0.5, 0, 0, k, 0.5, 0]).flat();
    const shells = shellsIn({ loose, body: shifted(sphere(1, 8), [0, 9, 0]) });
    expect(shells).toHaveLength(mostShells);
    expect(shells[0]).toMatchObject({ closed: true, parts: [1] });
    expect(shells[1]).toMatchObject({ triangles: 1, closed: false });
  });
});
