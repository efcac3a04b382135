import { metresPer } from "../place.js";
import type { LengthUnit } from "../survey.js";

export interface UnitGuess {
  value: LengthUnit;
  /** In words: what speaks for it. */
  basis: string;
  certain: boolean;
}

/** Length of a road vehicle, from a microcar to a long pickup, metres. Common practice. */
const SHORTEST = 2.5;
const LONGEST = 7;
/** A body this long in metres, whatever the unit, can be a model or a part; outside it no wind tunnel or road would take it. */
export const leastLength = 0.05;
export const mostLength = 30;

const units: LengthUnit[] = ["m", "mm", "cm", "in", "ft"];

/**
 * The unit in which a body of this length (file unit) is as long as a road vehicle. Certain when only one of metres, millimetres,
 * centimetres, inches and feet makes it 2.5 to 7 m long. Otherwise the likeliest, to be confirmed: a model in metres (0.2 to 2.5), a
 * model in millimetres (above 100), anything else in metres.
 */
export function guessUnit(length: number): UnitGuess {
  const text = Number(length.toPrecision(4));
  const fitting = units.filter((unit) => {
    const metres = length * metresPer[unit];
    return metres >= SHORTEST && metres <= LONGEST;
  });
  if (fitting.length === 1)
    return {
      value: fitting[0],
      basis: `the greatest extent, ${text}, is the length of a road vehicle (${SHORTEST} to ${LONGEST} m) in ${fitting[0]} only`,
      certain: true,
    };
  if (fitting.length > 1)
    return {
      value: fitting[0],
      basis: `the greatest extent, ${text}, is the length of a road vehicle in ${fitting.join(" and in ")}; ${fitting[0]} was taken`,
      certain: false,
    };
  const model = (unit: LengthUnit): UnitGuess => ({
    value: unit,
    basis: `the greatest extent, ${text}, is no road vehicle's length in any unit; taken as a model of ${Number((length * metresPer[unit]).toPrecision(3))} m in ${unit}`,
    certain: false,
  });
  if (length >= 0.2 && length < SHORTEST) return model("m");
  if (length > 100 && length < 1000 * SHORTEST) return model("mm");
  return {
    value: "m",
    basis: `the greatest extent, ${text}, is no road vehicle's or model's length in any unit; metres were taken`,
    certain: false,
  };
}
