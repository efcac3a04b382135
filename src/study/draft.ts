import type { Survey } from "../geometry/survey.js";
import { LONGEST_NAME, nameFault } from "./names.js";
import { matchesPattern } from "./part-rules.js";

/** What a draft is made from: the study's name, the files as they are to stand in it, and the survey of the body they make. */
export interface DraftSource {
  name: string;
  files: string[];
  survey: Survey;
}

/**
 * Cells of a draft, for one half of a symmetric body and for a whole one. With 300 thousand for the half the drag of a bluff body came
 * out 2 % high (measured with the solver).
 */
const CELLS_HALF = "300 thousand";
const CELLS_WHOLE = "600 thousand";

/**
 * Text of a study file for one body, filled in from its survey. Every value that was guessed carries a `# GUESS: reason` comment
 * on its line. The text can be read back by `parseStudy` as it is.
 */
export function draftStudy({ name, files, survey }: DraftSource): string {
  const { extents, unit, axes, symmetry } = survey;
  const size = [extents.length, extents.width, extents.height].map((value) => significant(value)).join(" x ");
  const half = symmetry.kind === "half";
  const wholeArea = (half ? 2 : 1) * survey.frontalArea.value;
  const text = [
    `# Written by dragledger from ${counted(files.length, "file")}: ${counted(survey.parts.length, "part")}, ${counted(survey.triangles, "triangle")},`,
    `# ${size} m (length x width x height), frontal area ${significant(wholeArea)} m2${half ? " (twice that of the half body)" : ""}.`,
    ...fitnessLines(survey),
    "# What is marked GUESS was not given: confirm or correct it.",
    "",
    `study: ${quoted(fitName(name))}`,
    `question: ${quoted("Does the change pay in drag or lift, and where?")}   # GUESS: say what this study is to answer`,
    "air: { temperature: 15 degC, pressure: 1013.25 hPa, humidity: 0 % }   # GUESS: standard air at sea level",
    `speed: 108 km/h   # GUESS: a usual road speed; one or a list`,
    "ground: moving   # GUESS: as on the road; fixed for a tunnel with a standing floor",
    "baseline: baseline",
    "variants:",
    "  baseline:",
    "    files:",
    ...files.map((file) => `      - ${quoted(file)}`),
    "  # Add the changed body as a second variant, with the files that it is made of.",
    "body:",
    `  unit: ${unit.value}${unit.certain ? "" : `   # GUESS: ${comment(unit.basis)}`}`,
    `  travel: ${quoted(axes.travel)}${axes.certain ? "" : `   # GUESS: ${comment(axes.basis)}`}`,
    `  up: ${quoted(axes.up)}${axes.certain ? "" : "   # GUESS: as for travel"}`,
    wheelbaseLine(survey),
    "  reference-area: auto   # frontal area of the baseline, held for all variants",
    ...partLines(survey),
    "mesh:",
    `  cells: ${symmetry.kind === "none" ? CELLS_WHOLE : CELLS_HALF}   # GUESS: a first look on a laptop; raise it for the answer`,
    `  half: auto   # ${symmetryText(symmetry.kind)}`,
    "  # From here on: what is taken when nothing is said.",
    "  y-plus: 50",
    "  layers: 3",
    "solver: { turbulence: k-omega-SST, mode: steady, start: ladder, most-iterations: 3000 }",
    "stop: { drag: 1 count, lift: 3 counts, confidence: 95 % }   # half-widths; 1 count = 0.001",
  ];
  return `${text.join("\n")}\n`;
}

const counted = (count: number, noun: string): string => `${count} ${noun}${count === 1 ? "" : "s"}`;

function fitnessLines({ verdict, findings }: Survey): string[] {
  if (verdict === "fit") return [];
  const count = (severity: string): number => findings.filter((found) => found.severity === severity).length;
  return [
    `# The body is ${verdict}: ${counted(count("error"), "error")}, ${counted(count("warning"), "warning")}; dragledger inspect says which.`,
  ];
}

function wheelbaseLine(survey: Survey): string {
  if (survey.wheelbase !== null)
    return `  wheelbase: auto   # ${significant(survey.wheelbase)} m, from ${survey.wheels.length} wheels that were found`;
  const reason =
    survey.wheels.length === 0
      ? "no wheels were found, so moments use the overall length; give a length if there are axles"
      : `${survey.wheels.length} wheel ${survey.wheels.length === 1 ? "part makes" : "parts make"} no two axles, so moments use the overall length; give a length if there are axles`;
  return `  wheelbase: none   # GUESS: ${reason}`;
}

function partLines(survey: Survey): string[] {
  const found = [...new Set(survey.wheels.map((wheel) => wheel.part))];
  const fixed = survey.parts.map((part) => part.name).filter((name) => !found.includes(name));
  // A name that holds * is a pattern, too; it must not make other parts turn.
  const wheels = found.filter((name) => name !== "" && !fixed.some((other) => matchesPattern(name, other)));
  if (wheels.length === 0) return ["# No wheel parts were found: no part turns with the road."];
  const pattern = commonPattern(wheels, fixed);
  const match = pattern === null ? `[${wheels.map(quoted).join(", ")}]` : quoted(pattern);
  return [
    "parts:",
    `  wheels: { match: ${match}, rotating: true }   # GUESS: round parts at the ground: ${comment(wheels.join(", "))}`,
  ];
}

/**
 * A pattern `start*` that matches all names and none of the others; null when there is none that is safe: a start that does not
 * speak of wheels (`front-*`) would take along parts that a later variant brings.
 */
function commonPattern(names: string[], others: string[]): string | null {
  if (names.length === 1) return null;
  let start = names[0]!;
  for (const name of names) while (!name.startsWith(start)) start = start.slice(0, -1);
  if (!/wheel|tyre|tire/i.test(start) || start.includes("*")) return null;
  const pattern = `${start}*`;
  return others.some((other) => matchesPattern(pattern, other)) ? null : pattern;
}

function symmetryText(kind: Survey["symmetry"]["kind"]): string {
  if (kind === "whole") return "the body is symmetric: auto computes one half";
  return kind === "half"
    ? "the files hold one half of the body: auto computes that half"
    : "the body is not symmetric: auto computes all of it";
}

/** A name that `nameFault` accepts, as near to the wish as can be. */
function fitName(name: string): string {
  const kept = name
    .normalize("NFC")
    .replace(/[^\p{L}\p{M}\p{N} _.+-]+/gu, "-")
    .replace(/\.{2,}/g, ".")
    .replace(/^[^\p{L}\p{N}]+/u, "")
    .slice(0, LONGEST_NAME)
    .trim();
  return nameFault(kept) === null ? kept : "study";
}

/** A YAML scalar: plain where that is safe, else in double quotes (JSON strings are YAML). */
function quoted(text: string): string {
  if (/^[A-Za-z][A-Za-z0-9_./ -]*$/.test(text) && !/ $|^(true|false|null|yes|no|on|off|y|n)$/i.test(text)) return text;
  return JSON.stringify(text).replace(
    /[\u007f-\u009f\u2028\u2029\ufeff]/g,
    (letter) => `\\u${letter.charCodeAt(0).toString(16).padStart(4, "0")}`,
  );
}

/** A text for a comment: one line, without control characters, cut at 300. */
function comment(text: string): string {
  const line = text.replace(/[\p{Cc}\p{Cf}\u2028\u2029]+/gu, " ").trim();
  return line.length > 300 ? `${line.slice(0, 297)}...` : line;
}

const significant = (value: number): string => String(Number(value.toPrecision(4)));
