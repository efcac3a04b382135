import { z } from "zod";
import { type StudyKey, studyKey } from "./keys.js";
import { LONGEST_NAME, NAME_PATTERN, nameFault } from "./names.js";
import { expectedQuantity, readQuantity, shownValue } from "./quantity.js";

const about = ({ title, description, quantity }: StudyKey) => ({
  title,
  description: quantity ? `${description} ${quantity.why[0]!.toUpperCase()}${quantity.why.slice(1)}.` : description,
});

type Report = (message: string, place?: number) => void;

/** SI value of a quantity, or NaN after a report. */
function quantityOf(given: string | number, entry: StudyKey, report: Report): number {
  const { dimension, min, max, why, whole } = entry.quantity!;
  const reading = readQuantity(given, dimension);
  if ("fault" in reading) {
    report(`is ${shownValue(given)}, which ${reading.fault}; expected ${entry.expects}`);
    return Number.NaN;
  }
  if (reading.value < min || reading.value > max) {
    const unit = entry.unit ? ` ${entry.unit}` : "";
    const si = String(given) === String(reading.value) ? unit : ` (${Number(reading.value.toPrecision(6))}${unit})`;
    report(`is ${shownValue(given)}${si}; expected ${why}, such as ${shownValue(entry.default ?? example(entry))}`);
    return Number.NaN;
  }
  if (whole && !Number.isInteger(reading.value)) {
    report(`is ${shownValue(given)}; expected a whole number`);
    return Number.NaN;
  }
  return reading.value;
}

const example = (entry: StudyKey): string => expectedQuantity(entry.quantity!.dimension).split('"')[1]!;

const textOrNumber = z.union([z.string(), z.number()]);

function quantity(key: string) {
  const entry = studyKey(key);
  return textOrNumber
    .transform((given, context) => quantityOf(given, entry, (message) => context.addIssue({ code: "custom", message })))
    .prefault(entry.default as string | number)
    .meta(about(entry));
}

/** A quantity, or one of some words. */
function quantityOr<const Word extends string>(key: string, ...words: Word[]) {
  const entry = studyKey(key);
  return textOrNumber
    .transform((given, context): number | Word => {
      const word = words.find((each) => each === given);
      return word ?? quantityOf(given, entry, (message) => context.addIssue({ code: "custom", message }));
    })
    .prefault(entry.default as string)
    .meta(about(entry));
}

function choice<const Choices extends readonly [string, ...string[]]>(key: string, choices: Choices) {
  const entry = studyKey(key);
  return z
    .enum(choices)
    .prefault(entry.default as Choices[number])
    .meta(about(entry));
}

function only<const Value extends string | number>(key: string, value: Value) {
  const entry = studyKey(key);
  return z.literal(value).prefault(value).meta(about(entry));
}

/** One thing or a list of at least one, read as a list. */
const MOST_IN_LIST = 200;

const speeds = z
  .union([textOrNumber, z.array(textOrNumber).min(1).max(MOST_IN_LIST)])
  .transform((given, context) => {
    const entry = studyKey("speed");
    const list = Array.isArray(given) ? given : [given];
    return list.map((each, k) =>
      quantityOf(each, entry, (message) => context.addIssue({ code: "custom", message, path: Array.isArray(given) ? [k] : [] })),
    );
  })
  .meta(about(studyKey("speed")));

const yaw = z
  .union([textOrNumber, z.array(textOrNumber).min(1).max(MOST_IN_LIST)])
  .transform((given, context) => {
    const list = Array.isArray(given) ? given : [given];
    for (const each of list) {
      const reading = readQuantity(each, "angle");
      if ("fault" in reading)
        context.addIssue({
          code: "custom",
          message: `is ${shownValue(given)}, which ${reading.fault}; expected ${expectedQuantity("angle")}`,
        });
      else if (reading.value !== 0) context.addIssue({ code: "custom", message: "not computed", params: { single: true } });
    }
    return 0;
  })
  .prefault("0 deg")
  .meta({ ...about(studyKey("yaw")), enum: ["0 deg", 0] });

const text = (key: string) => z.string().meta(about(studyKey(key)));

const nameSchema = z
  .string()
  .superRefine((name, context) => {
    const fault = nameFault(name);
    if (fault !== null)
      context.addIssue({ code: "custom", message: `is ${shownValue(name)}, which ${fault}`, params: { name: true } });
  })
  .meta({ ...about(studyKey("study")), pattern: NAME_PATTERN, maxLength: LONGEST_NAME });

const ownName = z.string().meta({ pattern: NAME_PATTERN, maxLength: LONGEST_NAME });

const path = z.string().min(1);
const signedAxis = ["+x", "-x", "+y", "-y", "+z", "-z"] as const;

/** The study file as it is written; values are SI after parsing, defaults filled in. Names of variants and rules are checked apart. */
export const studySchema = z
  .strictObject({
    study: nameSchema,
    question: text("question").optional(),
    air: z
      .strictObject({
        temperature: quantity("air.temperature"),
        pressure: quantity("air.pressure"),
        humidity: quantity("air.humidity"),
      })
      .prefault({})
      .meta(about(studyKey("air"))),
    speed: speeds,
    yaw,
    ground: choice("ground", ["moving", "fixed"]),
    baseline: text("baseline").optional(),
    variants: z
      .record(
        ownName,
        z
          .strictObject({
            files: z
              .array(path)
              .min(1)
              .max(MOST_IN_LIST)
              .meta(about(studyKey("variants.*.files"))),
          })
          .meta(about(studyKey("variants.*"))),
      )
      .meta({ ...about(studyKey("variants")), minProperties: 1 }),
    body: z
      .strictObject({
        unit: choice("body.unit", ["m", "mm", "cm", "in", "ft"]),
        travel: choice("body.travel", signedAxis),
        up: choice("body.up", signedAxis),
        wheelbase: quantityOr("body.wheelbase", "auto", "none"),
        "reference-area": quantityOr("body.reference-area", "auto"),
      })
      .prefault({})
      .meta(about(studyKey("body"))),
    parts: z
      .record(
        ownName,
        z
          .strictObject({
            match: z.union([path, z.array(path).min(1).max(MOST_IN_LIST)]).meta(about(studyKey("parts.*.match"))),
            rotating: z
              .boolean()
              .prefault(false)
              .meta(about(studyKey("parts.*.rotating"))),
          })
          .meta(about(studyKey("parts.*"))),
      )
      .prefault({})
      .meta(about(studyKey("parts"))),
    mesh: z
      .strictObject({
        cells: quantity("mesh.cells"),
        half: z
          .union([z.literal("auto"), z.boolean()])
          .prefault("auto")
          .meta(about(studyKey("mesh.half"))),
        "y-plus": quantity("mesh.y-plus"),
        layers: quantity("mesh.layers"),
        levels: only("mesh.levels", 1),
      })
      .prefault({})
      .meta(about(studyKey("mesh"))),
    solver: z
      .strictObject({
        turbulence: only("solver.turbulence", "k-omega-SST"),
        mode: only("solver.mode", "steady"),
        start: only("solver.start", "cold"),
        "most-iterations": quantity("solver.most-iterations"),
      })
      .prefault({})
      .meta(about(studyKey("solver"))),
    stop: z
      .strictObject({ drag: quantity("stop.drag"), lift: quantity("stop.lift"), confidence: quantity("stop.confidence") })
      .prefault({})
      .meta(about(studyKey("stop"))),
    floor: only("floor", 0),
  })
  .meta({
    title: "dragledger study",
    description: "One question: variants of a body, conditions, and how well the answer is wanted.",
  });

export type StudyDocument = z.output<typeof studySchema>;

/** JSON Schema (2020-12) of the study file, for editors and other programs. */
export function studyJsonSchema(): object {
  return z.toJSONSchema(studySchema, { io: "input", target: "draft-2020-12" });
}
