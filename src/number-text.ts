import type { Estimate } from "./ledger/ledger.js";

/** A number with a fixed count of decimals; a dash where there is none. A minus zero is a zero. */
export function fixed(value: number | null | undefined, decimals: number): string {
  if (value === null || value === undefined || Number.isNaN(value)) return "-";
  if (!Number.isFinite(value)) return value > 0 ? "inf" : "-inf";
  const text = value.toFixed(decimals);
  return Number(text) === 0 ? text.replace("-", "") : text;
}

/** The same with its sign always shown. */
export function signed(value: number | null | undefined, decimals: number): string {
  const text = fixed(value, decimals);
  return text === "-" || text.startsWith("-") || text === "inf" ? text : `+${text}`;
}

/** `0.3012 ± 0.0008`; a question mark where the rows are too few for an interval */
export function estimate(quantity: Estimate | null | undefined, decimals: number): string {
  if (!quantity) return "-";
  return quantity.halfWidth === null
    ? `${fixed(quantity.value, decimals)} ± ?`
    : `${fixed(quantity.value, decimals)} ± ${halfWidthText(quantity.halfWidth, decimals)}`;
}

/** A half-width that is there but rounds to zero is said to be below the last digit. */
export function halfWidthText(halfWidth: number, decimals: number): string {
  const text = fixed(halfWidth, decimals);
  return halfWidth > 0 && Number(text) === 0 ? `<${(10 ** -decimals).toFixed(decimals)}` : text;
}

/** Four significant digits for anything, from 1e-6 to 1e9, without exponent where that stays short. */
export function significant(value: number, digits = 4): string {
  if (!Number.isFinite(value)) return String(value);
  if (value === 0) return "0";
  const size = Math.abs(value);
  if (size >= 1e7 || size < 1e-4) return value.toExponential(digits - 1);
  return String(Number(value.toPrecision(digits)));
}

export const thousands = (count: number): string => count.toLocaleString("en-US").replaceAll(",", " ");

export function duration(seconds: number): string {
  if (seconds < 60) return `${Math.round(seconds)} s`;
  if (seconds < 3600) return `${Math.floor(seconds / 60)} min ${Math.round(seconds % 60)} s`;
  return `${Math.floor(seconds / 3600)} h ${Math.round((seconds % 3600) / 60)} min`;
}

export function bytes(count: number): string {
  for (const [unit, size] of [
    ["GiB", 2 ** 30],
    ["MiB", 2 ** 20],
    ["KiB", 2 ** 10],
  ] as const)
    if (count >= size) return `${(count / size).toFixed(1)} ${unit}`;
  return `${count} B`;
}

/** A path as short as it can be said from the working folder. */
export function shortPath(path: string, from: string): string {
  return path.startsWith(`${from}/`) ? path.slice(from.length + 1) : path;
}
