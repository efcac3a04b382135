import { describe, expect, it } from "vitest";
import { orient } from "../../../src/geometry/repair/orient.js";
import { surfaceMesh } from "../../../src/geometry/surface-mesh.js";
import { bodyOf, box, joined, sphere, turnedOver } from "../shapes.js";

const turnedIn = (turn: Uint8Array, from: number, to: number): number =>
  turn.subarray(from, to).reduce((sum, value) => sum + value, 0);

describe("which way shells face", () => {
  it("turns thousands of small shells that lie beside each other", () => {
    const rivet = turnedOver(box([0, 0, 0], [0.01, 0.01, 0.01]));
    const [count, row] = [4000, 60];
    const positions = new Float32Array(rivet.length * count);
    for (let k = 0; k < count; k++)
      for (let at = 0; at < rivet.length; at++)
        positions[k * rivet.length + at] = rivet[at] + 0.05 * [k % row, Math.floor(k / row), 0][at % 3];
    const { turn, oneSided, cavities } = orient(surfaceMesh({ positions, partOf: new Uint16Array(positions.length / 9) }));
    expect(turnedIn(turn, 0, turn.length)).toBe(12 * count);
    expect([oneSided, cavities]).toEqual([[], []]);
  });

  it("judges nested shells from the outside inwards, whatever their order", () => {
    // All four inside out: skin and island (in the cavity) turn, the cavity and the hollow of the island stay.
    const shells = [4, 3, 2, 1].map((half) => turnedOver(box([-half, -half, -half], [half, half, half])));
    for (const order of [
      [0, 1, 2, 3],
      [3, 2, 1, 0],
      [2, 0, 3, 1],
    ]) {
      const aside = turnedOver(sphere(1, 6, [20, 0, 0]));
      const { turn, cavities } = orient(surfaceMesh(bodyOf({ nest: joined(...order.map((k) => shells[k])), aside })));
      order.forEach((k, place) => {
        expect(turnedIn(turn, 12 * place, 12 * place + 12), `${order}: shell ${k}`).toBe(k % 2 === 0 ? 12 : 0);
      });
      expect(turnedIn(turn, 48, turn.length)).toBe(turn.length - 48);
      expect(cavities.map((first) => order[first / 12]).sort()).toEqual([1, 3]);
    }
  });
});
