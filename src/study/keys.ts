import { alternatives } from "./message-text.js";
import { type Dimension, dimensions, expectedQuantity } from "./quantity.js";

/** A quantity, and the range that it must lie in: SI, both ends included, and the same in words. */
export interface QuantityRule {
  dimension: Dimension;
  min: number;
  max: number;
  range: string;
  whole?: true;
}

/** One key of the study file. Schema, messages and the key table of the documentation are made from this. */
export interface StudyKey {
  /** Path in the file; `*` stands for a name of the user's own. */
  key: string;
  title: string;
  /** One sentence. */
  description: string;
  /** What a message says was expected, such as `a speed such as "30 m/s" or "108 km/h"`. */
  expects: string;
  /** What could stand after the key, as it is written. */
  example: string;
  /** What is taken when the key is missing, as it would be written; undefined: the key is required or simply absent. */
  default?: string | number | boolean;
  required?: true;
  /** SI unit of a bare number; "" for a plain number, undefined for no quantity. */
  unit?: string;
  quantity?: QuantityRule;
  /** The values that are possible. */
  choices?: readonly (string | number | boolean)[];
  /** `choices` are all that this version computes of something that has more. */
  single?: true;
}

const counts = { dimension: "coefficient", min: 1e-5, max: 0.1, range: "0.01 to 100 counts (1 count is 0.001)" } as const;
const signedAxes = ["+x", "-x", "+y", "-y", "+z", "-z"] as const;

/** Where `expects` or `example` is missing it follows from the quantity or the choices. */
const entries: (Omit<StudyKey, "expects" | "example" | "unit"> & Partial<Pick<StudyKey, "expects" | "example">>)[] = [
  {
    key: "study",
    title: "Name",
    description: "Name of the study, for reports and job names.",
    expects: "a name of letters, digits, blanks and - _ . +",
    example: "pickup-bed",
    required: true,
  },
  {
    key: "question",
    title: "Question",
    description: "The one question that the study is to answer; printed on the report.",
    expects: "a text",
    example: "Does a bed cover pay?",
  },
  {
    key: "air",
    title: "Air",
    description: "State of the oncoming air.",
    expects: "a block with temperature, pressure and humidity",
    example: "{ temperature: 15 degC }",
  },
  {
    key: "air.temperature",
    title: "Air temperature",
    description: "Temperature of the oncoming air.",
    default: "15 degC",
    quantity: { dimension: "temperature", min: 223.15, max: 333.15, range: "-50 to 60 degC" },
  },
  {
    key: "air.pressure",
    title: "Air pressure",
    description: "Static pressure of the oncoming air, as it is at the place, not reduced to sea level.",
    default: "1013.25 hPa",
    quantity: { dimension: "pressure", min: 30_000, max: 200_000, range: "300 to 2000 hPa" },
  },
  {
    key: "air.humidity",
    title: "Relative humidity",
    description: "Relative humidity of the oncoming air.",
    default: "0 %",
    example: "50 %",
    quantity: { dimension: "ratio", min: 0, max: 1, range: "0 to 100 %" },
  },
  {
    key: "speed",
    title: "Speed",
    description: "Speed of the oncoming air, that of the vehicle in still air, one or a list; every variant is computed at each.",
    required: true,
    quantity: {
      dimension: "speed",
      min: 1,
      max: 100,
      range: "1 to 100 m/s (faster air is compressible, which this version does not compute)",
    },
  },
  {
    key: "yaw",
    title: "Yaw",
    description:
      "Angle of the oncoming air to the vehicle's axis, one or a list, positive when it comes from the left; every variant is computed at each, whole, and the road moves with the air's part along the vehicle.",
    default: "0 deg",
    example: "[0 deg, 5 deg]",
    quantity: { dimension: "angle", min: -Math.PI / 6, max: Math.PI / 6, range: "-30 to 30 deg" },
  },
  {
    key: "ground",
    title: "Ground",
    description:
      "Whether the ground moves with the air, as the road does under a vehicle, or stands still, as in many wind tunnels.",
    default: "moving",
    choices: ["moving", "fixed"],
  },
  {
    key: "baseline",
    title: "Baseline",
    description: "The variant that the others are compared with and whose reference area all share; the first unless given.",
    expects: "the name of one of the variants",
    example: "open-bed",
  },
  {
    key: "variants",
    title: "Variants",
    description: "The versions of the body, each under a name of its own.",
    expects: "variants by name, each with its files",
    example: "{ open-bed: { files: [geometry/body.stl] } }",
    required: true,
  },
  {
    key: "variants.*",
    title: "Variant",
    description: "One version of the body.",
    expects: "a block with the key files",
    example: "{ files: [geometry/body.stl] }",
  },
  {
    key: "variants.*.files",
    title: "Files",
    description: "Surface files that together make the body; relative paths start at the folder of the study file.",
    expects: "a list of paths such as [geometry/body.stl, geometry/wheels.stl]",
    example: "[geometry/body.stl]",
    required: true,
  },
  {
    key: "body",
    title: "Body",
    description: "How the numbers in the files are to be understood.",
    expects: "a block with unit, travel, up, clearance, wheelbase and reference-area",
    example: "{ unit: mm, travel: -x, up: +z }",
  },
  {
    key: "body.unit",
    title: "Unit",
    description: "Unit of the coordinates in the files.",
    default: "m",
    choices: ["m", "mm", "cm", "in", "ft"],
  },
  {
    key: "body.travel",
    title: "Travel",
    description: "Direction in which the vehicle drives, in the axes of the files; the air comes from there.",
    default: "-x",
    choices: signedAxes,
  },
  {
    key: "body.up",
    title: "Up",
    description: "Direction upwards, in the axes of the files.",
    default: "+z",
    choices: signedAxes,
  },
  {
    key: "body.clearance",
    title: "Clearance",
    description:
      "Height of the lowest point of the baseline above the ground: zero for a vehicle on its wheels, more for a model that is held from elsewhere.",
    default: "0 m",
    example: "50 mm",
    quantity: { dimension: "length", min: 0, max: 10, range: "0 to 10 m" },
  },
  {
    key: "body.wheelbase",
    title: "Wheelbase",
    description: "Distance of the axles: auto takes it from the wheels of the baseline, none says that there are no axles.",
    default: "auto",
    expects: 'auto, none or a length such as "2.7 m"',
    quantity: { dimension: "length", min: 0.01, max: 30, range: "0.01 to 30 m" },
  },
  {
    key: "body.reference-area",
    title: "Reference area",
    description:
      "Area that coefficients refer to, of the whole vehicle: auto takes the frontal area of the baseline for all variants.",
    default: "auto",
    expects: 'auto or an area such as "2.1 m2"',
    quantity: { dimension: "area", min: 1e-4, max: 100, range: "0.0001 to 100 m2" },
  },
  {
    key: "parts",
    title: "Parts",
    description: "Rules about parts, each under a name of its own.",
    expects: "rules by name, each with match",
    example: '{ wheels: { match: "wheel-*", rotating: true } }',
  },
  {
    key: "parts.*",
    title: "Rule",
    description: "A rule about all parts whose names match; of several that match a part the first holds.",
    expects: "a block with match and rotating",
    example: '{ match: "wheel-*", rotating: true }',
  },
  {
    key: "parts.*.match",
    title: "Match",
    description: "Pattern over the names of parts, or a list of patterns; * stands for any run of characters, case counts.",
    expects: 'a pattern such as "wheel-*", or a list of them',
    example: '"wheel-*"',
    required: true,
  },
  {
    key: "parts.*.rotating",
    title: "Rotating",
    description: "Whether the parts turn with the road, as wheels do.",
    default: false,
    choices: [true, false],
  },
  {
    key: "mesh",
    title: "Mesh",
    description: "What the mesh is to be like.",
    expects: "a block with cells, half, y-plus, layers and shift",
    example: "{ cells: 1.5 million }",
  },
  {
    key: "mesh.cells",
    title: "Cells",
    description: "Number of cells of the mesh aimed at.",
    default: "1.5 million",
    quantity: { dimension: "number", min: 5000, max: 500e6, range: "5 thousand to 500 million" },
  },
  {
    key: "mesh.half",
    title: "Half model",
    description: "Whether only one side of the plane of symmetry is computed: auto does so when the body is symmetric.",
    default: "auto",
    choices: ["auto", true, false],
  },
  {
    key: "mesh.y-plus",
    title: "y+",
    description: "Distance of the wall cells' centres from the wall aimed at, in wall units; walls are modelled by wall functions.",
    default: 50,
    example: "50",
    quantity: { dimension: "number", min: 30, max: 300, range: "30 to 300 (wall functions hold there)" },
  },
  {
    key: "mesh.layers",
    title: "Layers",
    description: "Layers of flat cells on the body.",
    default: 3,
    example: "3",
    quantity: { dimension: "number", min: 0, max: 20, range: "a whole number from 0 to 20", whole: true },
  },
  {
    key: "mesh.shift",
    title: "Shift",
    description:
      "Share of a background cell by which the grid is moved along the vehicle, the body staying where it is: the same question on another grid as fine.",
    default: "0 %",
    example: "38 %",
    quantity: { dimension: "ratio", min: 0, max: 1, range: "0 to 100 %" },
  },
  {
    key: "mesh.levels",
    title: "Levels",
    description: "Meshes of different fineness for each case; this version computes one.",
    default: 1,
    choices: [1],
    single: true,
  },
  {
    key: "solver",
    title: "Solver",
    description: "How the flow is computed.",
    expects: "a block with turbulence, mode, start, relaxation and most-iterations",
    example: "{ most-iterations: 3000 }",
  },
  {
    key: "solver.turbulence",
    title: "Turbulence",
    description:
      "Turbulence model, with wall functions: k-omega SST, or the realizable k-epsilon model, a second opinion that sees separation later.",
    default: "k-omega-SST",
    choices: ["k-omega-SST", "realizable-k-epsilon"],
  },
  {
    key: "solver.mode",
    title: "Mode",
    description: "Steady flow, or flow in time, which this version does not compute.",
    default: "steady",
    choices: ["steady"],
    single: true,
  },
  {
    key: "solver.start",
    title: "Start",
    description:
      "What the flow starts from: ladder, the flow of the same case on coarser grids, which are solved before; or cold, uniform flow.",
    default: "ladder",
    choices: ["ladder", "cold"],
  },
  {
    key: "solver.relaxation",
    title: "Relaxation",
    description:
      "Share of the velocity's change that an iteration takes: less is slower and steadier, for histories that swing with a period of some 15 iterations.",
    default: 0.9,
    example: "0.7",
    quantity: { dimension: "ratio", min: 0.3, max: 0.95, range: "0.3 to 0.95" },
  },
  {
    key: "solver.most-iterations",
    title: "Most iterations",
    description: "Iterations after which a case that has not settled is stopped.",
    default: 3000,
    example: "3000",
    quantity: { dimension: "number", min: 10, max: 1_000_000, range: "a whole number from 10 to 1 million", whole: true },
  },
  {
    key: "stop",
    title: "Stop",
    description: "When a history counts as settled.",
    expects: "a block with drag, lift and confidence",
    example: "{ drag: 1 count, lift: 3 counts }",
  },
  {
    key: "stop.drag",
    title: "Drag",
    description: "Half-width to which the mean drag coefficient is to be known.",
    default: "1 count",
    quantity: counts,
  },
  {
    key: "stop.lift",
    title: "Lift",
    description: "Half-width to which the mean lift coefficient is to be known.",
    default: "3 counts",
    quantity: counts,
  },
  {
    key: "stop.confidence",
    title: "Confidence",
    description: "Confidence of the half-widths.",
    default: "95 %",
    quantity: { dimension: "ratio", min: 0.5, max: 0.999, range: "50 to 99.9 %" },
  },
  {
    key: "floor",
    title: "Floor",
    description: "Extra runs of the baseline on shifted grids; this version computes none.",
    default: 0,
    choices: [0],
    single: true,
  },
];

/** All keys of the study file, in the order in which they are documented. */
export const studyKeys: readonly StudyKey[] = entries.map((entry) => {
  const dimension = entry.quantity && dimensions[entry.quantity.dimension];
  return {
    ...entry,
    expects: entry.expects ?? (entry.quantity ? expectedQuantity(entry.quantity.dimension) : alternatives(entry.choices ?? [])),
    example: entry.example ?? String(dimension?.examples[0] ?? entry.default),
    ...(dimension ? { unit: dimension.unit } : {}),
  };
});

const byPath = new Map(studyKeys.map((entry) => [entry.key, entry]));

/** The entry of a key by its path in the table, such as `variants.*.files`. */
export function studyKey(key: string): StudyKey {
  const entry = byPath.get(key);
  if (entry === undefined) throw new Error(`no study key ${key}`);
  return entry;
}

/** The entry that a place in a file belongs to; list positions belong to the list. Null when there is none. */
export function keyAt(path: readonly PropertyKey[]): StudyKey | null {
  const words = path.filter((step) => typeof step !== "number").map(String);
  const named = words[0] === "variants" || words[0] === "parts" ? words.map((word, k) => (k === 1 ? "*" : word)) : words;
  return byPath.get(named.join(".")) ?? null;
}

/** Keys of a study that this version does not compute, and how a message says so. */
export const notComputed: ReadonlyMap<string, string> = new Map([
  ["zones", "zones are not computed by this version"],
  ["air-boxes", "air boxes are not computed by this version"],
]);
