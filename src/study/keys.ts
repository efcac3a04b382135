import { type Dimension, dimensions, expectedQuantity } from "./quantity.js";

/** One key of the study file. Schema, messages and the key table of the documentation are made from this. */
export interface StudyKey {
  /** Path in the file; `*` stands for a name of the user's own. */
  key: string;
  title: string;
  /** One sentence. */
  description: string;
  /** What a message says was expected, such as `a speed such as "30 m/s"`. */
  expects: string;
  /** What is taken when the key is missing, as it would be written; undefined: the key is required or simply absent. */
  default?: string | number | boolean;
  required?: true;
  /** SI unit of a bare number; "" for a plain number, undefined for no quantity. */
  unit?: string;
  /** A quantity, and the range it must lie in, SI, both ends included. */
  quantity?: { dimension: Dimension; min: number; max: number; why: string; whole?: true };
  /** The words that are possible. */
  choices?: readonly (string | number | boolean)[];
  /** The values of `choices` are all that this version computes of something that has more. */
  single?: true;
}

interface Given extends Omit<StudyKey, "expects" | "unit"> {
  expects?: string;
}

const keys: Given[] = [
  {
    key: "study",
    title: "Name",
    description: "Name of the study, for reports and job names.",
    expects: "a name of letters, digits, blanks and - _ . +",
    required: true,
  },
  {
    key: "question",
    title: "Question",
    description: "The one question that the study is to answer; printed on the report.",
    expects: "a text",
  },
  { key: "air", title: "Air", description: "State of the oncoming air.", expects: "temperature, pressure and humidity" },
  {
    key: "air.temperature",
    title: "Air temperature",
    description: "Temperature of the oncoming air.",
    default: "15 degC",
    quantity: { dimension: "temperature", min: 223.15, max: 333.15, why: "-50 to 60 degC" },
  },
  {
    key: "air.pressure",
    title: "Air pressure",
    description: "Static pressure of the oncoming air, at the place and not reduced to sea level.",
    default: "1013.25 hPa",
    quantity: { dimension: "pressure", min: 30_000, max: 200_000, why: "300 to 2000 hPa" },
  },
  {
    key: "air.humidity",
    title: "Relative humidity",
    description: "Relative humidity of the oncoming air.",
    default: "0 %",
    quantity: { dimension: "ratio", min: 0, max: 1, why: "0 to 100 %" },
  },
  {
    key: "speed",
    title: "Speed",
    description: "Speed over the ground in still air, one or a list; every variant is computed at each.",
    required: true,
    quantity: { dimension: "speed", min: 1, max: 100, why: "1 to 100 m/s: beyond, air does not flow as if it were incompressible" },
  },
  {
    key: "yaw",
    title: "Yaw",
    description: "Angle of the oncoming air to the direction of travel; this version computes none but 0.",
    default: "0 deg",
    choices: ["0 deg", 0],
    single: true,
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
    description: "The variant that the others are compared with, and whose reference area all share; the first unless given.",
    expects: "the name of one of the variants",
  },
  {
    key: "variants",
    title: "Variants",
    description: "The versions of the body, each under a name of its own.",
    expects: "variants by name, each with its files",
    required: true,
  },
  { key: "variants.*", title: "Variant", description: "One version of the body.", expects: "a list of files under the key files" },
  {
    key: "variants.*.files",
    title: "Files",
    description: "Surface files that together make the body; relative paths start at the study file.",
    expects: "a list of paths such as [geometry/body.stl, geometry/wheels.stl]",
    required: true,
  },
  {
    key: "body",
    title: "Body",
    description: "How the numbers in the files are to be understood.",
    expects: "unit, travel, up and so on",
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
    choices: ["+x", "-x", "+y", "-y", "+z", "-z"],
  },
  {
    key: "body.up",
    title: "Up",
    description: "Direction upwards in the axes of the files.",
    default: "+z",
    choices: ["+x", "-x", "+y", "-y", "+z", "-z"],
  },
  {
    key: "body.wheelbase",
    title: "Wheelbase",
    description: "Distance of the axles: auto takes it from the wheels of the baseline, none says that there are no axles.",
    default: "auto",
    expects: 'auto, none or a length such as "2.7 m"',
    quantity: { dimension: "length", min: 0.01, max: 30, why: "0.01 to 30 m" },
  },
  {
    key: "body.reference-area",
    title: "Reference area",
    description:
      "Area that coefficients refer to, of the whole vehicle: auto takes the frontal area of the baseline for all variants.",
    default: "auto",
    expects: 'auto or an area such as "2.1 m2"',
    quantity: { dimension: "area", min: 1e-4, max: 100, why: "0.0001 to 100 m2" },
  },
  {
    key: "parts",
    title: "Parts",
    description: "Rules about parts, each under a name of its own.",
    expects: "rules by name, each with match",
  },
  {
    key: "parts.*",
    title: "Rule",
    description: "A rule about all parts whose name matches; the first rule that matches a part holds.",
    expects: "match and rotating",
  },
  {
    key: "parts.*.match",
    title: "Match",
    description: "Pattern over part names, or a list of patterns; * stands for any run of characters.",
    expects: 'a pattern such as "wheel-*", or a list of them',
    required: true,
  },
  {
    key: "parts.*.rotating",
    title: "Rotating",
    description: "Whether the parts turn with the road, as wheels do.",
    default: false,
    choices: [true, false],
  },
  { key: "mesh", title: "Mesh", description: "What the mesh is to be like.", expects: "cells, half, y-plus and so on" },
  {
    key: "mesh.cells",
    title: "Cells",
    description:
      "Number of cells aimed at, of what is computed (a half model has half the cells of a whole one at the same fineness).",
    default: "1.5 million",
    quantity: { dimension: "number", min: 5000, max: 500e6, why: "5 thousand to 500 million" },
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
    description:
      "Distance of the wall cells' centres from the wall aimed at, in wall units; the walls are modelled by wall functions.",
    default: 50,
    quantity: { dimension: "number", min: 30, max: 300, why: "30 to 300, where wall functions hold" },
  },
  {
    key: "mesh.layers",
    title: "Layers",
    description: "Layers of flat cells on the body.",
    default: 3,
    quantity: { dimension: "number", min: 0, max: 20, why: "0 to 20", whole: true },
  },
  {
    key: "mesh.levels",
    title: "Levels",
    description: "Meshes of different fineness per case; this version computes one.",
    default: 1,
    choices: [1],
    single: true,
  },
  {
    key: "solver",
    title: "Solver",
    description: "How the flow is computed.",
    expects: "turbulence, mode, start and most-iterations",
  },
  {
    key: "solver.turbulence",
    title: "Turbulence",
    description: "Turbulence model.",
    default: "k-omega-SST",
    choices: ["k-omega-SST"],
    single: true,
  },
  {
    key: "solver.mode",
    title: "Mode",
    description: "Steady flow or flow in time.",
    default: "steady",
    choices: ["steady"],
    single: true,
  },
  {
    key: "solver.start",
    title: "Start",
    description: "What the flow starts from; cold is uniform flow.",
    default: "cold",
    choices: ["cold"],
    single: true,
  },
  {
    key: "solver.most-iterations",
    title: "Most iterations",
    description: "Iterations after which a case that has not settled is stopped.",
    default: 3000,
    quantity: { dimension: "number", min: 10, max: 1_000_000, why: "10 to 1 million", whole: true },
  },
  { key: "stop", title: "Stop", description: "When a history counts as settled.", expects: "drag, lift and confidence" },
  {
    key: "stop.drag",
    title: "Drag",
    description: "Half-width to which the mean drag coefficient is to be known; 1 count is 0.001.",
    default: "1 count",
    quantity: { dimension: "coefficient", min: 1e-5, max: 0.1, why: "0.01 to 100 counts (1 count is 0.001)" },
  },
  {
    key: "stop.lift",
    title: "Lift",
    description: "Half-width to which the mean lift coefficient is to be known; 1 count is 0.001.",
    default: "3 counts",
    quantity: { dimension: "coefficient", min: 1e-5, max: 0.1, why: "0.01 to 100 counts (1 count is 0.001)" },
  },
  {
    key: "stop.confidence",
    title: "Confidence",
    description: "Confidence of the half-widths.",
    default: "95 %",
    quantity: { dimension: "ratio", min: 0.5, max: 0.999, why: "50 to 99.9 %" },
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

const oneOf = (choices: readonly (string | number | boolean)[]): string =>
  choices.length === 1 ? String(choices[0]) : `${choices.slice(0, -1).join(", ")} or ${choices.at(-1)}`;

/** All keys of the study file, in the order in which they are documented. */
export const studyKeys: readonly StudyKey[] = keys.map((entry) => ({
  ...entry,
  expects: entry.expects ?? (entry.quantity ? expectedQuantity(entry.quantity.dimension) : oneOf(entry.choices ?? [])),
  ...(entry.quantity ? { unit: dimensions[entry.quantity.dimension].unit } : {}),
}));

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

/** Keys that a later version may compute. They are refused with a message of their own. */
export const notComputed: ReadonlyMap<string, string> = new Map([
  ["zones", "zones are not computed by this version"],
  ["air-boxes", "air boxes are not computed by this version"],
]);
