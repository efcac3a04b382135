import { existsSync } from "node:fs";
import { join, resolve } from "node:path";
import { describe, expect, test } from "vitest";
import { buildLedger } from "../../src/ledger/build.js";
import { readCaseRecord } from "../../src/ledger/case-record.js";
import { settleRecord } from "../../src/ledger/converged.js";
import { root } from "../helpers/built.js";
import { codes } from "./records.js";

// Tables of real runs (v1912). Figures were read off the tables by other means where a line says so.

const fixture = (name: string): string => join(root, "tests/fixtures", name);
const shared = resolve(root, "../shared/histories");

describe("the platform's aerofoil, 120 iterations, with force objects in an included file", () => {
  test("flow at 5.7 degrees: the forces turned into wind axes agree with the solver's own coefficients", async () => {
    const record = await readCaseRecord(fixture("cases/airfoil"), { wheelbase: 1, centre: [0.25, 0, 0] });
    expect(record.whole).toMatchObject({ name: "wing", patches: ["walls"] });
    expect(record.parts).toEqual([]);
    expect(record.oblique).toBe(true);
    expect(record.printedDigits).toBe(7);
    expect(record.reference).toMatchObject({ density: 1.2, speed: 25.75, area: 1, length: 1 });
    // Row 1 of coefficient.dat: Cd 3.141514, Cl 6.285509, CmPitch 11.40887 about (0.25 0 0), while moment.dat is about the origin.
    expect(record.whole.cd[0]).toBeCloseTo(3.141514, 5);
    expect(record.whole.cl[0]).toBeCloseTo(6.285509, 5);
    expect(record.whole.cm![0]).toBeCloseTo(11.40887, 4);
    expect(Math.abs(record.whole.cs![0])).toBeLessThan(1e-12);
    const { closing, total } = buildLedger(record);
    expect(closing).toMatchObject({ ok: true });
    // Its drag is a difference of components thirty times as large.
    expect(closing.worst).toBeGreaterThan(1e-8);
    expect(total.clFront!.value).toBeCloseTo(total.cl.value / 2 + total.cm!.value, 10);
  });
});

describe("the platform's motorcycle on a mesh of six thousand cells, 80 iterations", () => {
  test("parts by patterns and groups, a part on another area, a misspelt one, and what is left", async () => {
    const record = await readCaseRecord(fixture("cases/motorcycle"));
    expect(record.whole.name).toBe("bikeForces");
    expect(record.whole.patches!.length).toBeGreaterThan(50);
    expect(record.parts.map(({ name, patches }) => [name, patches!.length > 0])).toEqual([
      ["misspelt", false],
      ["rider", true],
      ["wheels", true],
      ["rest", true],
    ]);
    const all = record.parts.flatMap(({ patches }) => patches!);
    expect([...all].sort()).toEqual([...record.whole.patches!].sort());
    // Last row of rider/coefficient.dat: Cd 0.2880338 on 0.375 m², half of it on 0.75 m².
    expect(record.parts[1].cd[79]).toBeCloseTo(0.2880338 / 2, 10);
    expect(record.reference).toMatchObject({ area: 0.75, length: 1.42, density: 1, speed: 20 });
    const ledger = buildLedger(record);
    expect(ledger.closing.ok).toBe(true);
    expect(codes(ledger)).toEqual([
      "references-differ",
      "rest-not-recorded",
      "example-reference",
      "zero-forces",
      "not-settled",
      "not-settled",
      "density-one",
      "not-given",
    ]);
    expect(settleRecord(record).verdict).not.toBe("settled");
  });
});

describe("recorded fixtures of the history room", () => {
  test("micro: the whole by its own name beside two of its parts; forces and coefficients give the density", async () => {
    const record = await readCaseRecord(fixture("histories/micro"));
    expect(record.reference).toMatchObject({ density: 1, area: 0.056016, speed: 60 });
    expect(record.parts.map(({ name }) => name)).toEqual(["part_base", "part_nose", "rest"]);
    expect(record.whole.cdPressure).not.toBeNull();
    expect(buildLedger(record).closing.ok).toBe(true);
  });

  test("M25: a limit cycle is averaged over whole periods", async () => {
    const record = await readCaseRecord(fixture("histories/M25"));
    const { total, window } = buildLedger(record);
    // The last 292 rows of the table, twenty periods of 14.6, have the plain mean 0.29008.
    expect(total.cd.value).toBeCloseTo(0.29008, 4);
    expect(total.cd.halfWidth).toBeLessThan(0.001);
    expect(window.rows).toBeGreaterThan(100);
    expect(settleRecord(record, { drag: 0.001, lift: 0.003 }).verdict).toMatch(/settled|oscillating/);
  });

  test("diverged: no half-width, and it does not close", async () => {
    const record = await readCaseRecord(fixture("histories/diverged"));
    expect(record.whole.name).not.toBe("nothing");
    const ledger = buildLedger(record);
    expect(ledger.total.cd.halfWidth).toBeNull();
    expect(ledger.findings.some(({ code }) => code === "zero-forces")).toBe(true);
    expect(settleRecord(record).verdict).toBe("diverged");
  });
});

describe("the recorded run of the sample study", () => {
  test.each(["open-bed", "covered-bed", "tailgate-down"])(
    "%s: half model, closes to 1e-9, axles from the run card",
    async (variant) => {
      const record = await readCaseRecord(join(root, "sample-geometry/recorded", `${variant}-30ms`));
      const ledger = buildLedger(record);
      expect(ledger.variant).toBe(variant);
      expect(ledger.reference.symmetryFactor).toBe(2);
      expect(ledger.closing.ok).toBe(true);
      expect(ledger.closing.worst).toBeLessThan(1e-9);
      expect(ledger.recorded).toContain("not computed on this machine");
      expect(ledger.total.clFront!.value + ledger.total.clRear!.value).toBeCloseTo(ledger.total.cl.value, 10);
      const sum = ledger.parts.reduce((all, part) => all + part.cd.value, 0);
      expect(sum).toBeCloseTo(ledger.total.cd.value, 8);
      expect(codes(ledger)).not.toContain("reference-changed");
      expect(codes(ledger)).not.toContain("area-of-half");
    },
  );
});

describe.skipIf(!existsSync(shared))("the shared histories, where they stand beside the checkout", () => {
  const read = (name: string, options = {}) => readCaseRecord(join(shared, name), options);

  test.each(["M25", "M35", "fullT", "micro", "tiny35", "tiny-SIMPLE"])(
    "%s: six parts add up to the whole in every row",
    async (name) => {
      const record = await read(name);
      expect(record.parts.map((part) => part.name)).toEqual([
        "part_base",
        "part_nose",
        "part_roof",
        "part_sides",
        "part_slant",
        "part_underbody",
      ]);
      expect(record.printedDigits).toBe(9);
      const ledger = buildLedger(record);
      expect(ledger.closing.ok).toBe(true);
      expect(ledger.closing.worst).toBeLessThan(1e-8);
      expect(ledger.reference.density).toBe(1);
    },
  );

  test("mbike: three parts of sixty-seven, and the rest", async () => {
    const ledger = buildLedger(await read("mbike"));
    expect(ledger.parts.map(({ name }) => name)).toEqual(["part0", "part1", "part2", "rest"]);
    expect(ledger.parts.reduce((sum, { cd }) => sum + cd.value, 0)).toBeCloseTo(ledger.total.cd.value, 10);
    expect(codes(ledger)).toContain("example-reference");
    expect(codes(ledger).filter((code) => code === "example-reference")).toHaveLength(1);
  });

  test("M25 as the half model it is: the same drag on the area of the whole, and axles on a wheelbase", async () => {
    const [plain, half] = [
      await read("M25"),
      await read("M25", { half: true, area: 0.112032, wheelbase: 0.6375, centre: [0.522, 0, 0] }),
    ];
    const [one, other] = [buildLedger(plain), buildLedger(half)];
    expect(other.total.cd.value).toBeCloseTo(one.total.cd.value, 9);
    expect(other.total.drag!.value).toBeCloseTo(2 * one.total.drag!.value, 6);
    expect([one.total.clFront, other.total.cs]).toEqual([null, null]);
    expect(other.total.clFront!.value).toBeCloseTo(other.total.cl.value / 2 + (other.total.cm!.value * 1.044) / 0.6375, 9);
  });
});
