import { describe, expect, it } from "vitest";
import { findSlivers } from "../../../src/geometry/checks/slivers.js";
import { surfaceMesh } from "../../../src/geometry/surface-mesh.js";
import { car } from "../car.js";
import { bodyOf, shuffled, sphere, type Triangles, turned } from "../shapes.js";

const slivers = (parts: Record<string, Triangles>) => findSlivers(surfaceMesh(bodyOf(parts)), Object.keys(parts).length, 10);

describe("findSlivers", () => {
  it("finds triangles more than a thousand times as long as high, whatever their shape and place", () => {
    const needle = (height: number): Triangles => [0, 0, 0, 1, 0, 0, 0.5, height, 0];
    const splinter = (height: number): Triangles => [0, 0, 0, 1, 0, 0, 1, height, 0];
    for (const shape of [needle, splinter])
      for (const angle of [0, 0.7]) {
        const place = (height: number) => ({ a: turned(shape(height), [0, 0.6, 0.8], angle) });
        expect(slivers(place(1 / 900)).count).toBe(0);
        const found = slivers(place(1 / 1100));
        expect(found.count).toBe(1);
        expect(found.worst).toBeCloseTo(1100, -1);
        expect(found.places).toHaveLength(1);
      }
  });

  it("leaves degenerate triangles to the topology", () => {
    expect(slivers({ a: [0, 0, 0, 1, 0, 0, 0.5, 0, 0], b: [1, 2, 3, 1, 2, 3, 4, 5, 6] }).count).toBe(0);
    expect(slivers({ a: [1000, 0, 0, 1001, 0, 0, 1002, 2e-5, 0] }).count).toBe(0);
  });

  it("counts per part, and tells slivers that fold the surface", () => {
    // Two triangles of a flat square with a sliver between them: flat, then pulled over the edge of the first.
    const square = (x: number): Triangles => [
      ...[0, 0, 0, 1, 0, 0, x, 0.5, 0],
      ...[0, 0, 0, x, 0.5, 0, 0, 1, 0],
      ...[1, 0, 0, 1, 1, 0, x, 0.5, 0],
      ...[1, 1, 0, 0, 1, 0, x, 0.5, 0],
    ];
    expect(slivers({ a: square(0.9995), b: square(0.5) })).toMatchObject({ count: 1, folded: 0 });
    const folded = slivers({ b: square(0.5), a: square(1.0005) });
    expect(folded).toMatchObject({ count: 1, folded: 1 });
    expect([...folded.perPart]).toEqual([0, 1]);
    expect(folded.places[0][0]).toBeCloseTo(1.00017, 4);
    expect(slivers({ a: shuffled(square(1.0005), 2) })).toMatchObject({ count: 1, folded: 1 });
  });

  it("finds none in well-made bodies", () => {
    expect(slivers({ a: sphere(1, 60), car: [...car(20_000).set.positions] }).count).toBe(0);
  });
});
