import { InvalidArgumentError } from "commander";
import type { Dimension } from "../src/study/quantity.js";
import { parseQuantity } from "../src/study/quantity.js";

/** Readers of option values; each refuses with what was expected. */
export function positiveInteger(text: string): number {
  if (!/^[0-9]+$/.test(text) || Number(text) < 1) throw new InvalidArgumentError("Expected a whole number of at least 1.");
  return Number(text);
}

/** A quantity such as `2.1 m2`; a bare number is SI. */
export function quantity(dimension: Dimension): (text: string) => number {
  return (text) => {
    try {
      return parseQuantity(text, dimension);
    } catch (error) {
      throw new InvalidArgumentError(error instanceof Error ? error.message : String(error));
    }
  };
}

/** A coefficient or counts of one, such as `0.001` or `1 count`. */
export const coefficient = quantity("coefficient");

/** For an option that may hold several values. */
export function each<T>(parse: (text: string) => T): (text: string, before: T[] | undefined) => T[] {
  return (text, before) => [...(before ?? []), parse(text)];
}
