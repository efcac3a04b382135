import { describe, expect, test } from "vitest";
import { skinFriction, turbulentThickness, wallSpacing } from "../../src/flow/wall.js";

const within = (value: number, published: number, relative: number): void =>
  expect(Math.abs(value / published - 1), `${value} against ${published}`).toBeLessThanOrEqual(relative);

describe("skin friction of the flat plate", () => {
  // NASA turbulence modelling resource, 2-D zero-pressure-gradient flat plate, Re 5e6 per unit length: friction at x = 0.970084
  // extrapolated over the grids, 2.6970e-3 (SST) and 2.7053e-3 (Spalart-Allmaras); samples of the finest SST grid further down.
  test.each([
    [0.970084, 2.697e-3],
    [0.970084, 2.7053e-3],
    [0.2228, 3.36e-3],
    [0.5833, 2.8979e-3],
    [0.9123, 2.7146e-3],
    [1.4415, 2.545e-3],
    [1.9785, 2.4432e-3],
  ])("at x = %d: %d within 10 %", (x, published) => within(skinFriction(5e6 * x), published, 0.1));

  // Values of the same formula at three Reynolds numbers, and of other correlations (from memory): White 0.455/ln²(0.06 Re),
  // one-fifth law 0.0592 Re^-1/5, one-seventh law 0.026 Re^-1/7.
  test("the formula, and other correlations", () => {
    within(skinFriction(1e6), 0.003745, 2e-4);
    within(skinFriction(5e6), 0.002867, 2e-4);
    within(skinFriction(1e7), 0.002579, 2e-4);
    for (const reynolds of [1e6, 3e6, 1e7, 3e7]) {
      within(skinFriction(reynolds), 0.455 / Math.log(0.06 * reynolds) ** 2, 0.01);
      within(skinFriction(reynolds), 0.026 * reynolds ** (-1 / 7), 0.04);
    }
    within(skinFriction(1e6), 0.0592 * 1e6 ** -0.2, 0.01);
  });
});

describe("the first cell", () => {
  // Air of ISO 2533 at sea level, nu 1.46072e-5 m²/s; y is the distance of the cell centre.
  const nu = 1.46072e-5;
  test("120 km/h over 2.8 m", () => {
    const wall = wallSpacing({ speed: 120 / 3.6, length: 2.8, kinematicViscosity: nu, yPlus: 1 });
    within(wall.reynolds, 6.38954e6, 1e-5);
    within(wall.skinFriction, 0.00276, 2e-4);
    within(wall.frictionVelocity, 1.23832, 1e-5);
    within(wall.centreDistance, 1.1796e-5, 1e-4);
    within(wall.firstCell, 2 * 1.1796e-5, 1e-4);
    within(wall.boundaryLayer, 0.0451, 2e-3);
    within(wallSpacing({ speed: 120 / 3.6, length: 2.8, kinematicViscosity: nu, yPlus: 30 }).centreDistance, 3.5388e-4, 1e-4);
    within(wallSpacing({ speed: 120 / 3.6, length: 2.8, kinematicViscosity: nu, yPlus: 100 }).centreDistance, 1.1796e-3, 1e-4);
  });

  test("140 km/h over 2.78618 m, 40 m/s over 1.044 m", () => {
    const fast = wallSpacing({ speed: 140 / 3.6, length: 2.78618, kinematicViscosity: nu, yPlus: 30 });
    within(fast.reynolds, 7.41767e6, 1e-5);
    within(fast.centreDistance, 3.0682e-4, 1e-4);
    const model = wallSpacing({ speed: 40, length: 1.044, kinematicViscosity: nu, yPlus: 1 });
    within(model.reynolds, 2.85886e6, 1e-5);
    within(model.centreDistance, 9.2232e-6, 1e-4);
  });

  // Measured with the solver (OpenFOAM v1912), Ahmed body, 60 m/s over 1.044 m: cells of 4.0 and 0.996 mm gave a mean y+ of 247-261
  // and 79-82 on the long walls. The estimate is within 25 % of it.
  test.each([
    [0.004, 254],
    [0.000996, 80.5],
  ])("a cell of %d m against the y+ that the solver found, %d", (cell, found) => {
    const wall = wallSpacing({ speed: 60, length: 1.044, kinematicViscosity: 1.5e-5, yPlus: found });
    within(wall.firstCell, cell, 0.25);
  });

  // delta = 0.37 L Re^-1/5 by its own exponent: ten times the Reynolds number, 10^-0.2 of the thickness.
  test("thickness of the boundary layer", () => {
    within(turbulentThickness(4, 1e7), 0.37 * 4 * 10 ** -1.4, 1e-12);
  });
});
