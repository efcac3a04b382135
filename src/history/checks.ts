import { type Finding, finding } from "../finding.js";
import type { History } from "./history.js";

/** No coefficient of a vehicle comes near this; a run that prints it has diverged. */
const runawayCoefficient = 1e3;
/** Growth of the forces over the first half that only a diverged run shows. */
const runawayGrowth = 1e6;
/** Ratio of the largest to the smallest step that matters; printed times of few digits make small ones. */
const unevenSteps = 1.5;
/** References of a well-known example case of the platform; on another body they are left-overs. */
const exampleReference = { magUInf: 20, lRef: 1.42, Aref: 0.75 };

/**
 * What is wrong or odd about the values of a history, each with a real case behind it. Findings of severity error make a mean
 * meaningless.
 */
export function checkHistory(history: History): Finding[] {
  if (history.rows === 0) return [];
  if (history.layout !== "coefficients" && history.layout !== "forces" && history.layout !== "moments") return [];
  const findings = [...checkZeros(history), ...checkFinite(history), ...checkRunaway(history)];
  if (findings.length > 0) return findings;
  return [...checkIdentities(history), ...checkReference(history), ...checkSign(history), ...checkSteps(history)];
}

function checkZeros(history: History): Finding[] {
  for (const { values } of history.columns.slice(1)) for (const value of values) if (value !== 0) return [];
  return [
    finding(
      "all-zero",
      "error",
      `every value of ${history.object} is exactly zero: its patch names match no patch of the mesh`,
      "Compare the patches of the function object with constant/polyMesh/boundary.",
      { count: history.rows },
    ),
  ];
}

function checkFinite(history: History): Finding[] {
  let first = history.rows;
  for (const { values } of history.columns.slice(1)) {
    const row = values.findIndex((value) => !Number.isFinite(value));
    if (row >= 0 && row < first) first = row;
  }
  if (first === history.rows) return [];
  return [
    finding(
      "not-finite",
      "error",
      `${history.object} holds nan or inf from time ${history.columns[0]!.values[first]} on: the run diverged, whatever its log says at the end`,
      "Look at the mesh quality and the start of the run; no mean can be taken.",
      { count: history.rows - first },
    ),
  ];
}

function checkRunaway(history: History): Finding[] {
  const half = Math.floor(history.rows / 2);
  for (const { name, values } of history.columns.slice(1)) {
    const early = largest(values.subarray(0, half));
    const late = largest(values.subarray(half));
    const far = history.layout === "coefficients" ? late > runawayCoefficient : early > 0 && late > runawayGrowth * early;
    if (!far) continue;
    return [
      finding(
        "runaway",
        "error",
        `${name} of ${history.object} reaches ${late.toExponential(2)} in the second half of the rows: the run diverged or its reference values are zero`,
        "Look at the mesh quality, the time step and the reference values in the header.",
      ),
    ];
  }
  return [];
}

function largest(values: Float64Array): number {
  let most = 0;
  for (const value of values) if (Math.abs(value) > most) most = Math.abs(value);
  return most;
}

/**
 * Cl(f) + Cl(r) = Cl, and total = pressure + viscous + porous, in the last row: fails when columns are not what they are called.
 */
function checkIdentities(history: History): Finding[] {
  const last = (name: string): number | undefined =>
    history.columns.find((column) => column.name === name)?.values[history.rows - 1];
  const wrong: string[] = [];
  const test = (whole: string, shares: string[]): void => {
    const total = last(whole);
    const parts = shares.map(last).filter((value) => value !== undefined);
    if (total === undefined || parts.length < 2) return;
    const size = Math.max(Math.abs(total), ...parts.map(Math.abs));
    // Four printed digits are the fewest in use; each share is rounded once.
    if (Math.abs(parts.reduce((sum, value) => sum + value, 0) - total) > 2e-4 * size)
      wrong.push(`${shares.join(" + ")} is not ${whole}`);
  };
  for (const name of ["Cd", "Cs", "Cl"]) test(name, [`${name}(f)`, `${name}(r)`]);
  if (history.dialect === "F5" || history.dialect === "F6") {
    for (const axis of ["x", "y", "z"])
      test(
        `total_${axis}`,
        ["pressure", "viscous", "porous"].map((part) => `${part}_${axis}`),
      );
  }
  if (wrong.length === 0) return [];
  return [
    finding(
      "columns-disagree",
      "warning",
      `in the last row of ${history.object} ${wrong.join(" and ")}: the columns are not what the header calls them`,
      "Check which program wrote the file and whether it was edited.",
      { count: wrong.length },
    ),
  ];
}

function checkReference(history: History): Finding[] {
  const { header } = history;
  if (!Object.entries(exampleReference).every(([key, value]) => header[key] === value)) return [];
  return [
    finding(
      "example-reference",
      "warning",
      "magUInf 20, lRef 1.42 and Aref 0.75 are the reference values of a well-known example case",
      "If the body is another one, scale the coefficients by the ratio of 0.5 U^2 A, or give the right reference.",
    ),
  ];
}

function checkSign(history: History): Finding[] {
  const drag = history.columns.find((column) => column.name === "Cd")?.values;
  if (history.layout !== "coefficients" || drag === undefined) return [];
  const tail = drag.subarray(Math.floor(history.rows * 0.9));
  let sum = 0;
  for (const value of tail) sum += value;
  if (!(sum < 0)) return [];
  return [
    finding(
      "negative-drag",
      "warning",
      `the drag coefficient of ${history.object} is negative at the end (${(sum / tail.length).toPrecision(3)})`,
      "On a whole vehicle this means a wrong drag direction or a diverging run; on a single part it can be right.",
    ),
  ];
}

/** Means count rows; where the rows of the second half are unevenly spaced they are no means over time. */
function checkSteps(history: History): Finding[] {
  const time = history.columns[0]!.values;
  let least = Number.POSITIVE_INFINITY;
  let most = 0;
  for (let row = Math.max(1, Math.floor(history.rows / 2)); row < history.rows; row += 1) {
    const step = time[row]! - time[row - 1]!;
    if (step < least) least = step;
    if (step > most) most = step;
  }
  if (!(most > unevenSteps * least)) return [];
  return [
    finding(
      "uneven-steps",
      "note",
      `the rows of ${history.object} are unevenly spaced (steps from ${least.toPrecision(3)} to ${most.toPrecision(3)}): means count rows, not time`,
      "Write at a fixed interval if means over time are wanted.",
    ),
  ];
}
