import * as Plot from "@observablehq/plot";
import { parseHTML } from "linkedom";

// This module is bundled with its two libraries at build time: Node draws the charts, the page holds plain SVG.

const { document } = parseHTML("<!doctype html><html><body></body></html>");

export interface HistoryChart {
  /** name and unit of the quantity */
  label: string;
  /** one per row */
  time: Float64Array;
  values: Float64Array;
  /** rows of the window: [first, first + rows) */
  first: number;
  rows: number;
  mean: number;
  halfWidth: number | null;
}

/** Points per chart: more than the page has pixels across is not seen. */
const mostPoints = 600;

/** A history with its start-up shaded, the window, its mean and the band of the half-width, as SVG. */
export function historyChart(chart: HistoryChart): string {
  const { time, values, first, rows, mean, halfWidth, label } = chart;
  const start = time[first];
  const [from, to] = [time[0], time[first + rows - 1]];
  const domain = verticalDomain(values, first, mean, halfWidth ?? 0);
  const svg = Plot.plot({
    document,
    width: 760,
    height: 260,
    marginLeft: 64,
    ariaLabel: `${label} over iterations`,
    x: { label: "iteration", domain: [from, time[time.length - 1]] },
    y: { label, domain, grid: true, tickFormat: tickFormat(domain[1] - domain[0]) },
    marks: [
      ...(start > from ? [Plot.rect([{}], { x1: from, x2: start, y1: domain[0], y2: domain[1], className: "start-up" })] : []),
      ...(halfWidth === null
        ? []
        : [Plot.rect([{}], { x1: start, x2: to, y1: mean - halfWidth, y2: mean + halfWidth, className: "band" })]),
      Plot.line(thinned(time, values), { x: "time", y: "value", clip: true, strokeWidth: 1.2, className: "history" }),
      Plot.ruleY([mean], { x1: start, x2: to, className: "mean" }),
    ],
  });
  return svgText(svg);
}

export interface Bar {
  name: string;
  value: number;
  halfWidth: number | null;
}

/** Differences by part as bars with their half-widths, largest first, as SVG. */
export function differenceChart(label: string, bars: Bar[]): string {
  const longest = Math.max(8, ...bars.map(({ name }) => name.length));
  const svg = Plot.plot({
    document,
    width: 760,
    height: 50 + 24 * bars.length,
    marginLeft: Math.min(220, 16 + 7 * longest),
    ariaLabel: label,
    x: { label, grid: true, nice: true },
    y: { label: null, domain: bars.map(({ name }) => name) },
    marks: [
      Plot.barX(
        bars.filter(({ value }) => value >= 0),
        { x: "value", y: "name", insetTop: 3, insetBottom: 3, className: "more" },
      ),
      Plot.barX(
        bars.filter(({ value }) => value < 0),
        { x: "value", y: "name", insetTop: 3, insetBottom: 3, className: "less" },
      ),
      Plot.ruleY(
        bars.filter(({ halfWidth }) => halfWidth !== null),
        {
          y: "name",
          x1: (bar: Bar) => bar.value - bar.halfWidth!,
          x2: (bar: Bar) => bar.value + bar.halfWidth!,
          strokeWidth: 1.5,
          className: "interval",
        },
      ),
      Plot.ruleX([0], { className: "zero" }),
    ],
  });
  return svgText(svg);
}

/** The window and its surroundings fill the chart; the wild first iterations run out of it. */
function verticalDomain(values: Float64Array, first: number, mean: number, halfWidth: number): [number, number] {
  const settled = values.subarray(Math.min(values.length - 1, Math.max(Math.floor(first / 2), Math.floor(values.length / 10))));
  let [low, high] = [mean - halfWidth, mean + halfWidth];
  for (const value of settled) {
    if (value < low) low = value;
    if (value > high) high = value;
  }
  const margin = 0.08 * (high - low) || Math.max(1e-4, 0.01 * Math.abs(mean));
  return [low - margin, high + margin];
}

const tickFormat = (extent: number): string => `.${Math.min(6, Math.max(0, Math.ceil(-Math.log10(extent)) + 1))}f`;

/** Least and greatest value of each of some hundred stretches: what thins the points keeps every peak. */
function thinned(time: Float64Array, values: Float64Array): { time: number; value: number }[] {
  const stretch = Math.max(1, Math.ceil((2 * values.length) / mostPoints));
  const points: { time: number; value: number }[] = [];
  for (let from = 0; from < values.length; from += stretch) {
    let [least, greatest] = [from, from];
    for (let row = from; row < Math.min(values.length, from + stretch); row++) {
      if (values[row] < values[least]) least = row;
      if (values[row] > values[greatest]) greatest = row;
    }
    for (const row of least === greatest ? [least] : [Math.min(least, greatest), Math.max(least, greatest)])
      points.push({ time: time[row], value: values[row] });
  }
  return points;
}

/** The SVG without the library's own style element: the page's stylesheet has the rules, so that its policy can be strict. */
function svgText(svg: { outerHTML: string }): string {
  return svg.outerHTML
    .replace(/<style>[\s\S]*?<\/style>/g, "")
    .replace(/<svg /, '<svg role="img" xmlns="http://www.w3.org/2000/svg" ');
}
