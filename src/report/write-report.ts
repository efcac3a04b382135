import { readFileSync } from "node:fs";
import ejs from "ejs";
import { packageFile } from "../package-files.js";
import { closedOff, inertJson, policyOf } from "../picture/sealed-page.js";
import { differenceTones, toneOf } from "../picture/tones.js";
import type { BodySection } from "./body-section.js";
import { barChart, historyChart, intervalChart } from "./charts.js";
import type { ComparisonSection } from "./comparison-section.js";
import { number, signedNumber } from "./figures.js";
import type { ReportModel } from "./model.js";
import { packScene } from "./pack-body.js";
import { axisName, type RunSection } from "./run-section.js";
import { countDefinition, verdictMeaning } from "./statements.js";
import { stillPictures } from "./still-picture.js";

export interface WriteOptions {
  /** text of the bundled viewer; left out, the one that ships with the package */
  viewerScript?: string;
}

/** In the order in which they apply. */
const styleSheets = ["page", "answer", "tables", "drawings", "body", "facts", "print"];

/**
 * The page as one HTML text that needs nothing else. Every text is escaped by the templates; bodies travel as JSON that cannot end its
 * element; the page's own policy lets run only the one script and the one style that it was written with, and load nothing.
 */
export function writeReport(model: ReportModel, options: WriteOptions = {}): string {
  const style = styleSheets
    .map((name) => readFileSync(packageFile("templates", "report", "style", `${name}.css`), "utf8"))
    .join("");
  const script = options.viewerScript ?? readFileSync(packageFile("dist", "report", "viewer.js"), "utf8");
  const page = packageFile("templates", "report", "page.ejs");
  return ejs.render(
    readFileSync(page, "utf8"),
    {
      model,
      style,
      script: closedOff(script),
      policy: policyOf(style, closedOff(script)),
      countDefinition,
      verdictMeaning,
      charts: {
        intervals: intervals(model),
        bars: model.comparisons.map(differenceCharts),
        histories: model.runs.map(historyCharts),
      },
      stills: model.bodies ? stillPictures(model.bodies) : [],
      bodies: model.bodies ? inertJson(packScene(model.bodies)) : "",
      scale: model.bodies ? scaleOf(model.bodies) : null,
      toneOf,
    },
    { filename: page },
  );
}

const intervals = ({ answers }: ReportModel): string | null => {
  const known = answers.filter(({ value }) => Number.isFinite(value));
  return known.length === 0
    ? null
    : intervalChart(
        "Drag differences with their 95 % intervals",
        "drag difference, counts",
        known.map(({ a, b, value, interval }) => ({ name: `${b} − ${a}`, value, halfWidth: interval })),
      );
};

function differenceCharts({ title, bars }: ComparisonSection): { title: string; svg: string }[] {
  return [
    { quantity: "drag", list: bars.drag },
    { quantity: "lift", list: bars.lift },
  ]
    .filter(({ list }) => list.length > 0)
    .map(({ quantity, list }) => ({
      title: `${title}: ${quantity} by part`,
      svg: barChart(`${title}: ${quantity} difference by part, counts`, `${quantity} difference, counts`, list),
    }));
}

function historyCharts({ name, history }: RunSection): { title: string; svg: string }[] {
  const { iterations, from, to } = history;
  const axis = axisName(history) === "iteration" ? "iteration" : "time, s";
  return [
    { label: "Cd", quantity: "drag coefficient", series: history.cd },
    { label: "Cl", quantity: "lift coefficient", series: history.cl },
  ].map(({ label, quantity, series }) => ({
    title: `${name}: ${quantity}`,
    svg: historyChart({ title: `${name}: ${quantity} over ${axis}`, label, axis, iterations, from, to, ...series }),
  }));
}

/** The scale of the differences on the body. */
const scaleOf = ({ largest, basis }: BodySection) =>
  largest > 0 && basis !== null
    ? { low: signedNumber(-largest, 1), high: signedNumber(largest, 1), zero: number(0, 0), basis, tones: differenceTones }
    : null;
