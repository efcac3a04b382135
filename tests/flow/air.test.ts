import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { airProperties, saturationPressure, sutherlandViscosity } from "../../src/flow/air.js";

const state = fc.record({
  temperature: fc.double({ min: 233.15, max: 323.15, noNaN: true }),
  pressure: fc.double({ min: 50_000, max: 120_000, noNaN: true }),
  humidity: fc.double({ min: 0, max: 1, noNaN: true }),
});
const seed = { seed: 41, numRuns: 500 };

describe("air", () => {
  test("is lighter when warmer or moister, heavier under pressure; dry air is in proportion to it", () => {
    fc.assert(
      fc.property(state, (air) => {
        const { density } = airProperties(air);
        expect(airProperties({ ...air, temperature: air.temperature + 1 }).density).toBeLessThan(density);
        expect(airProperties({ ...air, pressure: air.pressure * 1.01 }).density).toBeGreaterThan(density);
        expect(airProperties({ ...air, humidity: 0 }).density).toBeGreaterThanOrEqual(density);
        const dry = airProperties({ ...air, humidity: 0 });
        expect(airProperties({ ...air, humidity: 0, pressure: 2 * air.pressure }).density).toBeCloseTo(2 * dry.density, 12);
        expect(dry.vapourPressure).toBe(0);
      }),
      seed,
    );
  });

  test("has a kinematic viscosity that is the dynamic one over density", () => {
    fc.assert(
      fc.property(state, (air) => {
        const { density, dynamicViscosity, kinematicViscosity } = airProperties(air);
        expect(kinematicViscosity * density).toBeCloseTo(dynamicViscosity, 15);
        expect(dynamicViscosity).toBe(sutherlandViscosity(air.temperature));
      }),
      seed,
    );
  });

  test("refuses what is no state of air", () => {
    const air = { temperature: 288.15, pressure: 101325, humidity: 0 };
    expect(() => airProperties({ ...air, temperature: 0 })).toThrow("temperature is 0 K, must be positive");
    expect(() => airProperties({ ...air, pressure: Number.NaN })).toThrow("pressure is NaN Pa, must be positive");
    expect(() => airProperties({ ...air, humidity: 1.1 })).toThrow("humidity is 1.1, must be within 0..1");
    expect(() => airProperties({ temperature: 370, pressure: 50_000, humidity: 1 })).toThrow("exceeds the pressure of 50000 Pa");
  });

  test("boils water at 100 °C under one atmosphere, within the reach of the formula", () => {
    expect(Math.abs(saturationPressure(373.15) / 101325 - 1)).toBeLessThan(0.005);
  });
});
