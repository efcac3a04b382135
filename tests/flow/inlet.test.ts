import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { inletTurbulence } from "../../src/flow/inlet.js";

const nu = 1.5e-5;

describe("turbulence of the oncoming air", () => {
  test("by default 0.5 % and ten times the viscosity: k 0.135 m²/s² and omega 900 1/s at 60 m/s", () => {
    // By hand: 1.5 (60 * 0.005)² = 0.135; 0.135 / (10 * 1.5e-5) = 900.
    const air = inletTurbulence({ speed: 60, kinematicViscosity: nu });
    expect(air.k).toBeCloseTo(0.135, 12);
    expect(air.omega).toBeCloseTo(900, 9);
    expect(air.nut).toBeCloseTo(1.5e-4, 15);
    expect(air.viscosityRatio).toBeCloseTo(10, 12);
    expect(air.intensity).toBeCloseTo(0.005, 15);
    expect(air.lengthScale).toBeCloseTo(Math.sqrt(0.135) / (0.09 ** 0.25 * 900), 15);
    expect(air.atNose).toBeNull();
  });

  test("decays on the way to the nose as the equations of the model integrated step by step", () => {
    fc.assert(
      fc.property(
        fc.double({ min: 10, max: 80, noNaN: true }),
        fc.double({ min: 0.001, max: 0.05, noNaN: true }),
        fc.double({ min: 1, max: 200, noNaN: true }),
        fc.double({ min: 0.1, max: 20, noNaN: true }),
        (speed, intensity, viscosityRatio, distance) => {
          const air = inletTurbulence({ speed, kinematicViscosity: nu, intensity, viscosityRatio, distance });
          // Fourth-order Runge-Kutta in the logarithms, with steps that are short against the decay.
          const decayed = (beta: number, omega: number): number => -beta * omega;
          let logK = Math.log(air.k);
          let logOmega = Math.log(air.omega);
          const total = distance / speed;
          let time = 0;
          while (time < total) {
            const step = Math.min(total - time, 0.2 / Math.exp(logOmega));
            const rate = (w: number): [number, number] => [decayed(0.09, Math.exp(w)), decayed(0.0828, Math.exp(w))];
            const a = rate(logOmega);
            const b = rate(logOmega + (step / 2) * a[1]);
            const c = rate(logOmega + (step / 2) * b[1]);
            const d = rate(logOmega + step * c[1]);
            logK += (step / 6) * (a[0] + 2 * b[0] + 2 * c[0] + d[0]);
            logOmega += (step / 6) * (a[1] + 2 * b[1] + 2 * c[1] + d[1]);
            time += step;
          }
          expect(air.atNose!.k / Math.exp(logK)).toBeCloseTo(1, 6);
          expect(air.atNose!.omega / Math.exp(logOmega)).toBeCloseTo(1, 6);
          expect(air.atNose!.nut).toBeLessThan(air.nut);
          expect(air.atNose!.lengthScale).toBeGreaterThan(air.lengthScale);
        },
      ),
      { seed: 51, numRuns: 40 },
    );
  });

  test("decays in the realizable k-epsilon model as its equations integrated step by step", () => {
    fc.assert(
      fc.property(
        fc.double({ min: 10, max: 80, noNaN: true }),
        fc.double({ min: 0.001, max: 0.05, noNaN: true }),
        fc.double({ min: 1, max: 200, noNaN: true }),
        fc.double({ min: 0.1, max: 20, noNaN: true }),
        (speed, intensity, viscosityRatio, distance) => {
          const given = { speed, kinematicViscosity: nu, intensity, viscosityRatio, distance };
          const air = inletTurbulence({ ...given, model: "realizable-k-epsilon" });
          expect(air.epsilon / ((0.09 * air.k ** 2) / air.nut)).toBeCloseTo(1, 12);
          // dk/dt = -epsilon, d(epsilon)/dt = -1.9 epsilon²/k in logarithms, by Heun's rule; the steps grow with the time scale k/epsilon.
          let [logK, logE] = [Math.log(air.k), Math.log(air.epsilon)];
          const total = distance / speed;
          for (let time = 0; time < total; ) {
            const rate = Math.exp(logE - logK);
            const step = Math.min(total - time, 0.005 / rate);
            const next = Math.exp(logE - logK - 0.9 * step * rate);
            logK -= (step / 2) * (rate + next);
            logE -= (step / 2) * 1.9 * (rate + next);
            time += step;
          }
          expect(air.atNose!.k / Math.exp(logK)).toBeCloseTo(1, 4);
          expect(air.atNose!.epsilon / Math.exp(logE)).toBeCloseTo(1, 4);
        },
      ),
      { seed: 53, numRuns: 40 },
    );
  });

  test("does not change over no distance, and two stretches are as one", () => {
    const given = { speed: 40, kinematicViscosity: nu, intensity: 0.01, viscosityRatio: 30 };
    const { atNose, ...inlet } = inletTurbulence({ ...given, distance: 0 });
    expect(atNose).toEqual(inlet);
    const once = inletTurbulence({ ...given, distance: 5 }).atNose!;
    const half = inletTurbulence({ ...given, distance: 2 }).atNose!;
    const twice = inletTurbulence({ ...given, intensity: half.intensity, viscosityRatio: half.viscosityRatio, distance: 3 })
      .atNose!;
    expect(twice.k / once.k).toBeCloseTo(1, 12);
    expect(twice.omega / once.omega).toBeCloseTo(1, 12);
  });

  test("refuses what is not positive", () => {
    expect(() => inletTurbulence({ speed: 0, kinematicViscosity: nu })).toThrow("speed is 0, must be positive");
    expect(() => inletTurbulence({ speed: 30, kinematicViscosity: nu, intensity: -1 })).toThrow(
      "intensity is -1, must be positive",
    );
    expect(() => inletTurbulence({ speed: 30, kinematicViscosity: nu, distance: -1 })).toThrow(
      "distance is -1, must not be negative",
    );
  });
});
