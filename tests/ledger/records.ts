import type { RunCard } from "../../src/case/run-card.js";
import type { CaseRecord } from "../../src/ledger/case-record.js";
import type { Reference } from "../../src/ledger/ledger.js";
import type { PartSeries } from "../../src/ledger/part-series.js";
import { autoregressive, MinimalStandard } from "../helpers/random.js";

/** Rows of one value. */
export const constant = (value: number, rows = 200): Float64Array => new Float64Array(rows).fill(value);

/** A mean with correlated noise of the given standard deviation: AR(1). */
export function noisy(seed: number, mean: number, deviation: number, rows = 1000, phi = 0.7): Float64Array {
  const random = new MinimalStandard(seed);
  for (let draw = 0; draw < 20; draw++) random.next();
  const unit = deviation * Math.sqrt(1 - phi * phi);
  return autoregressive(random, rows, phi).map((value) => mean + unit * value);
}

/** A part or whole with a given drag and lift; what is not given is not recorded. */
export function series(name: string, cd: Float64Array, cl: Float64Array, more: Partial<PartSeries> = {}): PartSeries {
  return {
    name,
    patches: null,
    time: Float64Array.from(cd.keys(), (row) => row + 1),
    cd,
    cl,
    cs: null,
    cm: null,
    cdPressure: null,
    cdFriction: null,
    ...more,
  };
}

export const reference: Reference = {
  area: 2.1,
  length: 2.7,
  centre: [0, 0, 0],
  speed: 30,
  density: 1.225,
  symmetryFactor: 1,
  wheelbase: 2.7,
  sources: {},
};

/** A record of a case made elsewhere, unless a card is given. */
export function record(whole: PartSeries, parts: PartSeries[] = [], more: Partial<CaseRecord> = {}): CaseRecord {
  return {
    path: "case",
    variant: "case",
    condition: "",
    card: null,
    reference,
    whole,
    parts,
    tableCd: null,
    printedDigits: 12,
    oblique: false,
    segments: [],
    findings: [],
    ...more,
  };
}

/** A run card as the case room writes it, for a box of a car. */
export function runCard(more: Partial<RunCard> = {}): RunCard {
  return {
    schema: "dragledger/run-card/1",
    tool: { name: "dragledger", version: "0.1.0" },
    study: { name: "van", question: null, baseline: "plain" },
    variant: "plain",
    condition: { name: "30ms", speed: 30, yaw: 0, ground: "moving" },
    reference: { area: 2.1, length: 2.7, centre: [0, 0, 0], speed: 30, density: 1.225, symmetryFactor: 1 },
    wheelbase: 2.7,
    parts: [
      { name: "Body shell", patch: "body-shell" },
      { name: "Wheels", patch: "wheels" },
    ],
    placement: {
      orientation: { unit: "m", travel: "-x", up: "+z" },
      scale: 1,
      rotation: [
        [1, 0, 0],
        [0, 1, 0],
        [0, 0, 1],
      ],
      shift: [0, 0, 0],
    },
    body: { bounds: { min: [-2, -0.8, 0], max: [2.2, 0.8, 1.5] }, frontalArea: 2.1 },
    mesh: {
      domain: { min: [-10, -5, 0], max: [20, 5, 8] },
      baseCell: 1,
      divisions: [30, 10, 8],
      surfaceLevel: 4,
      boxes: [{ name: "near-body", box: { min: [-3, -2, 0], max: [6, 2, 3] }, level: 3 }],
      predictedCells: 40_000,
    },
    stop: { drag: 0.001, lift: 0.003, confidence: 0.95 },
    mostIterations: 1000,
    plan: [{ key: "mesh.layers", value: 3, unit: "", reason: "", source: "" }],
    hashes: { inputs: [], templates: "aa", files: {} },
    ...more,
  };
}

export const codes = (found: { findings: { code: string }[] }): string[] => found.findings.map(({ code }) => code);
