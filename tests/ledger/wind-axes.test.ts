import { describe, expect, it } from "vitest";
import { onsetFlow } from "../../src/flow/onset.js";
import type { PartSeries } from "../../src/ledger/part-series.js";
import { windAxes } from "../../src/ledger/wind-axes.js";

const series = (cd: number[], cs: number[] | null): PartSeries => ({
  name: "whole",
  patches: null,
  time: Float64Array.from(cd, (_, row) => row),
  cd: Float64Array.from(cd),
  cl: new Float64Array(cd.length),
  cs: cs && Float64Array.from(cs),
  cm: null,
  cdPressure: null,
  cdFriction: null,
});

describe("wind axes", () => {
  it("are the projections on the air's direction and to its right, row by row", () => {
    const yaw = 0.1;
    const { along, across } = onsetFlow({ speed: 30, yaw });
    const found = windAxes(series([0.3, 0.31], [-0.2, 0.05]), yaw);
    [
      [0.3, -0.2],
      [0.31, 0.05],
    ].forEach(([cd, cs], row) => {
      expect(found?.drag[row]).toBeCloseTo(cd * along[0] + cs * along[1], 15);
      expect(found?.side[row]).toBeCloseTo(cd * across[0] + cs * across[1], 15);
    });
  });

  // The rotation of the AutoCFD workshop's Windsor case, into the vehicle's frame at psi = -2.5 deg: fx' = c fx + s fy, fy' = -s fx + c fy.
  it("turn back into the vehicle's with the workshop's formula at the opposite angle", () => {
    const yaw = (2.5 * Math.PI) / 180;
    const wind = windAxes(series([0.33], [0.17]), yaw);
    const [c, s] = [Math.cos(-yaw), Math.sin(-yaw)];
    const [fx, fy] = [wind?.drag[0] ?? 0, wind?.side[0] ?? 0];
    expect(c * fx + s * fy).toBeCloseTo(0.33, 15);
    expect(-s * fx + c * fy).toBeCloseTo(0.17, 15);
  });

  it("are not given at zero yaw, nor without a side force", () => {
    expect(windAxes(series([0.3], [0.1]), 0)).toBeNull();
    expect(windAxes(series([0.3], null), 0.1)).toBeNull();
  });
});
