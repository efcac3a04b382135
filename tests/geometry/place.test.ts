import { describe, expect, it } from "vitest";
import { fileMetres, metresPer, place, placeDirection, placementOf, placePoint, vehicleAxes } from "../../src/geometry/place.js";
import type { LengthUnit, SignedAxis } from "../../src/geometry/survey.js";
import type { Vector3 } from "../../src/geometry/vector.js";
import { bodyOf } from "./shapes.js";

const signed: SignedAxis[] = ["+x", "-x", "+y", "-y", "+z", "-z"];
const cross = (a: Vector3, b: Vector3): Vector3 => [
  a[1] * b[2] - a[2] * b[1],
  a[2] * b[0] - a[0] * b[2],
  a[0] * b[1] - a[1] * b[0],
];
const plain = (a: number[]): number[] => a.map((value) => value + 0);

describe("placementOf", () => {
  it("leaves a body alone that is in case axes and metres already", () => {
    expect(placementOf({ unit: "m", travel: "-x", up: "+z" }, [0, 0, 0])).toEqual({
      orientation: { unit: "m", travel: "-x", up: "+z" },
      scale: 1,
      rotation: [
        [1, 0, 0],
        [0, 1, 0],
        [0, 0, 1],
      ],
      shift: [0, 0, 0],
    });
  });

  it("knows the right side: who drives towards +x with z up has -y on the right", () => {
    expect(vehicleAxes({ travel: "+x", up: "+z" })).toEqual({ rearward: [-1, 0, 0], right: [0, -1, 0], up: [0, 0, 1] });
    // Driving into the screen, y up: the right is the right.
    expect(vehicleAxes({ travel: "-z", up: "+y" }).right).toEqual([1, 0, 0]);
  });

  it("is a proper rotation for all 24 choices, with right = travel x up", () => {
    let choices = 0;
    for (const travel of signed)
      for (const up of signed) {
        if (travel[1] === up[1]) continue;
        choices++;
        const { rotation } = placementOf({ unit: "m", travel, up }, [0, 0, 0]);
        const [x, y, z] = rotation;
        expect(plain(cross(x, y))).toEqual(z);
        const { rearward, right, up: upward } = vehicleAxes({ travel, up });
        expect(plain(cross(plain(rearward.map((value) => -value)) as Vector3, upward))).toEqual(right);
        expect(placeDirection(rearward, { rotation })).toEqual([1, 0, 0]);
        expect(plain(placeDirection(right, { rotation }))).toEqual([0, 1, 0]);
        expect(plain(placeDirection(upward, { rotation }))).toEqual([0, 0, 1]);
      }
    expect(choices).toBe(24);
  });

  it("refuses travel along up", () => {
    expect(() => placementOf({ unit: "m", travel: "-z", up: "+z" }, [0, 0, 0])).toThrow(
      "The direction of travel (-z) and up (+z) lie on one axis.",
    );
  });

  it.each<[LengthUnit, number]>([
    ["m", 1],
    ["mm", 0.001],
    ["cm", 0.01],
    ["in", 0.0254],
    ["ft", 0.3048],
  ])("takes %s for %f m", (unit, metres) => {
    expect(metresPer[unit]).toBe(metres);
    expect(placementOf({ unit, travel: "-x", up: "+z" }, [0, 0, 0]).scale).toBe(metres);
  });
});

describe("place", () => {
  const placement = placementOf({ unit: "mm", travel: "+y", up: "+z" }, [1, 2, 3]);

  it("scales, turns and shifts points, and back", () => {
    // 500 mm ahead of the origin: 0.5 m forward is -0.5 in x.
    expect(placePoint([0, 500, 0], placement)).toEqual([0.5, 2, 3]);
    expect(placePoint([250, 0, 1000], placement)).toEqual([1, 2.25, 4]);
    const back = fileMetres(placePoint([10, -20, 30], placement), placement);
    for (const [k, value] of [0.01, -0.02, 0.03].entries()) expect(back[k]).toBeCloseTo(value, 12);
  });

  it("places all corners, in new memory, and keeps the sense of the triangles", () => {
    const set = bodyOf({ a: [0, 0, 0, 1000, 0, 0, 0, 1000, 0] });
    const placed = place(set, placement);
    expect([...placed.positions]).toEqual([1, 2, 3, 1, 3, 3, 0, 2, 3]);
    expect([...set.positions]).toEqual([0, 0, 0, 1000, 0, 0, 0, 1000, 0]);
    expect(placed.parts).toBe(set.parts);
    // Seen from above (up is kept) the corners still run counter-clockwise.
    expect(cross([0, 1, 0], [-1, 0, 0])[2]).toBe(1);
  });
});
