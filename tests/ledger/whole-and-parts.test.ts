import { describe, expect, test } from "vitest";
import type { PartSeries } from "../../src/ledger/part-series.js";
import { sumOf } from "../../src/ledger/series-sums.js";
import { wholeAndParts } from "../../src/ledger/whole-and-parts.js";
import { codes, constant, noisy, series } from "./records.js";

const rows = 80;

/** An object with drag and lift of its own. */
const object = (name: string, seed: number, patches: string[] | null = null): PartSeries =>
  series(name, noisy(seed, 0.1, 0.01, rows), noisy(seed + 50, 0.05, 0.01, rows), { patches });

const names = ({ parts }: { parts: PartSeries[] }): string[] => parts.map(({ name }) => name);
const [cab, bed, wheels] = [object("cab", 1), object("bed", 2), object("wheels", 3)];
const total = (...parts: PartSeries[]) => sumOf(parts, "total");

/** Every drag of whole and parts adds up. */
function expectSum({ whole, parts }: { whole: PartSeries; parts: PartSeries[] }): void {
  for (const row of [0, 40, 79]) {
    const sum = parts.reduce((all, part) => all + part.cd[row], 0);
    expect(sum).toBeCloseTo(whole.cd[row], 10);
  }
}

describe("which object is the whole", () => {
  test("the one whose values are the sum of all others, whatever it is called and wherever it stands", () => {
    for (const order of [
      [total(cab, bed, wheels), cab, bed, wheels],
      [cab, bed, total(cab, bed, wheels), wheels],
    ]) {
      const odd = order.map((each) => (each.name === "total" ? { ...each, name: "forces1" } : each));
      const found = wholeAndParts(odd);
      expect(found.whole.name).toBe("forces1");
      expect(names(found)).toEqual(["cab", "bed", "wheels"]);
      expect(found.findings).toEqual([]);
    }
  });

  test("a sum that is off by a part in a thousand is none", () => {
    const near = { ...total(cab, bed, wheels), name: "forces1" };
    const off = { ...near, cd: near.cd.map((value) => value * 1.001) };
    expect(codes(wholeAndParts([cab, bed, wheels, off]))).toEqual(["whole-not-recorded"]);
    const liftOff = { ...near, cl: near.cl.map((value) => value + 0.001) };
    expect(codes(wholeAndParts([cab, bed, wheels, liftOff]))).toEqual(["whole-not-recorded"]);
  });

  test("one object alone is the whole", () => {
    expect(wholeAndParts([cab])).toEqual({ whole: cab, parts: [], findings: [] });
  });

  test("only parts: the whole is their sum, and it is said", () => {
    const found = wholeAndParts([cab, bed, wheels]);
    expect(codes(found)).toEqual(["whole-not-recorded"]);
    expect(found.findings[0].message).toBe(
      "None of the 3 force objects is the whole of the others: the whole is taken as their sum, which counts a patch twice if two of them share it.",
    );
    expectSum(found);
  });

  test("a part called body is no whole", () => {
    const body = object("body", 4);
    const found = wholeAndParts([body, wheels]);
    expect(names(found)).toEqual(["body", "wheels"]);
    expectSum(found);
  });

  test("patches tell a whole whose parts are not all recorded; what is left is named with its patches", () => {
    const whole = { ...total(cab, bed, wheels), name: "everything", patches: ["p-cab", "p-bed", "p-wheels", "p-mirror"] };
    const found = wholeAndParts([{ ...cab, patches: ["p-cab"] }, { ...bed, patches: ["p-bed"] }, whole]);
    expect(found.whole.name).toBe("everything");
    expect(names(found)).toEqual(["cab", "bed", "rest"]);
    expect(found.parts[2].patches).toEqual(["p-wheels", "p-mirror"]);
    expectSum(found);
    expect(codes(found)).toEqual(["rest-not-recorded"]);
    expect(found.findings[0].remedy).toBe("Record p-wheels, p-mirror as parts of their own.");
  });

  test("without patches its name tells the whole, with a warning", () => {
    for (const name of ["total", "forcesTotal", "all_walls", "whole-car"]) {
      const found = wholeAndParts([cab, { ...total(cab, bed, wheels), name }, bed]);
      expect(found.whole.name).toBe(name);
      expect(names(found)).toEqual(["cab", "bed", "rest"]);
      expect(found.findings[0].message).toContain("its name says so");
      expectSum(found);
    }
    for (const name of ["totally", "small", "walls"])
      expect(codes(wholeAndParts([cab, { ...total(cab, bed, wheels), name }, bed]))).toEqual(["whole-not-recorded"]);
  });

  test("what a name says does not stand against known patches", () => {
    const named = { ...bed, name: "total", patches: ["p-bed"] };
    expect(codes(wholeAndParts([{ ...cab, patches: ["p-cab"] }, named]))).toEqual(["whole-not-recorded"]);
  });

  test("all patches recorded but the sum differs: no rest is made up, the closing has to say it", () => {
    const whole = { ...total(cab, bed, wheels), patches: ["p-cab", "p-bed"] };
    const found = wholeAndParts([{ ...cab, patches: ["p-cab"] }, { ...bed, patches: ["p-bed"] }, whole]);
    expect(names(found)).toEqual(["cab", "bed"]);
    expect(found.findings).toEqual([]);
  });

  test("of objects that share patches the smaller ones are parts", () => {
    const body = { ...total(cab, bed), name: "body", patches: ["p-cab", "p-bed"] };
    const objects = [body, { ...cab, patches: ["p-cab"] }, { ...bed, patches: ["p-bed"] }, { ...wheels, patches: ["p-wheels"] }];
    const withWhole = wholeAndParts([...objects, { ...total(cab, bed, wheels), patches: ["p-cab", "p-bed", "p-wheels"] }]);
    expect(names(withWhole)).toEqual(["cab", "bed", "wheels"]);
    expect(codes(withWhole)).toEqual(["patches-counted-twice"]);
    expect(withWhole.findings[0].part).toBe("body");
    expectSum(withWhole);
    const without = wholeAndParts(objects);
    expect(names(without)).toEqual(["cab", "bed", "wheels"]);
    expectSum(without);
  });

  test("a rest does not take the name of a part", () => {
    const found = wholeAndParts([{ ...cab, name: "rest" }, total(cab, bed)]);
    expect(names(found)).toEqual(["rest", "rest of the whole"]);
  });
});

describe("two records of the same patches", () => {
  const split = { ...cab, cdPressure: cab.cd.map((x) => 0.9 * x), cdFriction: cab.cd.map((x) => 0.1 * x) };

  test("count once: the split and the moment are both kept, under the first name", () => {
    const moment = constant(0.02, rows);
    const found = wholeAndParts([{ ...cab, name: "cabCoeffs", cm: moment }, { ...split, name: "cabForces" }, bed, total(cab, bed)]);
    expect(names(found)).toEqual(["cabCoeffs", "bed"]);
    expect(found.parts[0].cdPressure).toBe(split.cdPressure);
    expect(found.parts[0].cm).toBe(moment);
    expect(found.findings).toEqual([]);
  });

  test("where patches are known they decide, not the values: mirror images may have the same drag", () => {
    const left = { ...cab, name: "left", patches: ["left"] };
    const right = { ...cab, name: "right", patches: ["right"] };
    expect(names(wholeAndParts([left, right]))).toEqual(["left", "right"]);
    expect(wholeAndParts([left, { ...left, name: "again", cd: bed.cd }]).parts).toEqual([]);
  });

  test("parts that are zero throughout stay apart: each pattern that matches nothing must be said", () => {
    const zero = (name: string, patches: string[] | null) => series(name, constant(0, rows), constant(0, rows), { patches });
    expect(names(wholeAndParts([cab, zero("glass", null), zero("mirror", null), total(cab)]))).toEqual(["cab", "glass", "mirror"]);
    expect(names(wholeAndParts([{ ...cab, patches: ["c"] }, zero("glass", []), zero("mirror", [])]))).toEqual([
      "cab",
      "glass",
      "mirror",
    ]);
  });
});
