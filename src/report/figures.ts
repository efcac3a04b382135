import type { Difference } from "../compare/comparison.js";
import type { Estimate } from "../ledger/ledger.js";
import { fixed, signed, thousands } from "../number-text.js";

/** Numbers as the page prints them: with a true minus sign, an en dash where there is none. */

/** N/kgf, exact by definition (CGPM 1901). */
export const standardGravity = 9.80665;

/** A count is 0.001 of a coefficient. */
export const counts = (coefficient: number): number => 1000 * coefficient;

const typeset = (text: string): string => (text === "-" ? "–" : text.replace(/^-/, "−"));

export const number = (value: number | null | undefined, decimals: number): string => typeset(fixed(value, decimals));

export const signedNumber = (value: number | null | undefined, decimals: number): string => typeset(signed(value, decimals));

/** `± 0.0008`; `± <0.0001` where it rounds to nothing; `± ?` where the rows are too few for an interval. */
export function plusMinus(halfWidth: number | null | undefined, decimals: number): string {
  if (halfWidth === null || halfWidth === undefined || !Number.isFinite(halfWidth)) return "± ?";
  const text = fixed(halfWidth, decimals);
  return halfWidth > 0 && Number(text) === 0 ? `± <${(10 ** -decimals).toFixed(decimals)}` : `± ${text}`;
}

/** Value and half-width of an estimate times a factor, such as 1000 for counts. */
export const scaled = (estimate: Estimate | null, factor: number): Estimate | null =>
  estimate && {
    value: estimate.value * factor,
    halfWidth: estimate.halfWidth === null ? null : estimate.halfWidth * Math.abs(factor),
  };

/** A difference in another unit. */
export function scaledDifference(difference: Difference, factor: number): Difference {
  const times = (value: number | null) => (value === null ? null : value * factor);
  return {
    ...difference,
    a: times(difference.a),
    b: times(difference.b),
    delta: difference.delta * factor,
    halfWidth: difference.halfWidth === null ? null : difference.halfWidth * Math.abs(factor),
    floor: difference.floor === null ? null : difference.floor * Math.abs(factor),
  };
}

/** Figures of a sentence with true minus signs; a hyphen inside a name stays one. */
export const typesetSentence = (text: string): string => text.replaceAll(/(^|[\s(±])-(?=\d)/g, "$1−");

/** A count in groups of three digits that no line end tears apart. */
export const grouped = (count: number): string => typeset(thousands(count).replaceAll(" ", "\u202f"));

/** Up to six significant digits, as a plan prints them. */
export function plain(value: number | string | number[]): string {
  if (Array.isArray(value)) return value.map(plain).join(", ");
  if (typeof value === "string") return value;
  const rounded = Number(value.toPrecision(6));
  const size = Math.abs(rounded);
  if (size !== 0 && (size >= 1e7 || size < 1e-3)) {
    const [digits, exponent] = value.toExponential(3).split("e");
    return typeset(`${Number(digits)}·10${raised(Number(exponent))}`);
  }
  return typeset(Number.isInteger(rounded) && size >= 1e4 ? grouped(rounded) : String(rounded));
}

const raised = (exponent: number): string =>
  [...String(exponent)].map((sign) => "⁻⁰¹²³⁴⁵⁶⁷⁸⁹"["-0123456789".indexOf(sign)]).join("");

/** m2, kg/m3 and the like with raised digits; dimensionless stays empty. */
export const typesetUnit = (unit: string): string =>
  unit.replaceAll(/(?<=[a-z])([23])\b/g, (_, power: string) => (power === "2" ? "²" : "³")).replaceAll("degC", "°C");

export const kilometresPerHour = (metresPerSecond: number): string => `${Number((3.6 * metresPerSecond).toFixed(1))} km/h`;
