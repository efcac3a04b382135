import { inputProblem } from "../errors.js";
import type { Finding } from "../finding.js";
import { metresPer } from "../geometry/place.js";
import type { Survey } from "../geometry/survey.js";
import type { TriangleSet } from "../geometry/triangle-set.js";
import { dot } from "../geometry/vector.js";
import { drawBody, fine, type SeenFrom, viewIn } from "./body-image.js";
import { blankCanvas, type Canvas, type Colour, line, plate, ring, text } from "./canvas.js";
import { shownName, textWidth } from "./letters.js";
import { colourPng } from "./png.js";
import type { Seen, View } from "./raster.js";
import { channels, inkTone, severityTones, toneOf } from "./tones.js";

export type { SeenFrom } from "./body-image.js";

export interface PictureWishes {
  seen: SeenFrom;
  /** pixels, 400 to 6000; 1600 where it is not given */
  width?: number;
}

const paper: Colour = [252, 251, 248];
const ink = channels(inkTone);
const soft: Colour = [92, 100, 104];
const mostParts = 60;
const mostFindings = 40;

/**
 * Which view a picture file is of, by the end of its name before the extension: `pickup-front.png` is seen from the front.
 *
 * @throws Problem(input) `picture-name` for a name that ends otherwise or is no `.png`.
 */
export function viewNamed(path: string): SeenFrom {
  const name = path.split(/[\\/]/).at(-1)!;
  const found = /(?:^|[^a-z])(front|side|plan)\.png$/i.exec(name);
  if (found) return found[1].toLowerCase() as SeenFrom;
  throw inputProblem({
    code: "picture-name",
    message: `The name of the picture ${shownName(name, 60)} does not say which view it is to show.`,
    remedy: "End it in front.png, side.png or plan.png, such as pickup-front.png.",
  });
}

/**
 * An orthographic picture of a body as the bytes of a PNG: parts in their tones, dimensions, scale bar, legend, findings as numbered
 * rings (dashed where the body hides the place). `set` in the unit and axes of its files, `survey` that of the same body. Pure.
 */
export function bodyPicture(set: TriangleSet, survey: Survey, { seen, width = 1600 }: PictureWishes): Uint8Array {
  const w = Math.max(400, Math.min(6000, Math.round(width)));
  const size = Math.max(7, Math.round(w / 133));
  const view = viewIn(survey, seen, fine * w, fine * 0.62 * w, { side: fine * 11 * size, ends: fine * 3.5 * size });
  const bodyHeight = view.height / fine;
  const parts = set.parts.slice(0, mostParts);
  const listed = survey.findings.slice(0, mostFindings);
  const columns = Math.max(1, Math.min(4, Math.floor(w / (24 * size)), parts.length));
  const row = 2.1 * size;
  const legendRows = Math.ceil(parts.length / columns) + (set.parts.length > mostParts ? 1 : 0);
  const findingRows = listed.length === 0 ? 1 : listed.length + (survey.findings.length > mostFindings ? 1 : 0);
  const legendTop = bodyHeight + 8.5 * size;
  const findingTop = legendTop + (legendRows + 1.9) * row;
  const canvas = blankCanvas(w, Math.ceil(findingTop + (findingRows + 1.6) * row), paper);

  const looked = drawBody(canvas, set, view);
  dimensions(canvas, survey, seen, view, size);
  markFindings(canvas, listed, survey, view, looked, size);
  const left = 3 * size;
  text(canvas, titles[seen], left, 2.4 * size, size, ink);
  heading(canvas, "Parts", left, legendTop, size);
  parts.forEach(({ name }, part) => {
    const x = left + (part % columns) * ((w - 2 * left) / columns);
    const y = legendTop + (Math.floor(part / columns) + 1.2) * row;
    plate(canvas, [x, y - size, x + 1.8 * size, y + 0.15 * size], 2, ink, 0.6);
    plate(canvas, [x + 1, y - size + 1, x + 1.8 * size - 1, y + 0.15 * size - 1], 1, channels(toneOf(part)));
    text(canvas, fitted(shownName(name), (w - 2 * left) / columns - 4 * size, size), x + 2.6 * size, y, size, ink);
  });
  if (set.parts.length > mostParts)
    text(canvas, `and ${set.parts.length - mostParts} more parts`, left, legendTop + (legendRows + 0.2) * row, size, soft);
  heading(canvas, "Findings", left, findingTop, size);
  if (listed.length === 0) text(canvas, "none", left, findingTop + 1.2 * row, size, soft);
  for (const [index, each] of listed.entries()) listFinding(canvas, each, index + 1, left, findingTop + (index + 1.2) * row, size);
  if (survey.findings.length > mostFindings)
    text(
      canvas,
      `and ${survey.findings.length - mostFindings} more findings`,
      left,
      findingTop + (findingRows + 0.2) * row,
      size,
      soft,
    );
  return colourPng(canvas.width, canvas.height, canvas.rgb);
}

const titles: Record<SeenFrom, string> = {
  front: "Front: seen from ahead, looking rearward",
  side: "Side: seen from the vehicle's left",
  plan: "Plan: seen from above, front to the left",
};

function heading(canvas: Canvas, words: string, x: number, y: number, size: number): void {
  text(canvas, words, x, y, size, soft);
  line(canvas, [x, y + 0.7 * size], [canvas.width - x, y + 0.7 * size], 1, soft, 0.5);
}

function listFinding(canvas: Canvas, each: Finding, number: number, x: number, y: number, size: number): void {
  badge(canvas, number, [x + 1.2 * size, y - size / 2], each.severity, size);
  const where = each.places.length === 0 ? ", no place" : "";
  const part = each.part === null ? "" : `, ${shownName(each.part)}`;
  const words = `${each.severity}: ${each.code}${part}${each.count > 1 ? `, ${each.count} times` : ""}${where}`;
  text(canvas, fitted(words, canvas.width - 2 * x - 4 * size, size), x + 3.4 * size, y, size, ink);
}

/** As much of a text as fits into a width. */
function fitted(words: string, width: number, size: number): string {
  if (textWidth(words, size) <= width) return words;
  let letters = [...words];
  while (letters.length > 0 && textWidth(`${letters.join("")}...`, size) > width) letters = letters.slice(0, -1);
  return `${letters.join("")}...`;
}

/** The outer measures beside and below the body, and the scale bar. */
function dimensions(canvas: Canvas, survey: Survey, seen: SeenFrom, view: View, size: number): void {
  const { length, width, height } = survey.extents;
  const across = seen === "front" ? { name: "width", value: width } : { name: "length", value: length };
  const upwards = seen === "plan" ? { name: "width", value: width } : { name: "height", value: height };
  const perMetre = view.scale / metresPer[survey.unit.value] / fine;
  const [cx, cy] = [canvas.width / 2, view.height / fine / 2];
  const [hx, hy] = [(across.value * perMetre) / 2, (upwards.value * perMetre) / 2];
  const y = cy + hy + 2.2 * size;
  arrowed(canvas, [cx - hx, y], [cx + hx, y], size);
  const below = `${across.name} ${across.value.toFixed(3)} m`;
  text(canvas, below, cx - textWidth(below, size) / 2, y + 2 * size, size, ink);
  const x = cx - hx - 2.2 * size;
  arrowed(canvas, [x, cy - hy], [x, cy + hy], size);
  const beside = `${upwards.value.toFixed(3)} m`;
  const edge = Math.max(2, x - size - Math.max(textWidth(beside, size), textWidth(upwards.name, size)));
  const place = Math.max(cy, 4.5 * size);
  text(canvas, upwards.name, edge, place - 0.4 * size, size, ink);
  text(canvas, beside, edge, place + 1.4 * size, size, ink);

  const step = roundLength((0.2 * canvas.width) / perMetre);
  const from = 3 * size;
  const bar = view.height / fine + 4.6 * size;
  line(canvas, [from, bar], [from + step * perMetre, bar], 3, ink);
  for (const at of [0, 0.5, 1])
    line(canvas, [from + at * step * perMetre, bar - size / 2], [from + at * step * perMetre, bar + size / 2], 1.5, ink);
  text(canvas, `${Number(step.toPrecision(3))} m`, from + step * perMetre + size, bar + size / 2, size, ink);
  const all = `length ${length.toFixed(3)} m   width ${width.toFixed(3)} m   height ${height.toFixed(3)} m`;
  text(canvas, all, canvas.width - from - textWidth(all, size), bar + size / 2, size, ink);
}

/** The largest 1, 2 or 5 times a power of ten that is not above a length. */
function roundLength(most: number): number {
  const power = 10 ** Math.floor(Math.log10(most));
  return (most / power >= 5 ? 5 : most / power >= 2 ? 2 : 1) * power;
}

function arrowed(canvas: Canvas, from: number[], to: number[], size: number): void {
  line(canvas, from, to, 1.2, soft);
  const [dx, dy] = [Math.sign(to[0] - from[0]), Math.sign(to[1] - from[1])];
  for (const [end, way] of [
    [from, 1],
    [to, -1],
  ] as [number[], number][]) {
    line(
      canvas,
      [end[0] - dy * 0.7 * size, end[1] - dx * 0.7 * size],
      [end[0] + dy * 0.7 * size, end[1] + dx * 0.7 * size],
      1.2,
      soft,
    );
    for (const side of [-0.35, 0.35])
      line(canvas, end, [end[0] + (way * dx + side * dy) * 0.8 * size, end[1] + (way * dy + side * dx) * 0.8 * size], 1.2, soft);
  }
}

/** Rings first, numbers over them, each number in the first free spot around its ring. */
function markFindings(canvas: Canvas, findings: Finding[], survey: Survey, view: View, seen: Seen, size: number): void {
  const metre = 1 / metresPer[survey.unit.value];
  const { length, width, height } = survey.extents;
  const near = 0.004 * Math.max(length, width, height) * metre;
  const radius = 1.1 * size;
  const taken: number[][] = [];
  const marks: { number: number; severity: Finding["severity"]; at: number[]; hidden: boolean }[] = [];
  findings.forEach(({ severity, places }, index) => {
    const own: number[][] = [];
    for (const place of places) {
      const x = (view.originX + view.scale * metre * dot(place, view.right)) / fine;
      const y = (view.originY - view.scale * metre * dot(place, view.up)) / fine;
      if (!(x >= 0 && y >= 0 && x < canvas.width && y < view.height / fine)) continue;
      // One ring for places of a finding that fall together in this view.
      if (own.some(([ox, oy]) => Math.hypot(ox - x, oy - y) < radius)) continue;
      own.push([x, y]);
      const pixel = Math.min(view.height - 1, Math.floor(fine * y)) * view.width + Math.min(view.width - 1, Math.floor(fine * x));
      const hidden = seen.triangle[pixel] !== 0 && seen.depth[pixel] > dot(place, view.eye) * metre + near;
      marks.push({ number: index + 1, severity, at: [x, y], hidden });
    }
  });
  for (const { severity, at, hidden } of marks) {
    ring(canvas, at, radius, 0.5 * size, paper, hidden ? 0.4 : 0.9);
    ring(canvas, at, radius, 0.24 * size, channels(severityTones[severity]), hidden ? 0.9 : 1, hidden ? 5 : 0);
  }
  for (const { number, severity, at } of marks) {
    const spot = freeSpot(canvas, at, radius, size, view.height / fine, taken);
    if (Math.hypot(spot[0] - at[0], spot[1] - at[1]) > 3 * radius) line(canvas, at, spot, 1, channels(severityTones[severity]));
    taken.push(spot);
    badge(canvas, number, spot, severity, size);
  }
}

function freeSpot(canvas: Canvas, [x, y]: number[], radius: number, size: number, bottom: number, taken: number[][]): number[] {
  for (const distance of [2.1, 3.6, 5.2, 7])
    for (let turn = 0; turn < 8; turn++) {
      const angle = ((turn * 3 - 1) * Math.PI) / 4;
      const spot = [x + distance * radius * Math.cos(angle), y + distance * radius * Math.sin(angle)];
      const inside = spot[0] > 2 * size && spot[0] < canvas.width - 2 * size && spot[1] > 2 * size && spot[1] < bottom;
      if (inside && taken.every(([tx, ty]) => Math.abs(tx - spot[0]) > 2.5 * size || Math.abs(ty - spot[1]) > 1.9 * size))
        return spot;
    }
  return [x, y];
}

function badge(canvas: Canvas, number: number, [x, y]: number[], severity: Finding["severity"], size: number): void {
  const words = String(number);
  const small = 0.85 * size;
  const half = Math.max(0.85 * size, textWidth(words, small) / 2 + 0.4 * size);
  plate(canvas, [x - half - 1, y - 0.85 * size - 1, x + half + 1, y + 0.85 * size + 1], 0.5 * size, paper);
  plate(canvas, [x - half, y - 0.85 * size, x + half, y + 0.85 * size], 0.45 * size, channels(severityTones[severity]));
  text(canvas, words, x - textWidth(words, small) / 2, y + small / 2, small, [255, 255, 255]);
}
