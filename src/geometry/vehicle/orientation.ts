import type { Measures } from "../measures.js";
import type { Orientation, SignedAxis } from "../survey.js";
import type { Box } from "../vector.js";
import { nameHints } from "./part-words.js";

/** What is known of a body before its axes are. Mesh unit and file axes. */
export interface AxesEvidence {
  bounds: Box;
  /** 1 per part */
  names: string[];
  measures: Measures[];
  /** Part numbers of wheels. */
  wheels: number[];
  /** Whether the body is symmetrical about, or cut open by, a plane across this axis (0, 1, 2). Asked only where it matters. */
  mirrored: (axis: number) => "whole" | "cut" | "no";
}

export interface AxesGuess {
  travel: SignedAxis;
  up: SignedAxis;
  /** In words: what speaks for it. */
  basis: string;
  certain: boolean;
  /** Evidence against what was asked for, in words; empty when there is none. */
  doubts: string[];
}

const LETTERS = ["x", "y", "z"] as const;
const AXES = [0, 1, 2];
/** Extents that differ by less than this say nothing about which is which. */
const CLEARLY = 1.15;

interface Line {
  axis: number;
  reason: string;
  certain: boolean;
}

/**
 * Which axis of the file the vehicle drives along and which points up. What is asked for is taken as it is; the rest is guessed:
 * the axle line from the shape of the wheels, else the axis of mirror symmetry, else length > width > height; the ground where the
 * wheels are; the nose by the names of parts. Where nothing speaks for a sign, x rearward and z up (SAE J1594) decide, and the guess
 * is not certain.
 */
export function guessAxes(evidence: AxesEvidence, asked: Partial<Orientation>): AxesGuess {
  const travelAxis = asked.travel === undefined ? undefined : "xyz".indexOf(asked.travel[1]);
  const upAxis = asked.up === undefined ? undefined : "xyz".indexOf(asked.up[1]);
  const lines = linesOf(evidence, travelAxis, upAxis);
  const upSign = upSignOf(evidence, lines.up.axis);
  const travelSign = travelSignOf(evidence, lines.travel.axis);
  const guess = {
    travel: `${travelSign.sign > 0 ? "+" : "-"}${LETTERS[lines.travel.axis]}` as SignedAxis,
    up: `${upSign.sign > 0 ? "+" : "-"}${LETTERS[lines.up.axis]}` as SignedAxis,
  };
  const doubts: string[] = [];
  if (asked.travel !== undefined && travelSign.certain && guess.travel !== asked.travel)
    doubts.push(`travel ${asked.travel} is given, but ${travelSign.reason}`);
  if (asked.up !== undefined && upSign.certain && guess.up !== asked.up)
    doubts.push(`up ${asked.up} is given, but ${upSign.reason}`);
  const reasons = [
    asked.travel === undefined ? `${lines.travel.reason}; ${travelSign.reason}` : "travel is given",
    asked.up === undefined ? `${lines.up.reason}; ${upSign.reason}` : "up is given",
  ];
  return {
    travel: asked.travel ?? guess.travel,
    up: asked.up ?? guess.up,
    basis: asked.travel !== undefined && asked.up !== undefined ? "given" : reasons.join("; "),
    certain:
      (asked.travel !== undefined || (lines.travel.certain && travelSign.certain)) &&
      (asked.up !== undefined || (lines.up.certain && upSign.certain)),
    doubts,
  };
}

const extent = ({ min, max }: Box, axis: number): number => max[axis] - min[axis];

function linesOf(evidence: AxesEvidence, travel: number | undefined, up: number | undefined): { travel: Line; up: Line } {
  const given = (axis: number): Line => ({ axis, reason: "given", certain: true });
  if (travel !== undefined && up !== undefined) return { travel: given(travel), up: given(up) };
  const free = AXES.filter((axis) => axis !== travel && axis !== up);
  const lateral = lateralLine(evidence, free, travel === undefined);
  const rest = free.filter((axis) => axis !== lateral.axis);
  if (travel !== undefined) return { travel: given(travel), up: { ...lateral, axis: rest[0] } };
  if (up !== undefined) return { travel: { ...lateral, axis: rest[0] }, up: given(up) };
  const [a, b] = rest.sort((p, q) => extent(evidence.bounds, q) - extent(evidence.bounds, p));
  const clear = extent(evidence.bounds, a) > CLEARLY * extent(evidence.bounds, b);
  return {
    travel: { axis: a, reason: `the body is longest along ${LETTERS[a]}`, certain: clear },
    up: { axis: b, reason: lateral.reason, certain: lateral.certain && clear },
  };
}

/** The axis from side to side among those that are free. */
function lateralLine(evidence: AxesEvidence, free: number[], travelIsFree: boolean): Line {
  const { bounds } = evidence;
  const axle = axleAxis(evidence);
  if (axle !== null && free.includes(axle)) return { axis: axle, reason: `the wheels turn about ${LETTERS[axle]}`, certain: true };
  // A body is not as wide as it is long: the longest free axis is out, unless it has been taken out already.
  const byLength = free.slice().sort((p, q) => extent(bounds, q) - extent(bounds, p));
  const candidates = travelIsFree && byLength.length === 3 ? byLength.slice(1) : byLength;
  const kinds = candidates.map(evidence.mirrored);
  const mirrored = candidates.filter((_, k) => kinds[k] === "whole");
  if (mirrored.length === 1)
    return { axis: mirrored[0], reason: `the two sides are alike across ${LETTERS[mirrored[0]]}`, certain: true };
  // A floor that is missing looks like a cut as well, so a cut counts only where nothing is alike.
  const cut = candidates.filter((_, k) => kinds[k] === "cut");
  if (mirrored.length === 0 && cut.length === 1)
    return { axis: cut[0], reason: `the body is a half, cut across ${LETTERS[cut[0]]}`, certain: true };
  if (candidates.includes(1) && candidates.includes(2) && mirrored.length !== 0)
    return { axis: 1, reason: "nothing tells width from height, z was taken as the vertical", certain: false };
  const [wide, low] = candidates;
  if (low === undefined || extent(bounds, wide) > CLEARLY * extent(bounds, low))
    return { axis: wide, reason: `the body is wider than high with ${LETTERS[wide]} from side to side`, certain: false };
  const conventional = candidates.includes(2) ? candidates.find((axis) => axis !== 2) : candidates.find((axis) => axis === 2);
  return {
    axis: conventional ?? wide,
    reason: "nothing tells width from height, z was taken as the vertical where it can be",
    certain: false,
  };
}

/** The axis that the wheels turn about: the extent that is not one of two equal ones. Null unless all wheels that tell agree. */
function axleAxis({ measures, wheels }: AxesEvidence): number | null {
  const votes = new Set<number>();
  for (const wheel of wheels) {
    const size = AXES.map((axis) => extent(measures[wheel].bounds, axis));
    const different = AXES.filter((axis) => {
      const [p, q] = AXES.filter((other) => other !== axis).map((other) => size[other]);
      const off = (value: number): boolean => Math.abs(value / Math.max(p, q) - 1) > 0.25;
      return Math.abs(p - q) < 0.08 * Math.max(p, q) && off(size[axis]);
    });
    if (different.length === 1) votes.add(different[0]);
  }
  return votes.size === 1 ? [...votes][0] : null;
}

interface Sign {
  sign: 1 | -1;
  reason: string;
  certain: boolean;
}

function upSignOf({ bounds, measures, wheels }: AxesEvidence, axis: number): Sign {
  const height = extent(bounds, axis);
  const share = (value: number): number => (height > 0 ? (value - bounds.min[axis]) / height : 0.5);
  if (wheels.length > 0) {
    const low = Math.min(...wheels.map((wheel) => share(measures[wheel].bounds.min[axis])));
    const high = Math.max(...wheels.map((wheel) => share(measures[wheel].bounds.max[axis])));
    // The lower side is the one that the wheels reach down to.
    if (Math.abs(low - (1 - high)) > 0.1)
      return low < 1 - high
        ? { sign: 1, reason: `the wheels are at the low end of ${LETTERS[axis]}`, certain: true }
        : { sign: -1, reason: `the wheels are at the high end of ${LETTERS[axis]}`, certain: true };
  }
  return { sign: 1, reason: `no wheels tell which way is up; +${LETTERS[axis]} was taken`, certain: false };
}

function travelSignOf({ bounds, measures, names }: AxesEvidence, axis: number): Sign {
  const length = extent(bounds, axis);
  const place = { front: [] as number[], rear: [] as number[] };
  const example = { front: "", rear: "" };
  names.forEach((name, part) => {
    const { end } = nameHints(name);
    if (end === null || measures[part].triangles === 0) return;
    place[end].push(measures[part].areaCentroid[axis]);
    example[end] ||= name;
  });
  const mean = (values: number[]): number => values.reduce((sum, value) => sum + value, 0) / values.length;
  const middle = (bounds.min[axis] + bounds.max[axis]) / 2;
  const front = place.front.length > 0 ? mean(place.front) : null;
  const rear = place.rear.length > 0 ? mean(place.rear) : null;
  const forward = (front ?? middle) - (rear ?? middle);
  if ((front !== null || rear !== null) && Math.abs(forward) > 0.1 * length) {
    const sign = forward > 0 ? 1 : -1;
    const said = [front === null ? "" : `"${example.front}" in front`, rear === null ? "" : `"${example.rear}" behind`].filter(
      (text) => text !== "",
    );
    return {
      sign,
      reason: `the parts' names put the nose at the ${sign > 0 ? "high" : "low"} end of ${LETTERS[axis]} (${said.join(", ")})`,
      certain: true,
    };
  }
  return {
    sign: -1,
    reason: `no part's name tells front from rear; travel along -${LETTERS[axis]} was taken (x rearward, SAE J1594)`,
    certain: false,
  };
}
