import { existsSync, readFileSync } from "node:fs";
import { join } from "node:path";
import { describe, expect, test } from "vitest";
import { asciiStl } from "../../../src/geometry/files/write-stl.js";
import { surveyBody } from "../../../src/geometry/survey-body.js";
import { readCaseHistories } from "../../../src/history/read-case.js";
import { ahmedBody } from "./body.js";

const recorded = join(import.meta.dirname, "recorded");

/**
 * Drag coefficients on the frontal area that Ahmed, Ramm and Faltin measured (SAE paper 840300, 1984), as two secondary sources give them,
 * and how near a run is to come.
 */
const published = { 25: { drag: 0.285, within: 0.05 }, 35: { drag: 0.26, within: 0.15 } } as const;

interface Run {
  variant: string;
  start: string;
  shift: number;
  predictedCells: number;
  cells: number;
  state: string;
  iterations: number;
  reference: { area: number; speed: number; density: number };
}

const runs: Record<string, Run> = JSON.parse(readFileSync(join(recorded, "runs.json"), "utf8"));
const slantOf = ({ variant }: Run): 25 | 35 => (variant === "slant-25" ? 25 : 35);

describe("the body", () => {
  test.each([25, 35] as const)("at %d degrees: closed, with the areas that the dimensions give", (slant) => {
    const survey = surveyBody(ahmedBody(slant), { unit: "m", travel: "-x", up: "+z" });
    expect(survey.topology).toMatchObject({ openEdges: 0, nonManifoldEdges: 0, flippedEdges: 0, shells: 1, degenerate: 0 });
    const area = (name: string) => survey.parts.find((part) => part.name === name)!.area;
    const angle = (Math.PI / 180) * slant;
    expect(survey.frontalArea.value).toBeCloseTo(0.389 * 0.288, 6);
    expect(area("slant")).toBeCloseTo(0.222 * 0.389, 6);
    expect(area("base")).toBeCloseTo((0.288 - 0.222 * Math.sin(angle)) * 0.389, 6);
    expect(area("roof")).toBeCloseTo((1.044 - 0.1 - 0.222 * Math.cos(angle)) * 0.389, 6);
    expect(survey.parts.map(({ name }) => name)).toEqual(["nose", "underbody", "sides", "roof", "slant", "base"]);
    expect(survey.bounds.min[2]).toBeCloseTo(0.05, 6);
    expect(survey.extents).toMatchObject({ length: expect.closeTo(1.044, 6), width: expect.closeTo(0.389, 6) });
  });

  test.each([25, 35] as const)("the file of %d degrees is what the generator writes", (slant) => {
    expect(readFileSync(join(import.meta.dirname, `slant-${slant}.stl`))).toEqual(Buffer.from(asciiStl(ahmedBody(slant))));
  });
});

/** Means over the last half of what was recorded, and the parts' share of the drag. */
async function meansOf(name: string, run: Run) {
  const histories = await readCaseHistories(join(recorded, ...name.split("/")));
  const column = (object: string, table: string, label: string): Float64Array =>
    histories.find((each) => each.object === object && each.table === table)!.columns.find((each) => each.name === label)!.values;
  const lastHalf = (values: Float64Array): number => {
    const kept = values.subarray(Math.floor(values.length / 2));
    return kept.reduce((sum, value) => sum + value, 0) / kept.length;
  };
  // Forces of the computed half in newtons, the area that of the whole body.
  const scale = 2 / (0.5 * run.reference.density * run.reference.speed ** 2 * run.reference.area);
  return {
    drag: lastHalf(column("coefficients", "coefficient", "Cd")),
    lift: lastHalf(column("coefficients", "coefficient", "Cl")),
    slant: scale * lastHalf(column("part-slant", "force", "total_x")),
    base: scale * lastHalf(column("part-base", "force", "total_x")),
  };
}

/** Runs that did not meet the target: at 35 degrees the flow stayed on the slant. Not to be shortened without a run that does. */
const missed = new Set(["shifted-1/slant-35-60ms"]);

describe("recorded runs against the published drag", () => {
  test("both slants on the anchor grid and on two shifted ones", () => {
    expect(Object.keys(runs).sort()).toEqual(
      ["anchor", "shifted-1", "shifted-2"].flatMap((grid) => [`${grid}/slant-25-60ms`, `${grid}/slant-35-60ms`]),
    );
    for (const [name, run] of Object.entries(runs)) {
      expect(run.cells, name).toBeLessThan(600_000);
      expect(Math.abs(run.cells / run.predictedCells - 1), name).toBeLessThan(0.25);
      expect(existsSync(join(recorded, ...name.split("/"))), name).toBe(true);
    }
    expect(new Set(Object.values(runs).map(({ shift }) => shift)).size).toBe(3);
  });

  test.each(Object.entries(runs))("%s: drag, and the state of the flow over the slant", async (name, run) => {
    const { drag, lift, slant, base } = await meansOf(name, run);
    const { drag: measured, within } = published[slantOf(run)];
    if (missed.has(name)) {
      expect(lift).toBeGreaterThan(0.15);
      expect(slant).toBeGreaterThan(1.5 * base);
      return;
    }
    expect(Math.abs(drag / measured - 1), `drag ${drag.toFixed(4)} against ${measured}`).toBeLessThan(within);
    // Attached flow at 25 degrees pulls the slant up and back; where it is separated, at 35, slant and base share the drag and lift is low.
    if (slantOf(run) === 25) {
      expect(lift).toBeGreaterThan(0.2);
      expect(slant).toBeGreaterThan(1.15 * base);
    } else {
      expect(lift).toBeLessThan(0.15);
      expect(slant).toBeLessThan(1.5 * base);
    }
  });
});
