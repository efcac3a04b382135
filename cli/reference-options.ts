import { type Command, InvalidArgumentError } from "commander";
import type { Vector3 } from "../src/geometry/vector.js";
import type { ReferenceOverrides } from "../src/ledger/case-record.js";
import { quantity } from "./values.js";

/** What the user knows of a case that its files do not say, or say wrongly. Every reading command takes these. */
export interface ReferenceOptions {
  area?: number;
  length?: number;
  speed?: number;
  density?: number;
  wheelbase?: number;
  centre?: Vector3;
  half?: boolean;
}

export function addReferenceOptions(command: Command): void {
  command
    .option("--area <quantity>", "reference area of the whole vehicle, such as '2.1 m2'", quantity("area"))
    .option("--length <quantity>", "reference length of the moments, such as '2.7 m'", quantity("length"))
    .option("--speed <quantity>", "speed of the free stream, such as '108 km/h'", quantity("speed"))
    .option("--density <quantity>", "air density, such as '1.225 kg/m3'", quantity("density"))
    .option("--wheelbase <quantity>", "wheelbase, for the axle lifts", quantity("length"))
    .option("--centre <x,y,z>", "point on the ground at mid-wheelbase, metres in the case's axes", centre)
    .option("--half", "the case is a half model: forces of the vehicle are twice those of the case");
}

function centre(text: string): Vector3 {
  const numbers = text.split(",").map((word) => (word.trim() === "" ? Number.NaN : Number(word)));
  if (numbers.length !== 3 || numbers.some((x) => !Number.isFinite(x)))
    throw new InvalidArgumentError("Expected three numbers, such as 1.35,0,0.");
  return numbers as Vector3;
}

export function overridesOf(options: ReferenceOptions): ReferenceOverrides {
  const { area, length, speed, density, wheelbase, centre, half } = options;
  return { area, length, speed, density, wheelbase, centre, half };
}
