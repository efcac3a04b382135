import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { barChart, type HistoryChart, historyChart, intervalChart } from "../../src/report/charts.js";
import { thinned } from "../../src/report/decimate.js";
import { markup } from "./example.js";
import { xmlFault } from "./well-formed.js";

const rows = 500;
const iterations = Float64Array.from({ length: rows }, (_, row) => row + 1);
const chart: HistoryChart = {
  title: "open-bed: drag coefficient over iteration",
  label: "Cd",
  axis: "iteration",
  iterations,
  values: iterations.map((n) => 0.385 + 2 * Math.exp(-n / 20) + 0.001 * Math.sin(n)),
  from: 201,
  to: 500,
  mean: 0.385,
  halfWidth: 0.0005,
};

/** The numbers of an attribute of the first element inside the group of this class. */
const attribute = (svg: string, group: string, name: string): number => {
  const inside = new RegExp(`<g[^>]*class="${group}"[^>]*>(.*?)</g>`, "s").exec(svg)?.[1] ?? "";
  return Number(new RegExp(` ${name}="([^"]*)"`).exec(inside)?.[1] ?? Number.NaN);
};

const texts = (svg: string): string[] => [...svg.matchAll(/<text[^>]*>([^<]*)<\/text>/g)].map(([, text]) => text!);

describe("history chart", () => {
  const svg = historyChart(chart);

  test("is well-formed, named, without style of its own and without event handlers", () => {
    expect(xmlFault(svg)).toBeNull();
    expect(svg).toMatch(
      /^<svg xmlns="http:\/\/www.w3.org\/2000\/svg" role="img" aria-label="open-bed: drag coefficient over iteration" /,
    );
    expect(svg).not.toMatch(/<style| style=| on\w+=|<script|href=/);
  });

  test("the window begins where its first row is on the axis; the start-up is shaded up to there", () => {
    const [left, right] = [62, 460];
    const x = left + ((201 - 1) / (500 - 1)) * (right - left);
    expect(attribute(svg, "start-up", "x")).toBeCloseTo(left, 1);
    expect(attribute(svg, "start-up", "width")).toBeCloseTo(x - left, 1);
    expect(attribute(svg, "mean", "x1")).toBeCloseTo(x, 1);
    expect(attribute(svg, "mean", "x2")).toBeCloseTo(right, 1);
  });

  test("the band is as high as two half-widths on the scale of the ticks", () => {
    const ticks = [...svg.matchAll(/<text[^>]*translate\(62,([\d.]+)\)"[^>]*>([\d.]+)<\/text>/g)].map(([, y, value]) => ({
      y: Number(y),
      value: Number(value),
    }));
    expect(ticks.length).toBeGreaterThanOrEqual(3);
    const [first, last] = [ticks[0]!, ticks.at(-1)!];
    const perUnit = (first.y - last.y) / (last.value - first.value);
    expect(attribute(svg, "band", "height")).toBeCloseTo(2 * 0.0005 * perUnit, 0);
    expect(attribute(svg, "mean", "y1")).toBeCloseTo(first.y - (0.385 - first.value) * perUnit, 0);
  });

  test("the wild beginning does not flatten the rest", () => {
    const values = texts(svg)
      .map(Number)
      .filter((value) => value > 0 && value < 1);
    expect(Math.max(...values)).toBeLessThan(0.5);
  });

  test("no start-up, no half-width, a constant, values that are not numbers", () => {
    for (const odd of [
      { ...chart, from: 1 },
      { ...chart, halfWidth: null },
      { ...chart, values: iterations.map(() => 0.3), mean: 0.3, halfWidth: 0 },
      { ...chart, values: iterations.map(() => Number.NaN), mean: Number.NaN, halfWidth: null },
      { ...chart, iterations: new Float64Array([1]), values: new Float64Array([0.3]), from: 1, to: 1 },
      { ...chart, iterations: new Float64Array(0), values: new Float64Array(0) },
    ]) {
      const svg = historyChart(odd);
      expect(xmlFault(svg)).toBeNull();
      expect(svg).not.toContain("NaN");
    }
    expect(historyChart({ ...chart, from: 1 })).not.toContain('class="start-up"');
    expect(historyChart({ ...chart, halfWidth: null })).not.toContain('class="band"');
  });

  test("a million rows make a drawing of less than 40 kB", () => {
    const many = Float64Array.from({ length: 1_000_000 }, (_, row) => row + 1);
    const svg = historyChart({
      ...chart,
      iterations: many,
      values: many.map((n) => 0.3 + 0.01 * Math.sin(n)),
      from: 400_000,
      to: 1_000_000,
      mean: 0.3,
    });
    expect(svg.length).toBeLessThan(40_000);
    expect(texts(svg)).toContain("200\u202f000");
  });

  test("the same chart is the same text every time", () => {
    expect(historyChart(chart)).toBe(historyChart(chart));
  });
});

describe("bars by part", () => {
  const bars = [
    { name: "cab", value: -24, halfWidth: 2 },
    { name: "tailgate", value: 8, halfWidth: null },
    { name: markup, value: 0, halfWidth: 0.1 },
  ];
  const svg = barChart("drag by part", "drag difference, counts", bars);

  test("is well-formed; a name that is markup stays text", () => {
    expect(xmlFault(svg)).toBeNull();
    expect(svg).not.toContain("<script");
    expect(svg).not.toContain("<img");
    expect(texts(svg).join(" ")).toContain("&lt;script&gt;");
  });

  test("bars of either sign lie on their sides of zero, in proportion", () => {
    const zero = attribute(svg, "zero", "x1");
    const [less, more] = [attribute(svg, "less", "width"), attribute(svg, "more", "width")];
    expect(attribute(svg, "less", "x") + less).toBeCloseTo(zero, 1);
    expect(attribute(svg, "more", "x")).toBeCloseTo(zero, 1);
    expect(less / more).toBeCloseTo(3, 1);
    const [from, to] = [attribute(svg, "interval", "x1"), attribute(svg, "interval", "x2")];
    expect((to - from) / less).toBeCloseTo(4 / 24, 2);
  });

  test("two parts of one name keep their own bars", () => {
    const twice = barChart("t", "counts", [bars[0]!, { name: "cab", value: 3, halfWidth: null }]);
    expect(texts(twice)).toEqual(expect.arrayContaining(["cab", "cab (2)"]));
  });
});

describe("intervals of the answers", () => {
  test("zero is always in the picture", () => {
    const svg = intervalChart("t", "counts", [
      { name: "a", value: -13.8, halfWidth: 0.8 },
      { name: "b", value: -3.6, halfWidth: null },
    ]);
    expect(xmlFault(svg)).toBeNull();
    expect(attribute(svg, "zero", "x1")).toBeLessThan(560);
    expect(attribute(svg, "zero", "x1")).toBeGreaterThan(attribute(svg, "point", "cx"));
    expect(texts(svg)).toContain("0");
  });
});

describe("thinning", () => {
  test("keeps every row where there are few", () => {
    const { x, y } = thinned(new Float64Array([1, 2, 4]), new Float64Array([3, Number.NaN, 5]), 10);
    expect([...x]).toEqual([1, 4]);
    expect([...y]).toEqual([3, 5]);
  });

  test("each column keeps its least and greatest value, in order (seed 4271)", () => {
    const values = fc.array(fc.oneof(fc.double({ min: -10, max: 10, noNaN: true }), fc.constant(Number.NaN)), {
      minLength: 41,
      maxLength: 400,
    });
    fc.assert(
      fc.property(values, fc.integer({ min: 1, max: 20 }), (list, columns) => {
        const y = Float64Array.from(list);
        const x = y.map((_, row) => row);
        const line = thinned(x, y, columns);
        expect(line.x.length).toBeLessThanOrEqual(2 * columns);
        for (let k = 1; k < line.x.length; k++) expect(line.x[k]!).toBeGreaterThan(line.x[k - 1]!);
        const width = (list.length - 1) / columns;
        const columnOf = (at: number) => Math.min(columns - 1, Math.floor(at / width + 1e-12));
        // Brute force: extremes of each column, once over all rows and once over those that were kept.
        const extremes = (xs: Iterable<number>) => {
          const found = new Map<number, [number, number]>();
          for (const at of xs) {
            const value = y[at]!;
            if (Number.isNaN(value)) continue;
            const [low, high] = found.get(columnOf(at)) ?? [value, value];
            found.set(columnOf(at), [Math.min(low, value), Math.max(high, value)]);
          }
          return found;
        };
        expect(extremes(line.x)).toEqual(extremes(x));
      }),
      { seed: 4271, numRuns: 300 },
    );
  });
});
