import { join } from "node:path";
import { describe, expect, test } from "vitest";
import { readHistoryFile } from "../../src/history/read-file.js";
import { settle } from "../../src/history/settle.js";
import type { Settling } from "../../src/history/settling.js";
import { autoregressive, MinimalStandard } from "../helpers/random.js";

const fixtures = join(import.meta.dirname, "..", "fixtures", "histories");
async function recorded(run: string, column: string): Promise<Float64Array> {
  const [history] = await readHistoryFile(join(fixtures, run, "postProcessing", "total", "0", "coefficient.dat.gz"));
  return history!.columns.find(({ name }) => name === column)!.values;
}
const series = (rows: number, value: (row: number) => number): Float64Array =>
  Float64Array.from({ length: rows }, (_, row) => value(row));
const codes = (settling: Settling): string[] => settling.findings.map(({ code }) => code);

describe("recorded runs, one count of drag and three of lift", () => {
  test("a limit cycle is averaged over whole periods: the mean is known to a tenth of a count", async () => {
    const settling = settle(await recorded("M25", "Cd"), { halfWidth: 0.001 });
    expect(settling.verdict).toBe("oscillating");
    expect(settling.mean).toBeCloseTo(0.2901, 4);
    expect(settling.halfWidth).toBeLessThan(1e-4);
    expect(settling.period).toBeCloseTo(14.57, 1);
    expect(settling.standardDeviation).toBeGreaterThan(0.002);
    expect(settling.stillNeeded).toBeNull();
    expect(codes(settling)).toEqual(["limit-cycle"]);
    // whole periods, to the row
    const periods = settling.rows / settling.period!;
    expect(Math.abs(periods - Math.round(periods)) * settling.period!).toBeLessThan(1);
    expect(settling.firstRow + settling.rows).toBe(700);
  });

  test("its mean hardly depends on where the run is stopped", async () => {
    const values = await recorded("M25", "Cd");
    for (let rows = 560; rows <= 700; rows += 5) {
      const settling = settle(values.subarray(0, rows), { halfWidth: 0.001 });
      expect(settling.verdict, `${rows} rows`).toBe("oscillating");
      expect(Math.abs(settling.mean - 0.29008), `${rows} rows`).toBeLessThan(2e-4);
    }
  });

  test("the other slant is not settled after 420 rows, and says what is missing", async () => {
    const settling = settle(await recorded("M35", "Cd"), { halfWidth: 0.001 });
    expect(settling.verdict).toBe("not-yet");
    expect(settling.halfWidth).toBeGreaterThan(0.001);
    expect(settling.stillNeeded).toBeGreaterThan(50);
    expect(settling.stillNeeded).toBeLessThan(1000);
  });

  test("a run that goes into a steady state is settled, with the way still to go in the half-width", async () => {
    for (const [run, end] of [
      ["fullT", 0.293838],
      ["tiny35", 0.304731],
    ] as const) {
      const settling = settle(await recorded(run, "Cd"), { halfWidth: 0.001 });
      expect(settling.verdict).toBe("settled");
      expect(codes(settling)).toContain("slow-approach");
      expect(Math.abs(settling.mean - end)).toBeLessThan(settling.halfWidth);
      expect(settling.halfWidth).toBeLessThan(0.001);
    }
  });

  test.each(["micro", "tiny-SIMPLE"])("%s wanders and is not settled", async (run) => {
    for (const [column, halfWidth] of [
      ["Cd", 0.001],
      ["Cl", 0.003],
    ] as const) {
      const settling = settle(await recorded(run, column), { halfWidth });
      expect(settling.verdict).toBe("not-yet");
      expect(settling.stillNeeded).toBeGreaterThan(0);
      expect(Number.isFinite(settling.mean)).toBe(true);
    }
  });

  test("no run was ever called settled too early: what is said at any row holds at the end", async () => {
    for (const [run, column, halfWidth] of [
      ["M25", "Cd", 0.001],
      ["fullT", "Cd", 0.001],
      ["fullT", "Cl", 0.003],
      ["tiny35", "Cd", 0.001],
      ["tiny35", "Cl", 0.003],
      ["tiny-SIMPLE", "Cd", 0.001],
      ["M35", "Cd", 0.001],
      ["micro", "Cd", 0.001],
    ] as const) {
      const values = await recorded(run, column);
      const tail = values.subarray(Math.floor(values.length * 0.8));
      const end = tail.reduce((sum, value) => sum + value, 0) / tail.length;
      for (let rows = 50; rows <= values.length; rows += 10) {
        const settling = settle(values.subarray(0, rows), { halfWidth });
        if (settling.verdict !== "settled" && settling.verdict !== "oscillating") continue;
        expect(Math.abs(settling.mean - end), `${run} ${column} at ${rows}`).toBeLessThan(2 * halfWidth);
      }
    }
  });
});

describe("made-up runs", () => {
  const random = (): MinimalStandard => new MinimalStandard(12345);

  test("noise about a mean: settled, with the interval of the textbook", () => {
    const noise = random();
    const settling = settle(
      series(1000, () => 0.3 + 0.01 * noise.normal()),
      { halfWidth: 0.001 },
    );
    expect(settling).toMatchObject({ verdict: "settled", period: null, stillNeeded: null, findings: [] });
    expect(Math.abs(settling.mean - 0.3)).toBeLessThan(settling.halfWidth);
    // 1.96 * 0.01 / sqrt(1000)
    expect(settling.halfWidth).toBeGreaterThan(0.0006);
    expect(settling.halfWidth).toBeLessThan(0.0008);
    expect(settling.effectiveSamples).toBeGreaterThan(600);
    expect(settling.effectiveSamples).toBeLessThanOrEqual(1000);
  });

  test("negative correlation never counts for more than the rows", () => {
    const settling = settle(autoregressive(random(), 800, -0.7).map((value) => 0.3 + 0.01 * value));
    expect(settling.effectiveSamples).toBeLessThanOrEqual(800);
  });

  test("a start-up is cut, and it does not bias the mean", () => {
    const noise = random();
    const settling = settle(
      series(1200, (row) => 0.3 + 3 * Math.exp(-row / 25) + 0.01 * noise.normal()),
      { halfWidth: 0.002 },
    );
    expect(settling.verdict).toBe("settled");
    expect(settling.startUp).toBeGreaterThan(80);
    expect(settling.startUp).toBeLessThan(500);
    expect(Math.abs(settling.mean - 0.3)).toBeLessThan(0.002);
  });

  test("a wider target is met sooner; a narrower one asks for rows as 1 / sqrt(n)", () => {
    const values = autoregressive(random(), 2000, 0.9).map((value) => 0.3 + 0.002 * value);
    const wide = settle(values, { halfWidth: 0.005 });
    expect(wide.verdict).toBe("settled");
    const narrow = settle(values, { halfWidth: wide.halfWidth / 2 });
    expect(narrow.verdict).toBe("not-yet");
    expect(narrow.stillNeeded! / (3 * wide.rows)).toBeCloseTo(1, 1);
    expect(settle(values, { halfWidth: 0.005, confidence: 0.99 }).halfWidth).toBeGreaterThan(wide.halfWidth);
  });

  test("a zig-zag over an odd number of rows: the window is even and the mean exact", () => {
    const settling = settle(
      series(301, (row) => 0.3 + (row % 2 === 0 ? 0.01 : -0.01)),
      { halfWidth: 0.001 },
    );
    expect(settling).toMatchObject({ verdict: "oscillating", period: 2 });
    expect(settling.rows % 2).toBe(0);
    expect(settling.mean).toBeCloseTo(0.3, 12);
    expect(codes(settling)).toEqual(["zig-zag"]);
  });

  test("a constant is settled at once; one that changes in its last digit too", () => {
    expect(
      settle(
        series(60, () => 0.3),
        { halfWidth: 0.001 },
      ),
    ).toMatchObject({ verdict: "settled", mean: 0.3, halfWidth: 0, startUp: 0, rows: 60 });
    const settling = settle(
      series(60, (row) => 0.3 + (row % 7 === 0 ? 1e-7 : 0)),
      { halfWidth: 0.001 },
    );
    expect(settling.verdict).toBe("settled");
    expect(settling.halfWidth).toBeLessThan(1e-6);
  });

  test("a steady drift is no settled mean, whatever the noise", () => {
    const noise = random();
    for (const size of [0, 0.001, 0.005]) {
      const settling = settle(
        series(800, (row) => 0.3 + 0.00005 * row + size * noise.normal()),
        { halfWidth: 0.001 },
      );
      expect(settling.verdict).toBe("drifting");
      expect(codes(settling)).toContain("drift");
      expect(settling.stillNeeded).toBeNull();
    }
  });

  test("a drift that cannot matter for the target does not keep a run going, and is in the half-width", () => {
    const noise = random();
    const settling = settle(
      series(2000, (row) => 0.3 + 2e-7 * row + 0.0005 * noise.normal()),
      { halfWidth: 0.001 },
    );
    expect(settling.verdict).toBe("settled");
    expect(settling.halfWidth).toBeGreaterThan(0.0002);
  });

  test("a swing with few repetitions is not called known", () => {
    const settling = settle(
      series(200, (row) => 0.3 + 0.01 * Math.sin((2 * Math.PI * row) / 50)),
      { halfWidth: 0.001 },
    );
    expect(settling.verdict).toBe("not-yet");
    expect(codes(settling)).toContain("few-samples");
    expect(settling.stillNeeded).toBeGreaterThan(100);
  });

  test("very long histories: the same answer in rows of the whole", () => {
    const noise = random();
    const values = series(200_000, (row) => 0.3 + 5 * Math.exp(-row / 2000) + 0.01 * noise.normal());
    const settling = settle(values, { halfWidth: 0.001 });
    expect(settling.verdict).toBe("settled");
    expect(settling.firstRow + settling.rows).toBe(200_000);
    expect(settling.startUp).toBeGreaterThan(8000);
    expect(settling.standardDeviation).toBeCloseTo(0.01, 3);
  });

  test("moving and scaling the values moves and scales the answer", () => {
    const values = autoregressive(random(), 1500, 0.8).map((value, row) => 0.3 + 0.002 * value + Math.exp(-row / 20));
    const plain = settle(values, { halfWidth: 0.001 });
    const other = settle(
      values.map((value) => 1000 * value + 5e5),
      { halfWidth: 1 },
    );
    expect(other.verdict).toBe(plain.verdict);
    expect(other.firstRow).toBe(plain.firstRow);
    expect(other.mean).toBeCloseTo(1000 * plain.mean + 5e5, 5);
    expect(other.halfWidth / plain.halfWidth).toBeCloseTo(1000, 3);
  });
});

describe("no mean", () => {
  test.each([
    ["no values", new Float64Array(0), "no-data"],
    ["only missing cells", new Float64Array(80).fill(Number.NaN), "no-data"],
    ["zeros", new Float64Array(80), "zero"],
    ["too few rows", series(49, (row) => 0.3 + row * 0.001), "too-short"],
    ["nan at the end", series(300, (row) => (row > 250 ? Number.NaN : 0.3 + Math.sin(row))), "diverged"],
    ["inf in the middle", series(300, (row) => (row === 100 ? Number.POSITIVE_INFINITY : 0.3 + Math.sin(row))), "diverged"],
    ["growth without bound", series(300, (row) => 0.3 * 1.1 ** row), "diverged"],
  ])("%s", (_, values, verdict) => {
    const settling = settle(values, { halfWidth: 0.001 });
    expect(settling.verdict).toBe(verdict);
    expect(settling.mean).toBeNaN();
    expect(settling.halfWidth).toBe(Number.POSITIVE_INFINITY);
    expect(codes(settling)).toEqual([verdict]);
    expect(settling.stillNeeded).toBe(verdict === "too-short" ? 1 : null);
  });

  test("a spike in the first rows is a start-up, not a divergence; missing cells at the start are passed over", () => {
    const noise = new MinimalStandard(9);
    const values = series(600, (row) => (row < 3 ? Number.NaN : row < 6 ? 1e9 : 0.3 + 0.001 * noise.normal()));
    const settling = settle(values, { halfWidth: 0.001 });
    expect(settling.verdict).toBe("settled");
    expect(settling.firstRow).toBeGreaterThanOrEqual(6);
    expect(settling.firstRow + settling.rows).toBe(600);
  });

  // A t quantile with a hundredth of a degree of freedom is 1e77: it once reached the screen.
  test("a half-width is unknown or of the size of the values, never a monster (seeds 1 to 200)", () => {
    for (let seed = 1; seed <= 200; seed++) {
      const values = autoregressive(new MinimalStandard(seed), 60 + seed, seed % 2 ? 0.999 : 0.9).map(
        (value) => 0.3 + 0.01 * value,
      );
      const { halfWidth } = settle(values, { halfWidth: 0.001 });
      if (Number.isFinite(halfWidth)) expect(halfWidth).toBeLessThan(50);
    }
  });
});
