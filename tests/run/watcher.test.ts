import { describe, expect, test } from "vitest";
import { testTargets, Watcher, type Watching } from "../../src/run/watcher.js";

const watching: Watching = { targets: { drag: 0.001, lift: 0.003, confidence: 0.95 }, minimumWindow: 100, testEvery: 20 };

/** Seeded noise in [-0.5, 0.5): Lehmer's generator (Park and Miller, 1988). */
function noise(seed: number): () => number {
  let state = seed;
  return () => {
    state = (state * 48271) % 2147483647;
    return state / 2147483647 - 0.5;
  };
}

function histories(rows: number, cdOf: (row: number, random: number) => number, clOf: (row: number, random: number) => number) {
  const random = noise(11);
  const time = Float64Array.from({ length: rows }, (_, row) => row + 1);
  const cd = time.map((_, row) => cdOf(row, random()));
  const cl = time.map((_, row) => clOf(row, random()));
  return { time, cd, cl };
}

/** Feeds a history row by row and returns the first row count at which the watcher says something else than `going`. */
function firstWord({ time, cd, cl }: ReturnType<typeof histories>, with_: Watching = watching) {
  const watcher = new Watcher(with_);
  for (let rows = 1; rows <= cd.length; rows += 1) {
    const word = watcher.look(time.subarray(0, rows), cd.subarray(0, rows), cl.subarray(0, rows));
    if (word.kind !== "going") return { rows, ...word };
  }
  return { rows: cd.length, kind: "going" as const };
}

describe("when a run may end", () => {
  const calm = (row: number, random: number) => 0.3 + Math.exp(-row / 10) + 1e-3 * random;

  test("both coefficients known to their half-widths at two tests in a row", () => {
    const data = histories(400, calm, (row, random) => 0.1 - Math.exp(-row / 10) + 2e-3 * random);
    const word = firstWord(data);
    expect(word.kind).toBe("settled");
    expect(word.rows % 20).toBe(0);
    expect(word.rows).toBeGreaterThanOrEqual(140);
    expect(word.rows).toBeLessThanOrEqual(260);
    const one = testTargets(data.cd.subarray(0, word.rows), data.cl.subarray(0, word.rows), watching);
    const before = testTargets(data.cd.subarray(0, word.rows - 20), data.cl.subarray(0, word.rows - 20), watching);
    expect([one.met, before.met]).toEqual([true, true]);
    expect(one.drag.settling.mean).toBeCloseTo(0.3, 3);
  });

  test("a calm drag does not end a run whose lift wanders", () => {
    expect(firstWord(histories(400, calm, (row) => row / 200)).kind).toBe("going");
  });

  test("the window has its least length", () => {
    const word = firstWord(histories(600, calm, calm), { ...watching, minimumWindow: 300 });
    expect(word.kind).toBe("settled");
    expect(word.rows).toBeGreaterThanOrEqual(300);
  });

  test("stricter targets take longer", () => {
    const data = histories(
      3000,
      (row, random) => calm(row, 0) + 0.02 * random,
      (row, random) => calm(row, 0) + 0.02 * random,
    );
    const loose = firstWord(data, { ...watching, targets: { drag: 0.002, lift: 0.002, confidence: 0.95 } });
    const strict = firstWord(data, { ...watching, targets: { drag: 0.0004, lift: 0.0004, confidence: 0.95 } });
    expect(loose.kind).toBe("settled");
    expect(strict.rows).toBeGreaterThan(loose.rows);
  });
});

describe("when a run has gone wrong", () => {
  test.each([
    { title: "nan", at: 57, value: Number.NaN, reason: "coefficients are not numbers from iteration 58" },
    { title: "inf", at: 3, value: Infinity, reason: "coefficients are not numbers from iteration 4" },
    { title: "huge", at: 57, value: -3e5, reason: "drag coefficient -3.0e+5 at iteration 58" },
  ])("$title", ({ at, value, reason }) => {
    const word = firstWord(
      histories(
        100,
        (row) => (row === at ? value : 0.3),
        () => 0.1,
      ),
    );
    expect(word).toEqual({ rows: at + 1, kind: "diverged", reason });
  });

  test("the overshoot of the first iterations is no divergence", () => {
    expect(
      firstWord(
        histories(
          60,
          (row) => (row < 5 ? 5000 : 0.3),
          () => 0.1,
        ),
      ).kind,
    ).toBe("going");
  });

  test("exact zeros are no result", () => {
    expect(
      firstWord(
        histories(
          60,
          () => 0,
          () => 0,
        ),
      ),
    ).toEqual({
      rows: 20,
      kind: "no-force",
      reason: "all coefficients are exactly 0: no patch of the mesh matches the names in the function object",
    });
  });

  test("an exactly zero lift alone is not taken for it", () => {
    expect(
      firstWord(
        histories(
          60,
          () => 0.3,
          () => 0,
        ),
      ).kind,
    ).toBe("going");
  });
});
