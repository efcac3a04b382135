import { z } from "zod";
import { LONGEST_NAME, NAME_PATTERN } from "./names.js";
import { about, choice, MOST_IN_LIST, name, only, quantities, quantity, quantityOr, text } from "./schema-values.js";

const path = z.string().min(1);
const signedAxis = ["+x", "-x", "+y", "-y", "+z", "-z"] as const;
const nameRule = { pattern: NAME_PATTERN, maxLength: LONGEST_NAME };
/** Names of variants and rules; what is wrong with one is found where the study is resolved, with the other names at hand. */
const ownName = z.string().meta(nameRule);

const variant = z
  .strictObject({ files: z.array(path).min(1).max(MOST_IN_LIST).meta(about("variants.*.files")) })
  .meta(about("variants.*"));

const rule = z
  .strictObject({
    match: z.union([path, z.array(path).min(1).max(MOST_IN_LIST)]).meta(about("parts.*.match")),
    rotating: z.boolean().prefault(false).meta(about("parts.*.rotating")),
  })
  .meta(about("parts.*"));

/** The study file as it is written; after parsing, values are SI and defaults are filled in. */
export const studySchema = z
  .strictObject({
    study: name("study").meta(nameRule),
    question: text("question").optional(),
    air: z
      .strictObject({
        temperature: quantity("air.temperature"),
        pressure: quantity("air.pressure"),
        humidity: quantity("air.humidity"),
      })
      .prefault({})
      .meta(about("air")),
    speed: quantities("speed"),
    yaw: quantities("yaw"),
    ground: choice("ground", ["moving", "fixed"]),
    baseline: text("baseline").optional(),
    variants: z.record(ownName, variant).meta({ ...about("variants"), minProperties: 1 }),
    body: z
      .strictObject({
        unit: choice("body.unit", ["m", "mm", "cm", "in", "ft"]),
        travel: choice("body.travel", signedAxis),
        up: choice("body.up", signedAxis),
        clearance: quantity("body.clearance"),
        wheelbase: quantityOr("body.wheelbase", "auto", "none"),
        "reference-area": quantityOr("body.reference-area", "auto"),
      })
      .prefault({})
      .meta(about("body")),
    parts: z.record(ownName, rule).prefault({}).meta(about("parts")),
    mesh: z
      .strictObject({
        cells: quantity("mesh.cells"),
        half: z
          .union([z.literal("auto"), z.boolean()])
          .prefault("auto")
          .meta(about("mesh.half")),
        "y-plus": quantity("mesh.y-plus"),
        layers: quantity("mesh.layers"),
        shift: quantity("mesh.shift"),
        levels: only("mesh.levels", 1),
      })
      .prefault({})
      .meta(about("mesh")),
    solver: z
      .strictObject({
        turbulence: choice("solver.turbulence", ["k-omega-SST", "realizable-k-epsilon"]),
        mode: only("solver.mode", "steady"),
        start: choice("solver.start", ["ladder", "cold"]),
        relaxation: quantity("solver.relaxation"),
        "most-iterations": quantity("solver.most-iterations"),
      })
      .prefault({})
      .meta(about("solver")),
    stop: z
      .strictObject({ drag: quantity("stop.drag"), lift: quantity("stop.lift"), confidence: quantity("stop.confidence") })
      .prefault({})
      .meta(about("stop")),
    floor: only("floor", 0),
  })
  .meta({
    title: "dragledger study",
    description: "One question: variants of a body, conditions, and how well the answer is wanted.",
  });

export type StudyDocument = z.output<typeof studySchema>;

/** JSON Schema (2020-12) of the study file, for editors and other programs. */
export function studyJsonSchema(): object {
  return z.toJSONSchema(studySchema, {
    io: "input",
    target: "draft-2020-12",
    // The library leaves out the examples of whatever is transformed, though they are examples of what is written.
    override({ zodSchema, jsonSchema }) {
      const examples = z.globalRegistry.get(zodSchema)?.examples;
      if (Array.isArray(examples)) jsonSchema.examples = examples;
    },
  });
}
