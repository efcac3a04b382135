import type { Vector3 } from "../geometry/vector.js";
import { outlines } from "../picture/outlines.js";
import { png } from "../picture/png.js";
import { normalsTowards, rasterise, type Seen, type View, viewOf } from "../picture/raster.js";
import { channels, inkTone, toneOf } from "../picture/tones.js";
import type { BodySection, BodyVariant } from "./body-section.js";

/** A picture of a variant for paper and for readers without WebGL. */
export interface StillPicture {
  variant: string;
  /** which way it is looked at, in words */
  view: string;
  /** size on the page, pixels */
  width: number;
  height: number;
  /** `data:` address of a PNG */
  address: string;
}

/** From where the pictures are taken: case axes, x rearward, y right, z up. */
const eyes: { view: string; eye: Vector3 }[] = [
  { view: "from the front left, above", eye: [-0.72, -0.62, 0.42] },
  { view: "from the rear left, above", eye: [0.78, -0.55, 0.5] },
];

const pictureWidth = 520;
/** Drawn this many times as large along each side, then averaged. */
const fine = 3;

/** All variants from the same places at the same scale, so that they can be laid side by side: one list per place. */
export function stillPictures({ variants }: BodySection): StillPicture[][] {
  return eyes.map(({ view, eye }) => {
    const camera = viewOf(
      variants.map(({ set }) => set),
      eye,
      fine * pictureWidth,
      2 * fine,
    );
    // Whole pixels after averaging.
    const height = Math.ceil(camera.height / fine);
    const framed = { ...camera, height: fine * height };
    return variants.map((variant) => ({
      variant: variant.name,
      view,
      width: pictureWidth,
      height,
      address: `data:image/png;base64,${Buffer.from(picture(variant, framed, height)).toString("base64")}`,
    }));
  });
}

const shades = 20;
const inks = 4;
const tonesInPalette = 12;
const firstTone = 1 + inks;

/** What the pixels of one picture are made from. */
interface Drawing {
  width: number;
  seen: Seen;
  /** 1 per fine pixel where a line is drawn */
  ink: Uint8Array;
  /** 1 per triangle: 0 dark .. 1 light, and its tone */
  light: Float32Array;
  tone: Uint8Array;
}

function picture({ set, parts }: BodyVariant, camera: View, height: number): Uint8Array {
  const seen = rasterise(set, camera);
  const normals = normalsTowards(set.positions, camera.eye);
  const drawing: Drawing = {
    width: camera.width,
    seen,
    ink: outlines(seen, camera, set.partOf, normals),
    light: brightness(normals, camera),
    tone: Uint8Array.from(set.partOf, (part) => parts[part]!.tone % tonesInPalette),
  };
  const pixels = new Uint8Array(pictureWidth * height);
  for (let y = 0; y < height; y++) for (let x = 0; x < pictureWidth; x++) pixels[y * pictureWidth + x] = average(x, y, drawing);
  return png({ width: pictureWidth, height, pixels, palette: palette() });
}

const votes = new Uint8Array(tonesInPalette);

/** Index of the colour of one pixel from the finer ones in it: its tone is that of most, its shade their mean, darkened by ink. */
function average(x: number, y: number, { width, seen, ink, light, tone }: Drawing): number {
  votes.fill(0);
  let covered = 0;
  let inked = 0;
  let sum = 0;
  for (let row = fine * y; row < fine * (y + 1); row++)
    for (let at = row * width + fine * x; at < row * width + fine * (x + 1); at++) {
      const triangle = seen.triangle[at];
      if (triangle === 0) continue;
      covered++;
      inked += ink[at];
      votes[tone[triangle - 1]]++;
      sum += light[triangle - 1];
    }
  const all = fine * fine;
  if (covered === 0) return 0;
  if (covered < 0.7 * all || inked > 0.55 * all) return Math.max(1, Math.round((inks * Math.min(covered, 0.8 * all)) / all));
  let most = 0;
  for (let k = 1; k < tonesInPalette; k++) if (votes[k] > votes[most]) most = k;
  const shade = (sum / covered) * (1 - 0.75 * (inked / all)) * (shades - 1);
  return firstTone + most * shades + Math.max(0, Math.min(shades - 1, Math.floor(shade + threshold(x, y))));
}

/** Ordered dither (Bayer 1973): between two shades, so many pixels take the lighter one that the mean is right. */
const bayer = [0, 8, 2, 10, 12, 4, 14, 6, 3, 11, 1, 9, 15, 7, 13, 5];
const threshold = (x: number, y: number): number => (bayer[4 * (y & 3) + (x & 3)]! + 0.5) / 16;

/** 1 per triangle, 0..1: a main light from above the eye's left, a weak one from the eye. */
function brightness(normals: Float32Array, { eye, right, up }: View): Float32Array {
  const light = new Float32Array(normals.length / 3);
  for (let t = 0, at = 0; t < light.length; t++, at += 3) {
    const along = (direction: Vector3) =>
      normals[at] * direction[0] + normals[at + 1] * direction[1] + normals[at + 2] * direction[2];
    const towards = along(eye);
    light[t] = 0.22 + 0.24 * towards + 0.58 * Math.max(0, 0.4 * towards - 0.35 * along(right) + 0.85 * along(up));
  }
  return light;
}

/** Nothing, ink in growing opacity, then every tone from dark to light. */
function palette(): Uint8Array {
  const colours: number[] = [0, 0, 0, 0];
  for (let k = 1; k <= inks; k++) colours.push(...channels(inkTone), Math.round((255 * k) / inks));
  for (let tone = 0; tone < tonesInPalette; tone++)
    for (let shade = 0; shade < shades; shade++) {
      const light = 0.3 + (0.85 * shade) / (shades - 1);
      colours.push(...channels(toneOf(tone)).map((value) => Math.min(255, Math.round(value * light))), 255);
    }
  return Uint8Array.from(colours);
}
