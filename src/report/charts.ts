import { createHash } from "node:crypto";
import * as Plot from "@observablehq/plot";
import { parseHTML } from "linkedom";
import { thinned } from "./decimate.js";
import { grouped } from "./figures.js";

// This module is bundled with its two libraries at build time: Node draws the charts, the page holds plain SVG. Colours come from the
// page's style sheet through class names, so that one drawing serves light, dark and paper.

const { document } = parseHTML("<!doctype html><html><body></body></html>");

export interface HistoryChart {
  /** what the chart shows, for readers who hear it */
  title: string;
  /** name of the quantity, for the axis */
  label: string;
  /** name and unit of the horizontal axis */
  axis: string;
  /** one per row, increasing */
  iterations: Float64Array;
  values: Float64Array;
  /** first and last iteration of the window */
  from: number;
  to: number;
  mean: number;
  halfWidth: number | null;
}

/** Drawn size, in pixels of the page at its full width. */
const width = 470;
const historyHeight = 216;
const margins = { left: 62, right: 10, top: 22, bottom: 36 };

/** A history with its start-up shaded, the window, its mean and the band of the half-width, as SVG. */
export function historyChart(chart: HistoryChart): string {
  const { title, label, axis, iterations, values, from, to, mean, halfWidth } = chart;
  const first = iterations[0] ?? 0;
  const last = iterations[iterations.length - 1] ?? 1;
  const domain = verticalDomain(chart);
  const line = thinned(iterations, values, width - margins.left - margins.right);
  const points = Array.from(line.x, (x, k) => ({ x, y: line.y[k]! }));
  return svgText(
    Plot.plot({
      document,
      width,
      height: historyHeight,
      marginLeft: margins.left,
      marginRight: margins.right,
      marginTop: margins.top,
      marginBottom: margins.bottom,
      x: { label: axis, domain: [first, last], ticks: 6, labelArrow: "none", tickFormat: grouped },
      y: { label, domain, grid: true, ticks: 5, labelArrow: "none" },
      marks: [
        ...(from > first ? [Plot.rect([0], { x1: first, x2: from, y1: domain[0], y2: domain[1], className: "start-up" })] : []),
        ...(halfWidth === null
          ? []
          : [Plot.rect([0], { x1: from, x2: to, y1: mean - halfWidth, y2: mean + halfWidth, clip: true, className: "band" })]),
        Plot.line(points, { x: "x", y: "y", clip: true, className: "history" }),
        ...(Number.isFinite(mean) ? [Plot.ruleY([mean], { x1: from, x2: to, className: "mean" })] : []),
        ...(from > first ? [Plot.ruleX([from], { className: "cut" })] : []),
      ],
    }),
    title,
  );
}

export interface ChartBar {
  name: string;
  value: number;
  halfWidth: number | null;
}

/** Differences by part as bars with their half-widths, in the order given, as SVG. */
export function barChart(title: string, label: string, bars: ChartBar[]): string {
  const names = distinct(bars.map(({ name }) => name));
  const rows = bars.map((bar, k) => ({ ...bar, name: names[k]! }));
  const known = rows.filter(({ halfWidth }) => halfWidth !== null);
  return svgText(
    Plot.plot({
      document,
      width,
      height: 46 + 21 * bars.length,
      marginLeft: nameMargin(names),
      marginRight: 14,
      marginTop: 6,
      marginBottom: margins.bottom,
      x: { label, grid: true, nice: true, ticks: 5, labelArrow: "none", labelAnchor: "center" },
      y: { label: null, domain: names, tickSize: 0, tickFormat: shortName },
      marks: [
        Plot.barX(
          rows.filter(({ value }) => value >= 0),
          { x: "value", y: "name", insetTop: 4, insetBottom: 4, className: "more" },
        ),
        Plot.barX(
          rows.filter(({ value }) => value < 0),
          { x: "value", y: "name", insetTop: 4, insetBottom: 4, className: "less" },
        ),
        Plot.ruleY(known, {
          y: "name",
          x1: ({ value, halfWidth }: ChartBar) => value - halfWidth!,
          x2: ({ value, halfWidth }: ChartBar) => value + halfWidth!,
          className: "interval",
        }),
        Plot.ruleX([0], { className: "zero" }),
      ],
    }),
    title,
  );
}

export interface ChartAnswer {
  name: string;
  value: number;
  halfWidth: number | null;
}

/** Every answer as a point with its interval on one scale that holds zero, as SVG. */
export function intervalChart(title: string, label: string, answers: ChartAnswer[]): string {
  const names = distinct(answers.map(({ name }) => name));
  const rows = answers.map((answer, k) => ({ ...answer, name: names[k]! }));
  const ends = rows.flatMap(({ value, halfWidth }) => [value - (halfWidth ?? 0), value + (halfWidth ?? 0)]);
  const [low, high] = [Math.min(0, ...ends), Math.max(0, ...ends)];
  const margin = 0.08 * (high - low) || 1;
  return svgText(
    Plot.plot({
      document,
      width: 560,
      height: 44 + 26 * answers.length,
      marginLeft: nameMargin(names),
      marginRight: 14,
      marginTop: 4,
      marginBottom: margins.bottom,
      x: { label, grid: true, domain: [low - margin, high + margin], labelArrow: "none", labelAnchor: "center" },
      y: { type: "point", label: null, domain: names, tickSize: 0, tickFormat: shortName, padding: 0.6 },
      marks: [
        Plot.ruleX([0], { className: "zero" }),
        Plot.ruleY(
          rows.filter(({ halfWidth }) => halfWidth !== null),
          {
            y: "name",
            x1: ({ value, halfWidth }: ChartAnswer) => value - halfWidth!,
            x2: ({ value, halfWidth }: ChartAnswer) => value + halfWidth!,
            className: "whisker",
          },
        ),
        Plot.dot(rows, { x: "value", y: "name", r: 4.5, className: "point" }),
      ],
    }),
    title,
  );
}

/** Longest name that is printed beside a chart; the tables hold the whole of it. */
const longestName = 30;

const shortName = (name: string): string => {
  const letters = [...name];
  return letters.length > longestName ? `${letters.slice(0, longestName - 1).join("")}…` : name;
};

/** A scale of names needs them distinct; bars of one name would lie upon each other. */
const distinct = (names: string[]): string[] =>
  names.map((name, k) =>
    names.indexOf(name) === k ? name : `${name} (${names.slice(0, k).filter((other) => other === name).length + 1})`,
  );

const nameMargin = (names: string[]): number =>
  Math.min(230, 18 + 7 * Math.max(6, ...names.map((name) => [...shortName(name)].length)));

/** A frame no lower than this, coefficient units: noise far below what matters must not look large. */
const leastFrame = 0.004;

/** The window and the second half of what comes before it fill the chart; the wild first iterations run out of it. */
function verticalDomain({ iterations, values, from, mean, halfWidth }: HistoryChart): [number, number] {
  const middle = Number.isFinite(mean) ? mean : 0;
  const reach = Math.max(halfWidth ?? 0, leastFrame / 2);
  let [low, high] = [middle - reach, middle + reach];
  const start = iterations.findIndex((iteration) => iteration >= from);
  for (let row = Math.floor(Math.max(0, start) / 2); row < values.length; row++) {
    const value = values[row]!;
    if (!Number.isFinite(value) || Math.abs(value - middle) > tooFar(middle)) continue;
    if (value < low) low = value;
    if (value > high) high = value;
  }
  const margin = 0.08 * (high - low);
  return [low - margin, high + margin];
}

/** Beyond this from the mean, coefficient units, a value would flatten everything else. */
const tooFar = (mean: number): number => Math.max(0.15, 0.5 * Math.abs(mean));

/**
 * The SVG without the library's own style element and labels: the page's style sheet has the rules, so that its policy can be strict, and the
 * title says what the picture is. Coordinates keep two decimals. Names of clipping frames come from the title: the same in every run, and
 * different from those of the page's other charts.
 */
function svgText(svg: { outerHTML: string }, title: string): string {
  const label = title.replaceAll("&", "&amp;").replaceAll("<", "&lt;").replaceAll(">", "&gt;").replaceAll('"', "&quot;");
  const frame = `frame-${createHash("sha256").update(title).digest("hex").slice(0, 12)}`;
  const numbers = new Map<string, string>();
  const renamed = (name: string): string => {
    if (!numbers.has(name)) numbers.set(name, `${frame}-${numbers.size + 1}`);
    return numbers.get(name)!;
  };
  return svg.outerHTML
    .replace(/<style>[\s\S]*?<\/style>/g, "")
    .replace(/<[^>]*>/g, (tag) =>
      tag
        .replace(/ aria-(?:label|hidden)="[^"]*"/g, "")
        .replace(/(\.\d\d)\d+/g, "$1")
        .replace(/plot-clip-\d+/g, renamed),
    )
    .replace(/^<svg /, `<svg xmlns="http://www.w3.org/2000/svg" role="img" aria-label="${label}" `);
}
