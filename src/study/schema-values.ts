import { z } from "zod";
import { type StudyKey, studyKey } from "./keys.js";
import { shownValue } from "./message-text.js";
import { nameFault } from "./names.js";
import { readQuantity } from "./quantity.js";

/** Longest list that a study takes anywhere. */
export const MOST_IN_LIST = 1000;

/** What an editor shows about a key. */
export function about(
  key: string,
): { title: string; description: string; examples: string[] } | { title: string; description: string } {
  const { title, description, quantity, example } = studyKey(key);
  if (!quantity) return { title, description };
  return { title, description: `${description} Range: ${quantity.range}.`, examples: [example] };
}

type Report = (message: string) => void;

/** SI value of a quantity; NaN after a report. Reports are worded to follow the name of the key. */
function quantityOf(given: string | number, entry: StudyKey, report: Report): number {
  const { dimension, min, max, range, whole } = entry.quantity!;
  const reading = readQuantity(given, dimension);
  if ("fault" in reading) {
    report(`is ${shownValue(given)}, which ${reading.fault}; expected ${entry.expects}`);
    return Number.NaN;
  }
  const { value } = reading;
  if (value >= min && value <= max && !(whole && !Number.isInteger(value))) return value;
  const unit = entry.unit ? ` ${entry.unit}` : "";
  const bare = String(given).trim() !== "" && Number.isFinite(Number(given));
  const si = bare ? "" : ` (${Number(value.toPrecision(6))}${unit})`;
  const hint = !bare
    ? ""
    : unit
      ? `; a bare number is in${unit}`
      : dimension === "ratio"
        ? "; a bare number is a ratio, 0.5 is 50 %"
        : "";
  report(`is ${shownValue(given)}${si}; expected ${range}${hint}`);
  return Number.NaN;
}

export const textOrNumber = z.union([z.string(), z.number()]);
const oneOrMore = z.union([textOrNumber, z.array(textOrNumber).min(1).max(MOST_IN_LIST)]);

/** A quantity with a default, read into SI. */
export function quantity(key: string) {
  const entry = studyKey(key);
  return textOrNumber
    .transform((given, context) => quantityOf(given, entry, (message) => context.addIssue({ code: "custom", message })))
    .prefault(entry.default as string | number)
    .meta(about(key));
}

/** A quantity, or one of some words, with a default. */
export function quantityOr<const Word extends string>(key: string, ...words: Word[]) {
  const entry = studyKey(key);
  return textOrNumber
    .transform((given, context): number | Word => {
      const word = words.find((each) => each === given);
      return word ?? quantityOf(given, entry, (message) => context.addIssue({ code: "custom", message }));
    })
    .prefault(entry.default as string)
    .meta(about(key));
}

/** A quantity or a list of them, read as a list in SI; required unless the key has a default. */
export function quantities(key: string) {
  const entry = studyKey(key);
  const list = oneOrMore.transform((given, context) => {
    const all = Array.isArray(given) ? given : [given];
    return all.map((each, k) =>
      quantityOf(each, entry, (message) => context.addIssue({ code: "custom", message, path: Array.isArray(given) ? [k] : [] })),
    );
  });
  return (entry.default === undefined ? list : list.prefault(entry.default as string)).meta(about(key));
}

export function choice<const Choices extends readonly [string, ...string[]]>(key: string, choices: Choices) {
  return z
    .enum(choices)
    .prefault(studyKey(key).default as Choices[number])
    .meta(about(key));
}

/** The one value that this version computes. */
export function only<const Value extends string | number>(key: string, value: Value) {
  return z.literal(value).prefault(value).meta(about(key));
}

export const text = (key: string) => z.string().meta(about(key));

/** A name for people that also becomes a folder. */
export function name(key: string) {
  return z
    .string()
    .superRefine((given, context) => {
      const fault = nameFault(given);
      if (fault !== null) context.addIssue({ code: "custom", message: `is ${shownValue(given)}, which ${fault}` });
    })
    .meta(about(key));
}
