import { glyphOf } from "./letters.js";

export type Colour = readonly [number, number, number];

/** A picture in memory: 3 bytes per pixel, red, green, blue, rows from the top. */
export interface Canvas {
  width: number;
  height: number;
  rgb: Uint8Array;
}

export function blankCanvas(width: number, height: number, colour: Colour): Canvas {
  const rgb = new Uint8Array(3 * width * height);
  for (let at = 0; at < rgb.length; at += 3) rgb.set(colour, at);
  return { width, height, rgb };
}

/** Lays `share` (0..1) of a colour over a pixel. */
function mix({ width, rgb }: Canvas, x: number, y: number, colour: Colour, share: number): void {
  const at = 3 * (y * width + x);
  for (let k = 0; k < 3; k++) rgb[at + k] = Math.round(rgb[at + k] + share * (colour[k] - rgb[at + k]));
}

/** Every pixel within a box is covered by as much as `distance` (pixels, negative inside) says. */
function fillShape(
  canvas: Canvas,
  [left, top, right, bottom]: number[],
  colour: Colour,
  opacity: number,
  distance: (x: number, y: number) => number,
): void {
  for (let y = Math.max(0, Math.floor(top)); y <= Math.min(canvas.height - 1, Math.ceil(bottom)); y++)
    for (let x = Math.max(0, Math.floor(left)); x <= Math.min(canvas.width - 1, Math.ceil(right)); x++) {
      const share = Math.min(1, 0.5 - distance(x + 0.5, y + 0.5));
      if (share > 0) mix(canvas, x, y, colour, share * opacity);
    }
}

/** A straight line with round ends, edges smoothed. Pixels. */
export function line(canvas: Canvas, from: number[], to: number[], thickness: number, colour: Colour, opacity = 1): void {
  const [x0, y0] = from;
  const [dx, dy] = [to[0] - x0, to[1] - y0];
  const square = dx * dx + dy * dy;
  const half = thickness / 2;
  const reach = half + 1;
  const box = [Math.min(x0, to[0]) - reach, Math.min(y0, to[1]) - reach, Math.max(x0, to[0]) + reach, Math.max(y0, to[1]) + reach];
  fillShape(canvas, box, colour, opacity, (x, y) => {
    const share = square === 0 ? 0 : Math.max(0, Math.min(1, ((x - x0) * dx + (y - y0) * dy) / square));
    return Math.hypot(x - x0 - share * dx, y - y0 - share * dy) - half;
  });
}

/** A circle's line; `dashes` of equal length where it is not to be whole. Pixels. */
export function ring(
  canvas: Canvas,
  [cx, cy]: number[],
  radius: number,
  thickness: number,
  colour: Colour,
  opacity = 1,
  dashes = 0,
): void {
  const reach = radius + thickness + 1;
  fillShape(canvas, [cx - reach, cy - reach, cx + reach, cy + reach], colour, opacity, (x, y) => {
    if (dashes > 0 && Math.floor(((Math.atan2(y - cy, x - cx) + Math.PI) / Math.PI) * dashes) % 2 === 1) return 1;
    return Math.abs(Math.hypot(x - cx, y - cy) - radius) - thickness / 2;
  });
}

/** A filled box with rounded corners. Pixels. */
export function plate(canvas: Canvas, [left, top, right, bottom]: number[], corner: number, colour: Colour, opacity = 1): void {
  const [cx, cy] = [(left + right) / 2, (top + bottom) / 2];
  const [hx, hy] = [(right - left) / 2 - corner, (bottom - top) / 2 - corner];
  fillShape(canvas, [left - 1, top - 1, right + 1, bottom + 1], colour, opacity, (x, y) => {
    const [dx, dy] = [Math.abs(x - cx) - hx, Math.abs(y - cy) - hy];
    return Math.hypot(Math.max(0, dx), Math.max(0, dy)) + Math.min(0, Math.max(dx, dy)) - corner;
  });
}

/** A line of text; `x`, `y`: left end of its base line; `size`: height of capitals. Pixels. */
export function text(canvas: Canvas, words: string, x: number, y: number, size: number, colour: Colour): void {
  const unit = size / 6;
  const thickness = Math.max(1.1, size / 7.5);
  let left = x;
  for (const letter of words) {
    const { strokes, advance } = glyphOf(letter);
    const place = (stroke: number[], k: number) => [left + stroke[k] * unit, y + (stroke[k + 1] - 6) * unit];
    for (const stroke of strokes)
      for (let k = 0; k + 3 < stroke.length; k += 2) line(canvas, place(stroke, k), place(stroke, k + 2), thickness, colour);
    left += advance * unit;
  }
}
