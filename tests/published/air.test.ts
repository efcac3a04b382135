import { describe, expect, test } from "vitest";
import { airProperties, saturationPressure, sutherlandViscosity } from "../../src/flow/air.js";

const within = (value: number, published: number, relative: number): void =>
  expect(Math.abs(value / published - 1), `${value} against ${published}`).toBeLessThanOrEqual(relative);

describe("air against the standard atmosphere", () => {
  // ISO 2533:1975, geopotential height m | T K | p Pa | density kg/m³ | mu Pa s | nu m²/s. Computed from the constants of the standard
  // (g 9.80665, R 287.05287, T0 288.15, p0 101325, -6.5 K/km); the rows of 0, 1000, 2000 and 3000 m were read in secondary sources.
  test.each([
    [-500, 291.4, 107478, 1.28489, 1.80502e-5, 1.4048e-5],
    [0, 288.15, 101325, 1.225, 1.78938e-5, 1.46072e-5],
    [500, 284.9, 95460.8, 1.16727, 1.77366e-5, 1.51949e-5],
    [1000, 281.65, 89874.6, 1.11164, 1.75785e-5, 1.5813e-5],
    [1500, 278.4, 84556.0, 1.05807, 1.74195e-5, 1.64635e-5],
    [2000, 275.15, 79495.2, 1.00649, 1.72596e-5, 1.71483e-5],
    [3000, 268.65, 70108.5, 0.909122, 1.69372e-5, 1.86303e-5],
  ])("at %d m", (_, temperature, pressure, density, dynamicViscosity, kinematicViscosity) => {
    const air = airProperties({ temperature, pressure, humidity: 0 });
    within(air.density, density, 1e-5);
    within(air.dynamicViscosity, dynamicViscosity, 5e-6);
    within(air.kinematicViscosity, kinematicViscosity, 5e-6);
  });

  // Geometric 3000 m: T 268.659198 K, p 70121.144068 Pa, density 0.9092543453 kg/m³, speed of sound 328.583553 m/s; read in a
  // published implementation of the standard atmosphere.
  test("at a geometric height of 3000 m, to nine digits", () => {
    const air = airProperties({ temperature: 268.659198, pressure: 70121.144068, humidity: 0 });
    within(air.density, 0.9092543453, 5e-9);
    within(air.speedOfSound, 328.583553, 5e-9);
  });
});

describe("viscosity", () => {
  // Other published sets of constants of Sutherland's law (from memory): mu0 1.716e-5 at 273.15 K with S 110.4, and at 273.11 K with
  // S 110.56. They agree within 1.5e-4.
  test("agrees with other sets of constants of the same law", () => {
    for (const celsius of [-20, 0, 15, 20, 30, 40]) {
      const t = celsius + 273.15;
      within(sutherlandViscosity(t), 1.716e-5 * (t / 273.15) ** 1.5 * ((273.15 + 110.4) / (t + 110.4)), 2e-4);
      within(sutherlandViscosity(t), 1.716e-5 * (t / 273.11) ** 1.5 * ((273.11 + 110.56) / (t + 110.56)), 2e-4);
    }
  });
});

/**
 * Density of moist air by CIPM-2007 (Picard, Davis, Gläser, Fujii, Metrologia 45 (2008) 149-155), kg/m³: real gas, 400 ppm of carbon
 * dioxide. The coefficients of the compressibility factor are from memory.
 */
function cipm2007(celsius: number, pressure: number, humidity: number): number {
  const t = celsius + 273.15;
  const enhancement = 1.00062 + 3.14e-8 * pressure + 5.6e-7 * celsius ** 2;
  const x = (humidity * enhancement * saturationPressure(t)) / pressure;
  const z =
    1 -
    (pressure / t) *
      (1.58123e-6 -
        2.9331e-8 * celsius +
        1.1043e-10 * celsius ** 2 +
        (5.707e-6 - 2.051e-8 * celsius) * x +
        (1.9898e-4 - 2.376e-6 * celsius) * x ** 2) +
    (pressure / t) ** 2 * (1.83e-11 - 0.765e-8 * x ** 2);
  return ((pressure * 28.96546e-3) / (z * 8.314472 * t)) * (1 - x * (1 - 18.01528 / 28.96546));
}

describe("moist air", () => {
  // 20 °C: 2339.2 Pa; 0 °C: 611.2 Pa; 30 °C: 4246.9 Pa (steam tables, from memory).
  test("saturation pressure against steam tables", () => {
    within(saturationPressure(293.15), 2339.2, 1e-3);
    within(saturationPressure(273.15), 611.2, 1e-3);
    within(saturationPressure(303.15), 4246.9, 1e-3);
  });

  // °C | Pa | humidity | kg/m³ by CIPM-2007, computed independently of this code.
  const examples = [
    [20, 101325, 0.5, 1.1993139],
    [20, 100000, 0.5, 1.1835566],
    [15, 101325, 0, 1.2255213],
    [25, 101325, 0.5, 1.1773154],
    [0, 101325, 0, 1.2930487],
    [30, 95000, 0.8, 1.0772876],
    [23, 101325, 0.5, 1.1860841],
  ] as const;

  test.each(examples)("%d °C, %d Pa, humidity %d", (celsius, pressure, humidity, published) => {
    within(cipm2007(celsius, pressure, humidity), published, 1e-7);
    const air = airProperties({ temperature: celsius + 273.15, pressure, humidity });
    within(air.density, published, 7e-4);
  });

  // OIML R 111, approximation for air density (from memory): (0.34848 p - 0.009 h exp(0.061 t)) / (273.15 + t), p in hPa, h in %.
  test("against the approximation of OIML R 111", () => {
    for (const [celsius, pressure, humidity] of examples) {
      if (celsius < 10) continue;
      const oiml = (0.34848 * (pressure / 100) - 0.009 * 100 * humidity * Math.exp(0.061 * celsius)) / (273.15 + celsius);
      within(airProperties({ temperature: celsius + 273.15, pressure, humidity }).density, oiml, 8e-4);
    }
  });

  test("the difference to the real gas stays under 0.08 % from -10 to 40 °C", () => {
    let worst = 0;
    for (let celsius = -10; celsius <= 40; celsius += 5)
      for (let pressure = 60_000; pressure <= 108_000; pressure += 4000)
        for (let humidity = 0; humidity <= 1; humidity += 0.25) {
          const { density } = airProperties({ temperature: celsius + 273.15, pressure, humidity });
          worst = Math.max(worst, Math.abs(density / cipm2007(celsius, pressure, humidity) - 1));
        }
    expect(worst).toBeLessThan(0.0008);
    expect(worst).toBeGreaterThan(0.0007);
  });

  // SAE J2263 reference air 20 °C, 98.21 kPa; 40 CFR 1066.310 reference density 1.17 kg/m³.
  test("reference air of coast-down tests", () => {
    within(airProperties({ temperature: 293.15, pressure: 98_210, humidity: 0 }).density, 1.17, 3e-3);
  });
});
