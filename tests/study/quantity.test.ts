import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { type Dimension, dimensions, parseQuantity, readQuantity } from "../../src/study/quantity.js";
import { thrown } from "./thrown.js";

const seed = { seed: 20_240_611 };

describe("quantities", () => {
  // Factors from the definitions: mile 1609.344 m, foot 0.3048 m, nautical mile 1852 m, pound-force 4.4482216152605 N,
  // standard atmosphere 101325 Pa, 0 degC = 273.15 K, degF = 5/9 K.
  test.each<[string, Dimension, number]>([
    ["108 km/h", "speed", 30],
    ["100 km/h", "speed", 100 / 3.6],
    ["100 kph", "speed", 100 / 3.6],
    ["67 mph", "speed", (67 * 1609.344) / 3600],
    ["30 m/s", "speed", 30],
    ["30m/s", "speed", 30],
    ["  30   m/s ", "speed", 30],
    ["3e1 m/s", "speed", 30],
    ["30 m s^-1", "speed", 30],
    ["60 knots", "speed", (60 * 1852) / 3600],
    ["60 kn", "speed", (60 * 1852) / 3600],
    ["98.4 ft/s", "speed", 98.4 * 0.3048],
    ["1.8 m", "length", 1.8],
    ["1800 mm", "length", 1.8],
    [".5 m", "length", 0.5],
    ["106 in", "length", 106 * 0.0254],
    ["9 ft", "length", 9 * 0.3048],
    ["2.1 m2", "area", 2.1],
    ["2.1 m^2", "area", 2.1],
    ["2.1 m²", "area", 2.1],
    ["22.6 ft2", "area", 22.6 * 0.3048 ** 2],
    ["22.6 sqft", "area", 22.6 * 0.3048 ** 2],
    ["15 degC", "temperature", 288.15],
    ["15 °C", "temperature", 288.15],
    ["15℃", "temperature", 288.15],
    ["-40 degC", "temperature", 233.15],
    ["-40 degF", "temperature", 233.15],
    ["59 degF", "temperature", 288.15],
    ["288.15 K", "temperature", 288.15],
    ["1013.25 hPa", "pressure", 101325],
    ["101.325 kPa", "pressure", 101325],
    ["1013.25 mbar", "pressure", 101325],
    ["1 atm", "pressure", 101325],
    ["14.696 psi", "pressure", (14.696 * 4.4482216152605) / 0.0254 ** 2],
    ["1.225 kg/m3", "density", 1.225],
    ["5 deg", "angle", (5 * Math.PI) / 180],
    ["5°", "angle", (5 * Math.PI) / 180],
    ["0.1 rad", "angle", 0.1],
    ["0", "angle", 0],
    ["95 %", "ratio", 0.95],
    ["0.95", "ratio", 0.95],
    ["1 count", "coefficient", 0.001],
    ["3 counts", "coefficient", 0.003],
    ["0.5 counts", "coefficient", 0.0005],
    ["0.001", "coefficient", 0.001],
    ["1.5 million", "number", 1_500_000],
    ["60 thousand", "number", 60_000],
    ["60000", "number", 60_000],
  ])("%s is a %s of %d", (text, dimension, si) => {
    const value = parseQuantity(text, dimension);
    expect(Math.abs(value - si)).toBeLessThanOrEqual(1e-9 * Math.abs(si));
  });

  test("common texts come out exact, so that nothing reads 29.999999999999996", () => {
    expect(parseQuantity("108 km/h", "speed")).toBe(30);
    expect(parseQuantity("108 kph", "speed")).toBe(30);
    expect(parseQuantity("15 degC", "temperature")).toBe(288.15);
    expect(parseQuantity("1013.25 hPa", "pressure")).toBe(101325);
    expect(parseQuantity("95 %", "ratio")).toBe(0.95);
    expect(parseQuantity("3 counts", "coefficient")).toBe(0.003);
    expect(parseQuantity("1800 mm", "length")).toBe(1.8);
    expect(parseQuantity("1.5 million", "number")).toBe(1_500_000);
  });

  test("a bare number is SI, as number and as text", () => {
    for (const dimension of Object.keys(dimensions) as Dimension[]) {
      if (dimension === "angle") continue;
      expect(parseQuantity(2.5, dimension)).toBe(2.5);
      expect(parseQuantity("2.5", dimension)).toBe(2.5);
    }
    expect(readQuantity(2.5, "angle")).toEqual({ fault: "has no unit" });
  });

  test.each<[string, Dimension, string]>([
    ["30 kg", "speed", "is not a speed"],
    ["30 m/s", "length", "is not a length"],
    ["2 m", "area", "is not an area"],
    ["15 degC", "pressure", "is not a pressure"],
    ["15 Pa", "temperature", 'has the unit "Pa"'],
    ["15 degC/m", "temperature", 'has the unit "degC/m"'],
    ["1 count", "ratio", 'has the unit "count"'],
    ["5 %", "coefficient", 'has the unit "%"'],
    ["5 %", "length", 'has the unit "%"'],
    ["6 ft 2 in", "length", 'has the unit "ft 2 in"'],
    ["1 m/0", "length", 'has the unit "m/0"'],
    ["1.2.3 m", "length", 'has the unit ".3 m"'],
    ["1,8 m", "length", "has a comma in its number (the decimal sign is a point, and digits are not grouped)"],
    ["1,500,000", "number", "has a comma in its number (the decimal sign is a point, and digits are not grouped)"],
    ["m", "length", "does not begin with a number"],
    ["auto", "length", "does not begin with a number"],
    ["", "length", "is empty"],
    ["1e999 m", "length", "is not a finite number"],
    ["1e308 million", "number", "is not a finite number"],
    ["1e308 km", "length", "is not a finite number"],
    [`1 ${"m".repeat(80)}`, "length", "is longer than 60 characters"],
    ["1 constructor", "number", 'has the unit "constructor"'],
    ["1 __proto__", "speed", 'has the unit "__proto__"'],
    ["1 toString", "pressure", 'has the unit "toString", which is not known'],
  ])("%j is no %s", (text, dimension, fault) => {
    expect(readQuantity(text, dimension)).toEqual({ fault });
  });

  test("the message names the text, the fault and an example", async () => {
    expect(await thrown(() => parseQuantity("30 kg", "speed"))).toEqual({
      code: "wrong-quantity",
      message: `"30 kg" is not a speed; expected a speed such as "30 m/s" or "108 km/h".`,
      where: null,
      remedy: "Write a number and its unit.",
    });
  });

  test("every example reads as what it is an example of", () => {
    for (const [dimension, { examples }] of Object.entries(dimensions))
      for (const example of examples) expect(readQuantity(example, dimension as Dimension)).toHaveProperty("value");
  });
});

/** Units and what one is in SI; an offset for temperatures. */
const units: Record<Dimension, [string, number, number?][]> = {
  speed: [
    ["m/s", 1],
    ["km/h", 1 / 3.6],
    ["mph", 0.44704],
    ["kn", 1852 / 3600],
    ["ft/s", 0.3048],
  ],
  length: [
    ["m", 1],
    ["mm", 1e-3],
    ["cm", 1e-2],
    ["in", 0.0254],
    ["ft", 0.3048],
    ["km", 1e3],
  ],
  area: [
    ["m2", 1],
    ["cm2", 1e-4],
    ["mm^2", 1e-6],
    ["ft2", 0.3048 ** 2],
    ["in2", 0.0254 ** 2],
  ],
  temperature: [
    ["degC", 1, 273.15],
    ["K", 1, 0],
    ["degF", 5 / 9, (459.67 * 5) / 9],
  ],
  pressure: [
    ["Pa", 1],
    ["hPa", 100],
    ["kPa", 1000],
    ["mbar", 100],
    ["bar", 1e5],
    ["atm", 101325],
  ],
  density: [
    ["kg/m3", 1],
    ["g/cm3", 1000],
  ],
  angle: [
    ["rad", 1],
    ["deg", Math.PI / 180],
  ],
  ratio: [
    ["", 1],
    ["%", 0.01],
  ],
  coefficient: [
    ["", 1],
    ["counts", 0.001],
  ],
  number: [
    ["", 1],
    ["thousand", 1e3],
    ["million", 1e6],
  ],
};

describe("quantities, any", () => {
  const dimension = fc.constantFrom(...(Object.keys(units) as Dimension[]));
  const amount = fc.double({ min: 1e-3, max: 1e6, noNaN: true });

  test("a value written in any unit comes back", () => {
    fc.assert(
      fc.property(dimension, amount, fc.nat(), (kind, value, pick) => {
        const [unit, factor, offset = 0] = units[kind][pick % units[kind].length]!;
        const si = value * factor + offset;
        if (kind === "angle" && unit === "") return;
        const read = parseQuantity(`${value} ${unit}`, kind);
        expect(Math.abs(read - si)).toBeLessThanOrEqual(1e-9 * Math.abs(si));
      }),
      { ...seed, numRuns: 500 },
    );
  });

  test("a quantity of another kind is never taken", () => {
    fc.assert(
      fc.property(dimension, dimension, amount, fc.nat(), (kind, other, value, pick) => {
        const [unit] = units[other][pick % units[other].length]!;
        if (kind === other || unit === "") return;
        expect(readQuantity(`${value} ${unit}`, kind)).toHaveProperty("fault");
      }),
      { ...seed, numRuns: 500 },
    );
  });

  test("any text at all gives a finite value or a fault, without throwing", () => {
    const letters = fc.constantFrom(..."0123456789.,+-eE mskgPahdC%°/*^()[]{}\\'\"\t\n\0²µ");
    const texts = fc.oneof(fc.string(), fc.string({ unit: letters, maxLength: 80 }), fc.string({ unit: "grapheme" }));
    fc.assert(
      fc.property(texts, dimension, (text, kind) => {
        const reading = readQuantity(text, kind);
        if ("value" in reading) expect(Number.isFinite(reading.value)).toBe(true);
        else expect(reading.fault).toMatch(/^(is|has|does) /);
      }),
      { ...seed, numRuns: 3000 },
    );
  });
});
