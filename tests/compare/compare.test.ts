import { join } from "node:path";
import { describe, expect, test } from "vitest";
import { compareRuns } from "../../src/compare/compare.js";
import { compareCases } from "../../src/compare/compare-cases.js";
import type { Comparison } from "../../src/compare/comparison.js";
import { buildLedger } from "../../src/ledger/build.js";
import { type CaseRecord, readCaseRecord } from "../../src/ledger/case-record.js";
import type { PartSeries } from "../../src/ledger/part-series.js";
import { sumOf } from "../../src/ledger/series-sums.js";
import { root } from "../helpers/built.js";
import { codes, constant, noisy, record, reference, runCard, series } from "../ledger/records.js";

const rows = 400;
const whole = (cd: Float64Array, cl: Float64Array, more: Partial<PartSeries> = {}) => series("whole", cd, cl, more);
const variant = (name: string, body: PartSeries, parts: PartSeries[] = [], more: Partial<CaseRecord> = {}): CaseRecord =>
  record(body, parts, { path: `cases/${name}`, variant: name, condition: "30ms", card: runCard({ variant: name }), ...more });
const exact = (name: string, cd: number, cl: number, cm: number) =>
  series(name, constant(cd, rows), constant(cl, rows), { cm: constant(cm, rows), cs: constant(0, rows) });
const find = ({ differences }: Comparison, name: string, part: string | null = null) =>
  differences.find((each) => each.name === name && each.part === part)!;

describe("two variants without noise", () => {
  const parts = (cab: number, cover: number | null) => [
    exact("cab", cab, 0.2, 0.01),
    exact("bed", 0.1, -0.05, 0.02),
    ...(cover === null ? [] : [exact("cover", cover, 0.03, 0.005)]),
  ];
  const [open, covered] = [parts(0.2, null), parts(0.17, 0.01)];
  const a = variant("open", sumOf(open, "whole"), open);
  const b = variant("covered", sumOf(covered, "whole"), covered);
  const comparison = compareRuns(a, b);

  test("planted differences come out for the whole, in every form", () => {
    const newtons = 0.5 * 1.225 * 30 ** 2 * 2.1;
    for (const [name, delta] of [
      ["cd", -0.02],
      ["cl", 0.03],
      ["clFront", 0.015 + 0.005],
      ["clRear", 0.015 - 0.005],
      ["cs", 0],
      ["cm", 0.005],
      ["cda", -0.02 * 2.1],
      ["drag", -0.02 * newtons],
      ["lift", 0.03 * newtons],
    ] as const) {
      const found = find(comparison, name);
      expect(found.delta).toBeCloseTo(delta, 10);
      expect(found.b! - found.a!).toBeCloseTo(delta, 10);
      expect(found.halfWidth).toBe(0);
    }
    expect(comparison.differences.filter(({ part }) => part === null).map(({ name }) => name)).toEqual([
      "cd",
      "cl",
      "clFront",
      "clRear",
      "cs",
      "cm",
      "cda",
      "drag",
      "lift",
    ]);
  });

  test("part by part; a part of one variant only counts as zero in the other, and is shown as such", () => {
    expect(find(comparison, "cd", "cab")).toMatchObject({ a: expect.closeTo(0.2, 12), b: expect.closeTo(0.17, 12) });
    expect(find(comparison, "cd", "cab").delta).toBeCloseTo(-0.03, 12);
    expect(find(comparison, "cd", "bed")).toMatchObject({ delta: 0, verdict: "not-resolved" });
    const cover = find(comparison, "cd", "cover");
    expect(cover).toMatchObject({ a: null, b: 0.01, delta: 0.01 });
    expect(cover.reason).toContain("; the part is missing in A");
    expect(find(compareRuns(b, a), "cl", "cover")).toMatchObject({ a: 0.03, b: null, delta: -0.03 });
    expect(comparison.findings).toContainEqual(
      expect.objectContaining({ code: "part-only-in-one", message: "Only B has cover: the other counts as zero there." }),
    );
    const sum = comparison.differences
      .filter(({ name, part }) => name === "cd" && part !== null)
      .reduce((all, { delta }) => all + delta, 0);
    expect(sum).toBeCloseTo(find(comparison, "cd").delta, 12);
  });

  test("without a measured floor nothing is called resolved, and it is said", () => {
    expect(new Set(comparison.differences.map(({ verdict }) => verdict))).toEqual(new Set(["direction-only", "not-resolved"]));
    expect(comparison.differences.every(({ floor }) => floor === null)).toBe(true);
    expect(codes(comparison)).toContain("floor-not-measured");
    expect(comparison.comparable).toBe(true);
    expect(comparison).toMatchObject({
      a: { path: "cases/open", variant: "open" },
      b: { path: "cases/covered", variant: "covered" },
    });
  });

  test("the other way round every difference turns its sign", () => {
    const back = compareRuns(b, a);
    for (const each of comparison.differences) {
      const other = find(back, each.name, each.part);
      expect(other.delta).toBeCloseTo(-each.delta, 12);
      expect(other.verdict).toBe(each.verdict);
    }
  });

  test("the sentence", () => {
    expect(comparison.sentence).toBe(
      "covered against open: drag falls, -20.0 ± 0.0 counts of Cd (direction-only: larger than its half-width, but the spread caused by the " +
        "mesh alone was not measured); CdA -0.0420 m², -23.2 N at 108 km/h, lift +30.0 ± 0.0 counts (direction-only).",
    );
    expect(compareRuns(b, a).sentence).toMatch(/^open against covered: drag rises, \+20\.0 /);
    expect(compareRuns(a, a).sentence).toMatch(
      /^open against open: the drag difference is not resolved, \+0\.0 ± 0\.0 counts of Cd \(not-resolved: smaller than its half-width\); CdA \+0\.0000 m²/,
    );
  });
});

describe("two variants with noise", () => {
  const noise = (seed: number, cd: number, deviation = 0.002) =>
    whole(noisy(seed, cd, deviation, rows), noisy(seed + 7, 0.1, deviation, rows));

  test("the half-width joins those of the two ledgers", () => {
    const [a, b] = [variant("a", noise(1, 0.3)), variant("b", noise(2, 0.31, 0.004))];
    const cd = find(compareRuns(a, b), "cd");
    const [one, other] = [a, b].map((each) => buildLedger(each).total.cd);
    expect(cd.delta).toBeCloseTo(other.value - one.value, 12);
    expect(cd.halfWidth!).toBeGreaterThan(Math.max(one.halfWidth!, other.halfWidth!));
    expect(cd.halfWidth!).toBeLessThan(1.1 * Math.hypot(one.halfWidth!, other.halfWidth!));
    expect(cd.verdict).toBe("direction-only");
    expect(compareRuns(a, b).smallestResolvable).toBe(cd.halfWidth);
    // Newtons and CdA carry the same share of doubt.
    expect(find(compareRuns(a, b), "drag").halfWidth! / find(compareRuns(a, b), "drag").delta).toBeCloseTo(
      cd.halfWidth! / cd.delta,
      6,
    );
  });

  test("a history that has not settled resolves nothing, however large the difference", () => {
    const ramp = Float64Array.from({ length: rows }, (_, row) => 0.3 + 1e-3 * row);
    const comparison = compareRuns(variant("a", noise(1, 0.3)), variant("b", whole(ramp, noisy(3, 0.1, 0.002, rows))));
    expect(find(comparison, "cd")).toMatchObject({ verdict: "not-resolved" });
    expect(find(comparison, "cd").delta).toBeGreaterThan(0.1);
  });

  test("a diverged or short history has no interval", () => {
    const broken = whole(
      noisy(1, 0.3, 0.002, rows).map((x, row) => (row > 300 ? Number.NaN : x)),
      noisy(3, 0.1, 0.002, rows),
    );
    const comparison = compareRuns(variant("a", noise(1, 0.3)), variant("b", broken));
    expect(find(comparison, "cd")).toMatchObject({ halfWidth: null, verdict: "not-resolved", reason: "no interval can be given" });
    expect(comparison.smallestResolvable).toBeNull();
    const short = compareRuns(variant("a", noise(1, 0.3)), variant("b", exact("whole", 0.4, 0.1, 0)));
    expect(find(short, "cd").verdict).toBe("direction-only");
    const few = whole(noisy(1, 0.3, 0.002, 8), noisy(1, 0.3, 0.002, 8));
    expect(find(compareRuns(variant("a", few), variant("b", few)), "cd").halfWidth).toBeNull();
  });
});

/**
 * Two runs of the same flow, correlated noise in each: how often is a difference seen that is not there? At 95 % one in twenty is right;
 * the intervals are of estimated correlation and may be missed somewhat more often.
 */
describe("false differences", () => {
  test.each([
    [0.5, 800],
    [0.9, 1000],
  ])("AR(1) with phi %d, %i rows: at most one in ten of 60 pairs", (phi, count) => {
    let seen = 0;
    for (let pair = 0; pair < 60; pair++) {
      const run = (seed: number) => whole(noisy(seed, 0.3, 0.003, count, phi), noisy(seed + 5000, 0.1, 0.003, count, phi));
      const comparison = compareRuns(variant("a", run(1000 + 2 * pair)), variant("b", run(1001 + 2 * pair)));
      if (find(comparison, "cd").verdict !== "not-resolved") seen++;
    }
    expect(seen).toBeLessThanOrEqual(6);
  });

  test("a difference of five standard errors is seen in nine of ten pairs, with its sign", () => {
    let seen = 0;
    for (let pair = 0; pair < 30; pair++) {
      // n_eff of phi 0.7 is about 1000 / 5.7: the standard error of one mean is 0.003 sqrt(5.7 / 1000) = 0.00023.
      const run = (seed: number, cd: number) => whole(noisy(seed, cd, 0.003), noisy(seed + 5000, 0.1, 0.003));
      const cd = find(compareRuns(variant("a", run(300 + 2 * pair, 0.3)), variant("b", run(301 + 2 * pair, 0.3017))), "cd");
      if (cd.verdict === "direction-only" && cd.delta > 0) seen++;
    }
    expect(seen).toBeGreaterThanOrEqual(27);
  });
});

describe("cases that are not alike", () => {
  const body = exact("whole", 0.3, 0.1, 0);
  const larger = { ...reference, area: 2.4 };

  test("another reference area: said, not comparable, and CdA comes first", () => {
    // 0.3 on 2.1 m² is 0.63 m², 0.27 on 2.4 m² is 0.648 m²: the coefficient falls, the drag rises.
    const comparison = compareRuns(variant("a", body), variant("b", exact("whole", 0.27, 0.1, 0), [], { reference: larger }));
    expect(comparison.comparable).toBe(false);
    expect(codes(comparison)).toContain("reference-differs");
    expect(find(comparison, "cda").delta).toBeCloseTo(0.018, 12);
    expect(find(comparison, "cd").delta).toBeCloseTo(-0.03, 12);
    expect(comparison.sentence).toMatch(
      /^b against a: drag rises, \+0\.0180 ± 0\.0000 m² of CdA \(direction-only: A and B are not set up alike\); -30\.0 ± 0\.0 counts of Cd on reference areas that differ, \+9\.9 N at 108 km\/h/,
    );
  });

  test("another domain: direction only, whatever the size", () => {
    const card = runCard({ mesh: { ...runCard().mesh, baseCell: 2 } });
    const comparison = compareRuns(variant("a", body), variant("b", exact("whole", 0.4, 0.1, 0), [], { card }));
    expect(comparison.comparable).toBe(false);
    expect(find(comparison, "cd")).toMatchObject({ verdict: "direction-only", reason: "A and B are not set up alike" });
  });

  test("quantities that one of them lacks are not compared", () => {
    const comparison = compareRuns(
      variant("a", body),
      variant("b", body, [], { reference: { ...reference, density: null, wheelbase: null } }),
    );
    expect(comparison.differences.map(({ name }) => name)).toEqual(["cd", "cl", "cs", "cm", "cda"]);
    const bare = compareRuns(record(series("whole", body.cd, body.cl)), record(series("whole", body.cd, body.cl)));
    expect(codes(bare)).toEqual(["no-run-card", "floor-not-measured"]);
  });
});

describe("several cases", () => {
  const at = (name: string, condition: string, cd: number) => variant(name, exact("whole", cd, 0.1, 0), [], { condition });
  const pairs = (comparisons: Comparison[]) => comparisons.map(({ a, b }) => `${b.variant} - ${a.variant}`);

  test("two are compared whatever their conditions; more go against the first of their condition", () => {
    expect(pairs(compareCases([at("a", "30ms", 0.3), at("b", "40ms", 0.3)]))).toEqual(["b - a"]);
    const cases = [at("a", "30ms", 0.3), at("a", "40ms", 0.31), at("b", "30ms", 0.29), at("b", "40ms", 0.3), at("c", "30ms", 0.28)];
    expect(pairs(compareCases(cases))).toEqual(["b - a", "b - a", "c - a"]);
    expect(compareCases([at("a", "30ms", 0.3)])).toEqual([]);
  });
});

describe("the recorded run of the sample study", () => {
  test("covered against open: a lower drag, from the cab; the cover counts for itself", async () => {
    const [a, b] = await Promise.all(
      ["open-bed", "covered-bed"].map((name) => readCaseRecord(join(root, "sample-geometry/recorded", `${name}-30ms`))),
    );
    const comparison = compareRuns(a, b);
    expect(comparison.comparable).toBe(true);
    expect(codes(comparison)).toEqual(["part-only-in-one", "floor-not-measured", "recorded"]);
    expect(find(comparison, "cd")).toMatchObject({ verdict: "direction-only" });
    expect(find(comparison, "cd").delta).toBeLessThan(0);
    expect(find(comparison, "cd", "bed-cover").a).toBeNull();
    const parts = comparison.differences.filter(({ name, part }) => name === "cd" && part !== null);
    expect(parts.reduce((sum, { delta }) => sum + delta, 0)).toBeCloseTo(find(comparison, "cd").delta, 8);
  });
});
