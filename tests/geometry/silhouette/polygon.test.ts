import { describe, expect, it } from "vitest";
import { cutPolygon } from "../../../src/geometry/silhouette/polygon.js";

/** Signed area along z of the triangles that a polygon in the xy plane is cut into, each of which must turn the polygon's way. */
function areas(points: [number, number][], height: (x: number, y: number) => number = () => 0): number[] {
  const corners = Float64Array.from(points.flatMap(([x, y]) => [x, y, height(x, y)]));
  const cut = cutPolygon(corners, points.length);
  expect(cut).toHaveLength(3 * (points.length - 2));
  return Array.from({ length: points.length - 2 }, (_, k) => {
    const [a, b, c] = cut.slice(3 * k, 3 * k + 3).map((corner) => points[corner]);
    return ((b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0])) / 2;
  });
}

const sum = (values: number[]): number => values.reduce((total, value) => total + value, 0);

describe("cutPolygon", () => {
  it("cuts a convex polygon into triangles that fill it", () => {
    const hexagon = Array.from({ length: 6 }, (_, k): [number, number] => [
      Math.cos((k * Math.PI) / 3),
      Math.sin((k * Math.PI) / 3),
    ]);
    expect(sum(areas(hexagon))).toBeCloseTo(1.5 * Math.sqrt(3), 12);
  });

  it.each([0, 1, 2, 3])("cuts an arrowhead on the diagonal inside, whichever corner comes first (%i)", (first) => {
    const arrow: [number, number][] = [
      [0, 0],
      [2, -2],
      [0, 3],
      [-2, -2],
    ];
    const turned = arrow.slice(first).concat(arrow.slice(0, first));
    for (const area of areas(turned)) expect(area).toBeGreaterThan(0);
    expect(sum(areas(turned))).toBeCloseTo(6, 12);
  });

  it("cuts a comb, also tilted and clockwise", () => {
    const comb: [number, number][] = [
      [0, 0],
      [5, 0],
      [5, 3],
      [4, 3],
      [4, 1],
      [3, 1],
      [3, 3],
      [2, 3],
      [2, 1],
      [1, 1],
      [1, 3],
      [0, 3],
    ];
    const areasOf = areas(comb, (x, y) => 0.3 * x - 2 * y);
    for (const area of areasOf) expect(area).toBeGreaterThanOrEqual(0);
    expect(sum(areasOf)).toBeCloseTo(11, 12);
    expect(sum(areas(comb.slice().reverse()))).toBeCloseTo(-11, 12);
  });

  it("ends with what crosses itself", () => {
    expect(
      areas([
        [0, 0],
        [1, 1],
        [1, 0],
        [0, 1],
        [0.5, -1],
      ]),
    ).toHaveLength(3);
    expect(
      areas([
        [0, 0],
        [0, 0],
        [0, 0],
        [0, 0],
      ]),
    ).toEqual([0, 0]);
  });
});
