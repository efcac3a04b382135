import { describe, expect, test } from "vitest";
import { startUp, startUpBatches } from "../../src/history/start-up.js";

const series = (rows: number, value: (row: number) => number): Float64Array =>
  Float64Array.from({ length: rows }, (_, row) => value(row));

/** The rule as it is printed (White 1997; White, Cobb and Spratt 2000), without any saving of work. */
function direct(means: Float64Array): { rows: number; criterion: number } {
  let best = { rows: 0, criterion: Number.POSITIVE_INFINITY };
  for (let cut = 0; cut <= means.length - 5; cut += 1) {
    const kept = means.slice(cut);
    const centre = kept.reduce((sum, value) => sum + value, 0) / kept.length;
    const criterion = kept.reduce((sum, value) => sum + (value - centre) ** 2, 0) / kept.length ** 2;
    if (criterion < best.criterion * (1 - 1e-9)) best = { rows: cut, criterion };
  }
  return best;
}

describe("MSER-5, closed forms", () => {
  test("a step: fifty rows of 5, then an alternation of 1 and -1", () => {
    const cut = startUp(series(500, (row) => (row < 50 ? 5 : row % 2 === 0 ? 1 : -1)));
    expect(cut).toMatchObject({ rows: 50, open: false });
    // 90 batches whose means are 1/5 and -1/5 in turn: 90 / 25 / 90^2
    expect(Math.abs(cut.criterion * 2250 - 1)).toBeLessThan(1e-12);
  });

  test("a ramp: (m^2 - 1) / (12 m) falls with every cut, so the history is not out of its start-up", () => {
    const cut = startUpBatches(series(100, (row) => row));
    expect(cut).toMatchObject({ rows: 95, open: true });
    expect(cut.criterion).toBeCloseTo((5 ** 2 - 1) / (12 * 5), 12);
    expect(startUp(series(500, (row) => row)).open).toBe(true);
  });

  test("an exponential start-up with an alternation: the cut is where the direct evaluation has it", () => {
    for (const sign of [1, -1]) {
      const values = series(1000, (row) => 10 * 0.97 ** row + (row % 2 === 0 ? 0.5 : -0.5) * sign);
      const means = series(200, (batch) => values.slice(5 * batch, 5 * batch + 5).reduce((sum, value) => sum + value, 0) / 5);
      const cut = startUp(values);
      expect(cut.rows).toBe(5 * direct(means).rows);
      expect(cut.criterion).toBeCloseTo(direct(means).criterion, 12);
      // Computed before with another program: 30 batches for the one phase; the other moves it by one.
      expect([145, 150]).toContain(cut.rows);
      expect(cut.open).toBe(false);
    }
  });

  test("an alternation of even length needs no cut", () => {
    expect(startUp(series(1000, (row) => (row % 2 === 0 ? 1 : -1)))).toMatchObject({ rows: 0, open: false });
  });

  test("a constant needs no cut; too few batches leave the question open", () => {
    expect(startUp(series(100, () => 0.3))).toMatchObject({ rows: 0, criterion: 0, open: false });
    expect(startUp(series(49, () => 0.3)).open).toBe(true);
  });
});
