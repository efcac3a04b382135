import { describe, expect, test } from "vitest";
import { checkHistory } from "../../src/history/checks.js";
import type { History } from "../../src/history/history.js";

const history = (columns: Record<string, number[]>, more: Partial<History> = {}): History => {
  const rows = Object.values(columns)[0]!.length;
  return {
    object: "total",
    table: "coefficient",
    layout: "coefficients",
    dialect: "C6",
    header: {},
    columns: [
      { name: "Time", values: Float64Array.from({ length: rows }, (_, row) => row + 1) },
      ...Object.entries(columns).map(([name, values]) => ({ name, values: Float64Array.from(values) })),
    ],
    words: [],
    rows,
    segments: [],
    findings: [],
    ...more,
  };
};
const codes = (found: ReturnType<typeof checkHistory>): string[] => found.map(({ severity, code }) => `${severity} ${code}`);
const steady = (value: number): number[] => Array.from({ length: 100 }, () => value);

describe("checks of the values", () => {
  test("a healthy history raises nothing", () => {
    expect(checkHistory(history({ Cd: steady(0.3), Cl: steady(0.1), "Cl(f)": steady(0.25), "Cl(r)": steady(-0.15) }))).toEqual([]);
  });

  test("nan and inf: an error with the first time", () => {
    const values = steady(0.3);
    values[40] = Number.POSITIVE_INFINITY;
    values[60] = Number.NaN;
    const found = checkHistory(history({ Cd: values }));
    expect(codes(found)).toEqual(["error not-finite"]);
    expect(found[0]).toMatchObject({
      count: 60,
      message: "total holds nan or inf from time 41 on: the run diverged, whatever its log says at the end",
    });
  });

  test("a coefficient that runs away late is an error; a large start-up is none", () => {
    expect(codes(checkHistory(history({ Cd: [5000, ...steady(0.3)] })))).toEqual([]);
    expect(codes(checkHistory(history({ Cd: [...steady(0.3), ...steady(0.3), 5000] })))).toEqual(["error runaway"]);
  });

  test("forces run away when they grow a million times, whatever their size", () => {
    const forces = (late: number): string[] =>
      codes(checkHistory(history({ total_x: [...steady(300), ...steady(late)] }, { layout: "forces", dialect: "F3" })));
    expect(forces(30_000)).toEqual([]);
    expect(forces(3e9)).toEqual(["error runaway"]);
  });

  test("front and rear that are not the whole: columns in another order than named", () => {
    const found = checkHistory(history({ Cl: steady(0.1), "Cl(f)": steady(0.25), "Cl(r)": steady(0.15) }));
    expect(codes(found)).toEqual(["warning columns-disagree"]);
    expect(found[0]!.message).toContain("Cl(f) + Cl(r) is not Cl");
  });

  test("a total that is not the sum of its parts", () => {
    const parts = { total_x: steady(11), pressure_x: steady(1), viscous_x: steady(2) };
    expect(codes(checkHistory(history(parts, { layout: "forces", dialect: "F5" })))).toEqual(["warning columns-disagree"]);
    expect(codes(checkHistory(history({ ...parts, total_x: steady(3) }, { layout: "forces", dialect: "F5" })))).toEqual([]);
  });

  test("left-over reference values of a well-known example, and a negative drag", () => {
    expect(codes(checkHistory(history({ Cd: steady(0.3) }, { header: { magUInf: 20, lRef: 1.42, Aref: 0.75 } })))).toEqual([
      "warning example-reference",
    ]);
    expect(codes(checkHistory(history({ Cd: steady(-0.3) })))).toEqual(["warning negative-drag"]);
  });

  test("rows at uneven steps: means count rows, not time", () => {
    const uneven = history({ Cd: steady(0.3) });
    uneven.columns[0]!.values.forEach((time, row, all) => {
      all[row] = time ** 2;
    });
    const found = checkHistory(uneven);
    expect(codes(found)).toEqual(["note uneven-steps"]);
    expect(found[0]!.message).toBe("the rows of total are unevenly spaced (steps from 101 to 199): means count rows, not time");
  });

  test("other tables are not judged by these rules", () => {
    expect(checkHistory(history({ Ux: steady(0) }, { layout: "residuals" }))).toEqual([]);
  });
});
