import type { Survey } from "../geometry/survey.js";
import { LONGEST_NAME, nameFault } from "./names.js";
import { matchesPattern } from "./part-rules.js";

/** What a draft is made from: the study's name, the files as they are to stand in it, and the survey of the body they make. */
export interface DraftSource {
  name: string;
  files: string[];
  survey: Survey;
}

/** Speed of a draft, and the cells it starts with: a fineness at which a bluff body's drag came out within 2 % (measured with the solver). */
const SPEED = "108 km/h";
const CELLS = "300 thousand";

/**
 * Text of a study file for one body, filled in from its survey. Every value that was guessed carries a `# GUESS: reason` comment
 * on its line. The text can be read back by `parseStudy` as it is.
 */
export function draftStudy({ name, files, survey }: DraftSource): string {
  const { extents, unit, axes, symmetry } = survey;
  const size = [extents.length, extents.width, extents.height].map((value) => significant(value)).join(" x ");
  const half = symmetry.kind === "half";
  const wholeArea = (half ? 2 : 1) * survey.frontalArea.value;
  return [
    `# Written by dragledger from ${files.length === 1 ? "one file" : `${files.length} files`}: ${survey.parts.length} parts, ${survey.triangles} triangles,`,
    `# ${size} m (length x width x height), frontal area ${significant(wholeArea)} m2${half ? " (twice that of the half body)" : ""}.`,
    "# Values marked GUESS were not given: confirm or correct each.",
    "",
    `study: ${quoted(fitName(name))}`,
    `question: ${quoted("Does the change pay in drag or lift, and where?")}   # GUESS: say what this study is to answer`,
    "air: { temperature: 15 degC, pressure: 1013.25 hPa, humidity: 0 % }   # GUESS: standard air at sea level",
    `speed: ${SPEED}   # GUESS: a usual road speed; one or a list`,
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
    `  up: ${quoted(axes.up)}${axes.certain ? "" : `   # GUESS: ${comment(axes.basis)}`}`,
    wheelbaseLine(survey),
    "  reference-area: auto   # frontal area of the baseline, held for all variants",
    ...partLines(survey),
    "mesh:",
    `  cells: ${CELLS}   # GUESS: a first look on a laptop; raise it for the answer`,
    `  half: auto   # ${symmetryText(symmetry.kind)}`,
    "  y-plus: 50",
    "  layers: 3",
    "solver:",
    "  turbulence: k-omega-SST",
    "  mode: steady",
    "  most-iterations: 3000",
    "stop: { drag: 1 count, lift: 3 counts, confidence: 95 % }   # 1 count = 0.001",
    "",
  ].join("\n");
}

function wheelbaseLine(survey: Survey): string {
  if (survey.wheelbase !== null)
    return `  wheelbase: auto   # ${significant(survey.wheelbase)} m, from ${survey.wheels.length} wheels that were found`;
  const reason =
    survey.wheels.length === 0
      ? "no wheels were found, so moments use the overall length; give a length if there are axles"
      : `${survey.wheels.length} wheel parts make no two axles, so moments use the overall length; give a length if there are axles`;
  return `  wheelbase: none   # GUESS: ${reason}`;
}

function partLines(survey: Survey): string[] {
  const wheels = [...new Set(survey.wheels.map((wheel) => wheel.part))];
  if (wheels.length === 0) return ["# No wheel parts were found: no part turns with the road."];
  const others = survey.parts.map((part) => part.name).filter((name) => !wheels.includes(name));
  const pattern = commonPattern(wheels, others);
  const match = pattern === null ? `[${wheels.map(quoted).join(", ")}]` : quoted(pattern);
  return [
    "parts:",
    `  wheels: { match: ${match}, rotating: true }   # GUESS: round parts at the ground: ${comment(wheels.join(", "))}`,
  ];
}

/** The shortest pattern `start*` that matches all names and none of the others; null when there is none worth having. */
function commonPattern(names: string[], others: string[]): string | null {
  if (names.length === 1) return null;
  let start = names[0]!;
  for (const name of names) while (!name.startsWith(start)) start = start.slice(0, -1);
  if (start.length < 3 || start.includes("*")) return null;
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

/** A text for a comment: one line, without control characters, cut at 160. */
function comment(text: string): string {
  const line = text.replace(/[\p{Cc}\p{Cf}\u2028\u2029]+/gu, " ").trim();
  return line.length > 160 ? `${line.slice(0, 157)}...` : line;
}

const significant = (value: number): string => String(Number(value.toPrecision(4)));
