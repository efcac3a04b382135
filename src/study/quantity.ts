import Qty from "js-quantities";
import { inputProblem } from "../errors.js";
import { printable, shownValue } from "./message-text.js";

/** What a quantity can be; the SI unit it is read into and examples for messages. */
export const dimensions = {
  speed: { unit: "m/s", examples: ["30 m/s", "108 km/h", "67 mph"] },
  length: { unit: "m", examples: ["2.7 m", "106 in"] },
  area: { unit: "m2", examples: ["2.1 m2", "22.6 ft2"] },
  temperature: { unit: "K", examples: ["15 degC", "59 degF", "288.15 K"] },
  pressure: { unit: "Pa", examples: ["1013.25 hPa", "101.3 kPa"] },
  density: { unit: "kg/m3", examples: ["1.225 kg/m3"] },
  angle: { unit: "rad", examples: ["5 deg", "0.1 rad"] },
  ratio: { unit: "", examples: ["95 %", "0.95"] },
  coefficient: { unit: "", examples: ["1 count", "0.001"] },
  number: { unit: "", examples: ["1.5 million", "60 thousand", "1500000"] },
} as const satisfies Record<string, { unit: string; examples: readonly string[] }>;

export type Dimension = keyof typeof dimensions;

const nouns: Record<Dimension, string> = {
  speed: "a speed",
  length: "a length",
  area: "an area",
  temperature: "a temperature",
  pressure: "a pressure",
  density: "a density",
  angle: "an angle",
  ratio: "a ratio",
  coefficient: "a coefficient",
  number: "a number",
};

/** Such as `a speed such as "30 m/s" or "108 km/h"`. */
export function expectedQuantity(dimension: Dimension): string {
  const shown = dimensions[dimension].examples.slice(0, 2).map((example) => `"${example}"`);
  return `${nouns[dimension]} such as ${shown.join(" or ")}`;
}

/** Longer texts are no quantity, and no time is spent on them. */
const LONGEST = 60;
const NUMBER = /^([+-]?(?:\d+(?:\.\d*)?|\.\d+)(?:[eE][+-]?\d+)?) ?(.*)$/;
/** Factors with a small exponent, joined by blank, `*` or `/`: nothing else is handed on to be read as a unit. */
const UNIT = /^[A-Za-z]+(?:\^?-?[1-4])?(?: ?[*/ ] ?[A-Za-z]+(?:\^?-?[1-4])?)*$/;

/** Factors to SI by unit, lower case, where a general unit library is inexact, ambiguous or does not know the word. */
const ownFactors: Partial<Record<Dimension, ReadonlyMap<string, number>>> = {
  speed: new Map([
    ["kph", 1 / 3.6],
    ["kmh", 1 / 3.6],
    ["km/hr", 1 / 3.6],
    ["kn", 1852 / 3600],
    ["kt", 1852 / 3600],
    ["knot", 1852 / 3600],
    ["knots", 1852 / 3600],
  ]),
  area: new Map([
    ["sqm", 1],
    ["sqft", 0.3048 ** 2],
    ["sq ft", 0.3048 ** 2],
  ]),
  pressure: new Map([["psi", 4.4482216152605 / 0.0254 ** 2]]),
  angle: new Map([["°", Math.PI / 180]]),
  ratio: new Map([
    ["%", 0.01],
    ["percent", 0.01],
  ]),
  coefficient: new Map([
    ["count", 0.001],
    ["counts", 0.001],
  ]),
  number: new Map([
    ["thousand", 1e3],
    ["million", 1e6],
  ]),
};
const celsius = new Set(["degc", "°c", "c", "deg c", "celsius", "tempc"]);
const fahrenheit = new Set(["degf", "°f", "f", "deg f", "fahrenheit", "tempf"]);
const kelvin = new Set(["k", "kelvin", "tempk"]);

export type QuantityReading = { value: number } | { fault: string };

/**
 * Reads a quantity into SI without throwing; `fault` says what is wrong in words that follow the quoted text.
 * A number, or a text that is one, is SI; an angle must have a unit unless it is zero.
 */
export function readQuantity(given: string | number, dimension: Dimension): QuantityReading {
  if (typeof given === "number") return bare(given, dimension);
  const text = given.normalize("NFKC").replace(/\s+/g, " ").trim();
  if (text === "") return { fault: "is empty" };
  if (text.length > LONGEST) return { fault: `is longer than ${LONGEST} characters` };
  const match = NUMBER.exec(text);
  if (match === null) return { fault: "does not begin with a number" };
  const amount = Number(match[1]);
  const unit = match[2]!;
  if (!Number.isFinite(amount)) return { fault: "is not a finite number" };
  if (/^,\d/.test(unit)) return { fault: "has a comma in its number (the decimal sign is a point, and digits are not grouped)" };
  if (unit === "") return bare(amount, dimension);
  if (dimension === "temperature") return temperature(amount, unit);
  const factor = ownFactors[dimension]?.get(unit.toLowerCase());
  // 3 / 1000 is the double nearest to 0.003, 3 * 0.001 is not.
  if (factor !== undefined) return finite(Number.isInteger(1 / factor) ? amount / (1 / factor) : amount * factor);
  if (dimensions[dimension].unit === "") return { fault: `has the unit "${printable(unit)}"` };
  return general(amount, unit, dimension);
}

const finite = (value: number): QuantityReading => (Number.isFinite(value) ? { value } : { fault: "is not a finite number" });

function bare(amount: number, dimension: Dimension): QuantityReading {
  if (dimension === "angle" && amount !== 0) return { fault: "has no unit" };
  return finite(amount);
}

function temperature(amount: number, unit: string): QuantityReading {
  const name = unit.toLowerCase();
  const value = celsius.has(name)
    ? amount + 273.15
    : fahrenheit.has(name)
      ? ((amount + 459.67) * 5) / 9
      : kelvin.has(name)
        ? amount
        : null;
  if (value === null) return { fault: `has the unit "${printable(unit)}"` };
  return value < 0 ? { fault: "is below absolute zero" } : { value };
}

function general(amount: number, unit: string, dimension: Dimension): QuantityReading {
  if (!UNIT.test(unit)) return { fault: `has the unit "${printable(unit)}"` };
  try {
    const read = Qty(`${amount} ${unit}`);
    const target = Qty(`1 ${dimensions[dimension].unit}`);
    if (!read.isCompatible(target)) return { fault: `is not ${nouns[dimension]}` };
    return finite(read.to(target.units()).scalar);
  } catch {
    return { fault: `has the unit "${printable(unit)}", which is not known` };
  }
}

/**
 * Reads a quantity into SI: m/s, m, m², K, Pa, kg/m³, rad, or a plain number. A bare number is SI.
 *
 * `1 count` is 0.001 of a coefficient; temperatures are absolute (`15 degC` is 288.15).
 *
 * @throws Problem(input) `wrong-quantity`.
 */
export function parseQuantity(text: string | number, dimension: Dimension): number {
  const reading = readQuantity(text, dimension);
  if ("value" in reading) return reading.value;
  throw inputProblem({
    code: "wrong-quantity",
    message: `${shownValue(text)} ${reading.fault}; expected ${expectedQuantity(dimension)}.`,
    remedy: "Write a number and its unit.",
  });
}
