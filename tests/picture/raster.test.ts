import { describe, expect, test } from "vitest";
import { rasterise, viewOf } from "../../src/picture/raster.js";
import { bodyOf, sphere } from "../geometry/shapes.js";

/** The same triangles, each beginning at another corner and wound the other way. */
function turned(shape: number[]): number[] {
  const result: number[] = [];
  for (let at = 0; at < shape.length; at += 9)
    result.push(...shape.slice(at + 6, at + 9), ...shape.slice(at + 3, at + 6), ...shape.slice(at, at + 3));
  return result;
}

describe("parts that lie on each other", () => {
  const ball = sphere(0.37, 24);
  test.each([
    ["the first part first", { first: ball, second: turned(ball) }, 0],
    ["far from the origin", { first: ball.map((v) => v + 40), second: turned(ball.map((v) => v + 40)) }, 0],
  ])("only the first is seen: %s", (_, shapes, seenPart) => {
    const set = bodyOf(shapes);
    const { triangle } = rasterise(set, viewOf([set], [-0.7, -0.6, 0.4], 300, 4));
    const parts = new Set([...triangle].filter((number) => number > 0).map((number) => set.partOf[number - 1]));
    expect([...parts]).toEqual([seenPart]);
  });

  test("whichever part's triangles are read first", () => {
    const set = bodyOf({ first: ball, second: turned(ball) });
    const count = set.partOf.length;
    const positions = new Float32Array(set.positions.length);
    for (let t = 0; t < count; t++) positions.set(set.positions.subarray(9 * t, 9 * t + 9), 9 * (count - 1 - t));
    const swapped = { positions, partOf: set.partOf.slice().reverse() };
    const { triangle } = rasterise(swapped, viewOf([swapped], [-0.7, -0.6, 0.4], 300, 4));
    const parts = new Set([...triangle].filter((number) => number > 0).map((number) => swapped.partOf[number - 1]));
    expect([...parts]).toEqual([0]);
  });
});
