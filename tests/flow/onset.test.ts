import { describe, expect, it } from "vitest";
import { onsetFlow } from "../../src/flow/onset.js";

const degrees = (angle: number): number => (angle * Math.PI) / 180;

describe("oncoming air", () => {
  it("comes from straight ahead, exactly, at zero yaw", () => {
    expect(onsetFlow({ speed: 30, yaw: 0 })).toEqual({ velocity: [30, 0, 0], road: 30, along: [1, 0, 0], across: [0, 1, 0] });
  });

  // 40 CFR 1037.528, example of a wind triangle: wind 7.1 mi/h at 47 degrees to a vehicle at 64.9 mi/h gives air at 69.93 mi/h, yaw 4.26 degrees.
  it("has the components of a published wind triangle", () => {
    const { velocity } = onsetFlow({ speed: 69.935, yaw: degrees(4.2581) });
    expect(velocity[0]).toBeCloseTo(64.9 + 7.1 * Math.cos(degrees(47)), 2);
    expect(velocity[1]).toBeCloseTo(7.1 * Math.sin(degrees(47)), 2);
    expect(velocity[2]).toBe(0);
  });

  it("from the left moves to the right, and the road keeps the part along the vehicle", () => {
    const { velocity, road, along, across } = onsetFlow({ speed: 30, yaw: degrees(10) });
    expect(velocity[1]).toBeGreaterThan(0);
    expect(road).toBe(velocity[0]);
    expect(Math.hypot(...velocity)).toBeCloseTo(30, 12);
    expect(along[0] * across[0] + along[1] * across[1]).toBeCloseTo(0, 15);
    // Right-handed with up: along x across = up.
    expect(along[0] * across[1] - along[1] * across[0]).toBeCloseTo(1, 12);
  });
});
