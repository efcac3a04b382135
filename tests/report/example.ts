import type { PlannedNumber } from "../../src/case/plan.js";
import type { Comparison, Difference } from "../../src/compare/comparison.js";
import { finding } from "../../src/finding.js";
import type { TriangleSet } from "../../src/geometry/triangle-set.js";
import type { Vector3 } from "../../src/geometry/vector.js";
import type { QuantitySettling } from "../../src/history/settling.js";
import type { Entry, Estimate, LedgerRun } from "../../src/ledger/ledger.js";
import type { ReportedRun, ReportInput, RunHistory } from "../../src/report/report-input.js";
import { bodyOf, box, cylinder, shifted, type Triangles, turned } from "../geometry/shapes.js";
import { autoregressive, MinimalStandard } from "../helpers/random.js";

/** A made-up study: three variants of a pickup of boxes and drums, with numbers of a plausible size. */

export const variants = ["open-bed", "covered-bed", "tailgate-down"] as const;
export type ExampleVariant = (typeof variants)[number];

/** Drag and lift in counts by part: open bed, covered bed, tailgate down; null where the variant does not have the part. */
export const partCounts: Record<string, { drag: (number | null)[]; lift: (number | null)[] }> = {
  hood: { drag: [96.4, 96.1, 96.5], lift: [88.2, 88.0, 88.4] },
  cab: { drag: [64.8, 41.3, 66.0], lift: [312.5, 309.9, 312.6] },
  bed: { drag: [48.9, 47.7, 55.3], lift: [61.0, -24.1, 58.8] },
  tailgate: { drag: [18.2, 25.4, 6.1], lift: [2.0, 1.1, -3.9] },
  "bed-cover": { drag: [null, 4.6, null], lift: [null, 78.3, null] },
  underbody: { drag: [44.1, 45.0, 44.3], lift: [-468.0, -481.6, -466.2] },
  "mirror-left": { drag: [11.3, 11.3, 11.3], lift: [2.1, 2.1, 2.1] },
  "mirror-right": { drag: [11.4, 11.4, 11.4], lift: [2.2, 2.2, 2.1] },
  "wheel-front-left": { drag: [27.8, 27.8, 27.7], lift: [-5.0, -5.1, -5.0] },
  "wheel-front-right": { drag: [27.9, 27.9, 27.9], lift: [-5.1, -5.1, -5.2] },
  "wheel-rear-left": { drag: [17.2, 16.4, 17.5], lift: [-13.0, -13.9, -13.1] },
  "wheel-rear-right": { drag: [17.0, 16.3, 17.4], lift: [-12.9, -14.0, -13.2] },
};

export const reference = { area: 2.861, speed: 30, density: 1.225, wheelbase: 3.2 };
const newtonsPerCoefficient = 0.5 * reference.density * reference.speed ** 2 * reference.area;
const rows = 1200;
const first = 310;

/** A wheel that turns about y. */
const wheel = (centre: Vector3): Triangles => shifted(turned(cylinder(0.38, 0.24, 20), [1, 0, 0], Math.PI / 2), centre);

export function exampleBody(variant: ExampleVariant): TriangleSet {
  return bodyOf({
    hood: box([-2.4, -0.92, 0.35], [-1.0, 0.92, 1.05]),
    cab: box([-1.0, -0.9, 0.35], [0.75, 0.9, 1.78]),
    bed: box([0.75, -0.92, 0.35], [2.55, 0.92, 0.95]),
    tailgate: variant === "tailgate-down" ? box([2.55, -0.8, 0.62], [3.0, 0.8, 0.68]) : box([2.55, -0.9, 0.62], [2.62, 0.9, 1.1]),
    ...(variant === "covered-bed" ? { "bed-cover": box([0.75, -0.88, 0.95], [2.6, 0.88, 1.02]) } : {}),
    underbody: box([-2.3, -0.8, 0.22], [2.5, 0.8, 0.35]),
    "mirror-left": box([-0.7, -1.1, 1.1], [-0.55, -0.92, 1.28]),
    "mirror-right": box([-0.7, 0.92, 1.1], [-0.55, 1.1, 1.28]),
    "wheel-front-left": wheel([-1.6, -0.8, 0.38]),
    "wheel-front-right": wheel([-1.6, 0.8, 0.38]),
    "wheel-rear-left": wheel([1.6, -0.8, 0.38]),
    "wheel-rear-right": wheel([1.6, 0.8, 0.38]),
  });
}

const estimate = (value: number, halfWidth: number): Estimate => ({ value, halfWidth });

function entry(drag: number, lift: number, spread: number): Entry {
  const [cd, cl] = [drag / 1000, lift / 1000];
  return {
    cd: estimate(cd, spread),
    cl: estimate(cl, 2 * spread),
    cs: null,
    clFront: estimate(0.4 * cl + 0.02, 1.5 * spread),
    clRear: estimate(0.6 * cl - 0.02, 1.5 * spread),
    cm: estimate(-0.1 * cl + 0.02, spread),
    cdPressure: estimate(0.93 * cd, spread),
    cdFriction: estimate(0.07 * cd, spread / 20),
    cda: estimate(cd * reference.area, spread * reference.area),
    drag: estimate(cd * newtonsPerCoefficient, spread * newtonsPerCoefficient),
    lift: estimate(cl * newtonsPerCoefficient, 2 * spread * newtonsPerCoefficient),
    side: null,
  };
}

const wholeSpread = 0.0006;
const partSpread = 0.0002;

function ledgerOf(variant: ExampleVariant): LedgerRun {
  const column = variants.indexOf(variant);
  const own = Object.entries(partCounts).flatMap(([name, { drag, lift }]) =>
    drag[column] === null ? [] : [{ name, drag: drag[column]!, lift: lift[column]! }],
  );
  const sum = (key: "drag" | "lift") => own.reduce((total, part) => total + part[key], 0);
  return {
    path: `/studies/pickup/cases/${variant}-30ms`,
    variant,
    condition: "30ms",
    reference: {
      ...reference,
      length: reference.wheelbase,
      centre: [0, 0, 0],
      symmetryFactor: 1,
      sources: {
        area: "run card",
        length: "run card",
        centre: "run card",
        speed: "run card",
        density: "run card",
        wheelbase: "run card",
      },
    },
    window: { from: first + 1, to: rows, rows: rows - first, effectiveSamples: 41.3 },
    total: entry(sum("drag"), sum("lift"), wholeSpread),
    parts: own.map(({ name, drag, lift }) => ({ name, ...entry(drag, lift, partSpread) })),
    closing: {
      ok: true,
      worst: 3e-9,
      message: "15 sums over 1200 rows agree within print precision (largest difference 3.0e-9 of the sizes summed)",
    },
    recorded: null,
    findings: [],
  };
}

/** A history that swings into its mean and goes on with correlated noise. */
function historyOf({ total }: LedgerRun, seed: number): RunHistory {
  const noise = autoregressive(new MinimalStandard(seed), rows, 0.9);
  const iterations = Float64Array.from({ length: rows }, (_, row) => row + 1);
  const series = ({ value, halfWidth }: Estimate, swing: number) => ({
    mean: value,
    halfWidth,
    values: iterations.map((n, row) => value + swing * Math.exp(-n / 60) * Math.cos(n / 14) + 0.0006 * noise[row]),
  });
  return { iterations, cd: series(total.cd, 0.9), cl: series(total.cl, -0.7), startUp: first, from: first + 1, to: rows };
}

const settlingOf = ({ total, parts }: LedgerRun): QuantitySettling[] => {
  const one = (name: string, part: string | null, { value, halfWidth }: Estimate): QuantitySettling => ({
    name,
    part,
    verdict: "settled",
    mean: value,
    halfWidth: halfWidth ?? Number.POSITIVE_INFINITY,
    startUp: first,
    firstRow: first,
    rows: rows - first,
    effectiveSamples: 41.3,
    period: null,
    stillNeeded: null,
    standardDeviation: 0.0014,
    findings: [],
  });
  return [one("cd", null, total.cd), one("cl", null, total.cl), ...parts.map(({ name, cd }) => one("cd", name, cd))];
};

const plan: PlannedNumber[] = [
  { key: "half", value: "no", unit: "", reason: "the wheels of one side differ", source: "measured on the body" },
  { key: "air.density", value: 1.225, unit: "kg/m3", reason: "15.0 degC, 1013.25 hPa, 0 % humidity", source: "ISO 2533" },
  { key: "air.kinematicViscosity", value: 1.4607e-5, unit: "m2/s", reason: "Sutherland's law over density", source: "ISO 2533" },
  { key: "flow.speed", value: 30, unit: "m/s", reason: "condition 30ms", source: "study file" },
  { key: "flow.reynolds", value: 10665000, unit: "", reason: "on the overall length", source: "definition" },
  { key: "reference.area", value: 2.861, unit: "m2", reason: "frontal area of the baseline", source: "SAE J1594" },
  { key: "reference.wheelbase", value: 3.2, unit: "m", reason: "distance of the axles", source: "measured on the body" },
  { key: "domain.min", value: [-18.4, -10.2, 0], unit: "m", reason: "3 lengths ahead", source: "measured with the solver" },
  { key: "domain.max", value: [34.7, 10.2, 10.2], unit: "m", reason: "6 lengths behind", source: "measured with the solver" },
  { key: "domain.baseCell", value: 1.02, unit: "m", reason: "near a fifth of the length", source: "measured with the solver" },
  { key: "domain.blockage", value: 0.0137, unit: "", reason: "frontal area over cross-section", source: "common practice" },
  { key: "mesh.surfaceLevel", value: 6, unit: "", reason: "cells of 15.9 mm on the body", source: "cell count formula" },
  { key: "mesh.layers", value: 3, unit: "", reason: "asked for", source: "study file" },
];

function runOf(variant: ExampleVariant, index: number): ReportedRun {
  const ledger = ledgerOf(variant);
  return {
    ledger,
    history: historyOf(ledger, 11 + index),
    settling: settlingOf(ledger),
    plan: [
      ...plan,
      { key: "mesh.predictedCells", value: 1_480_000 + 9000 * index, unit: "", reason: "shells", source: "cell count formula" },
    ],
    condition: { name: "30ms", speed: 30, yaw: 0, ground: "moving" },
    leftOut: [],
    mesh: {
      cells: 1_512_345 + 7000 * index,
      ok: true,
      failures: [],
      maxNonOrthogonality: 64.8,
      maxSkewness: 3.1,
      parts: ledger.parts.map(({ name }, k) => ({
        part: name,
        faces: 9000 - 400 * k,
        layers: name === "bed" && index === 1 ? 2.1 : 2.8 - 0.02 * k,
        layersAsked: 3,
        yPlus: { least: 4 + k, mean: 61 + k, most: 190 + k },
      })),
    },
    origin: {
      path: `cases/${variant}-30ms`,
      writtenBy: "dragledger 0.1.0",
      solver: "simpleFoam, OPENFOAM=1912 patch=200626",
      templates: "9718f03b5b49b6381f84c756c5b5c008f6bf0ebda0623ac012eb8f1bf996468b",
      inputs: [{ path: "geometry/cab.stl", sha256: "ea3f04d2352b5e8d4446299370b817433e25e3cf8ce06abe93c2aa3e7ee4e8a0" }],
      segments: ["whole", "part-cab"].map((object) => ({
        file: `postProcessing/${object}/0/force.dat`,
        from: 1,
        to: rows,
        rows,
        used: rows,
        reason: "start of the run",
      })),
    },
  };
}

function compared(a: LedgerRun, b: LedgerRun): Comparison {
  const difference = (name: string, part: string | null, one: Estimate | null, other: Estimate | null): Difference => {
    const halfWidth = Math.hypot(one?.halfWidth ?? 0, other?.halfWidth ?? 0);
    const delta = (other?.value ?? 0) - (one?.value ?? 0);
    const verdict = Math.abs(delta) <= halfWidth ? "not-resolved" : name === "cd" && part === null ? "resolved" : "direction-only";
    return {
      name,
      part,
      a: one?.value ?? null,
      b: other?.value ?? null,
      delta,
      halfWidth,
      floor: null,
      verdict,
      reason: "as made up",
    };
  };
  const whole = (["cd", "cl", "clFront", "clRear", "cda", "drag", "lift"] as const).map((name) =>
    difference(name, null, a.total[name], b.total[name]),
  );
  const names = [...new Set([...a.parts, ...b.parts].map(({ name }) => name))];
  const parts = names.flatMap((name) => {
    const [one, other] = [a, b].map((run) => run.parts.find((part) => part.name === name));
    return (["cd", "cl"] as const).map((quantity) =>
      difference(quantity, name, one?.[quantity] ?? null, other?.[quantity] ?? null),
    );
  });
  const [cd] = whole as [Difference];
  return {
    a: { path: a.path, variant: a.variant },
    b: { path: b.path, variant: b.variant },
    comparable: true,
    differences: [...whole, ...parts],
    smallestResolvable: cd.halfWidth,
    sentence: `${b.variant} against ${a.variant}: drag ${cd.delta < 0 ? "falls" : "rises"}, ${(1000 * cd.delta).toFixed(1)} ± ${(1000 * cd.halfWidth!).toFixed(1)} counts of Cd (${cd.verdict}: ${cd.reason}).`,
    findings: [
      finding(
        "floor-not-measured",
        "warning",
        "The spread that the mesh alone causes was not measured.",
        "Repeat on a finer mesh.",
      ),
    ],
  };
}

/** The whole study as a report takes it. */
export function exampleInput(): ReportInput {
  const runs = variants.map(runOf);
  const [open, covered, down] = runs.map(({ ledger }) => ledger) as [LedgerRun, LedgerRun, LedgerRun];
  return {
    title: "pickup-bed",
    question: "Does a bed cover pay, and where?",
    runs,
    comparisons: [compared(open, covered), compared(open, down)],
    bodies: variants.map((variant) => ({ variant, set: exampleBody(variant) })),
    toolVersion: "0.1.0",
  };
}

/** The same with every name and text that comes from files replaced by markup that would run if it were not escaped. */
export const markup = "<script>alert(1)</script>\"'><img src=x onerror=alert(2)>";

export function hostileInput(): ReportInput {
  const input = exampleInput();
  const part = (name: string | null) => (name === "cab" ? markup : name);
  const variant = (name: string) => (name === "covered-bed" ? `${markup}&amp;` : name);
  return {
    ...input,
    title: markup,
    question: markup,
    runs: input.runs.map((run) => ({
      ...run,
      ledger: {
        ...run.ledger,
        variant: variant(run.ledger.variant),
        parts: run.ledger.parts.map((each) => ({ ...each, name: part(each.name)! })),
        closing: { ...run.ledger.closing, message: markup },
        recorded: markup,
        findings: [finding("odd", "warning", markup, markup, { part: markup })],
      },
      settling: run.settling.map((each) => ({ ...each, part: part(each.part) })),
      plan: [...run.plan, { key: markup, value: markup, unit: markup, reason: markup, source: markup }],
      mesh: run.mesh && {
        ...run.mesh,
        failures: [markup],
        parts: run.mesh.parts.map((each) => ({ ...each, part: part(each.part)! })),
      },
      origin: {
        ...run.origin,
        path: markup,
        writtenBy: markup,
        solver: markup,
        templates: markup,
        inputs: [{ path: markup, sha256: markup }],
      },
    })),
    comparisons: input.comparisons.map((comparison) => ({
      ...comparison,
      a: { ...comparison.a, variant: variant(comparison.a.variant) },
      b: { ...comparison.b, variant: variant(comparison.b.variant) },
      differences: comparison.differences.map((each) => ({ ...each, part: part(each.part) })),
      sentence: markup,
      findings: [finding("odd", "note", markup, markup, { part: markup })],
    })),
    bodies: input.bodies.map(({ variant: name, set }) => ({
      variant: variant(name),
      set: { ...set, parts: set.parts.map((each) => ({ ...each, name: part(each.name)! })) },
    })),
  };
}
