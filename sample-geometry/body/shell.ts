import type { Vector3 } from "../../src/geometry/vector.js";
import { bedEnd } from "./dimensions.js";
import { fillHalfEnd } from "./end-cap.js";
import type { Point } from "./flat-region.js";
import { type Corner, type Pieces, roundedLine } from "./rounded-line.js";
import { plateau } from "./shapes.js";
import { type LinePoint, shellLines } from "./shell-lines.js";
import { Surface } from "./surface.js";

/** Sides: floor, sill to flank, flank to shoulder, shoulder to waist, waist to edge, edge to middle, and the first beyond the middle. */
const acrossTheBody: Pieces = { straight: [4, 5, 2, 2, 6, 9, 1], turn: [3, 4, 3, 3, 4, 4] };
const pointsToTheMiddle = 1 + 4 + 3 + 5 + 4 + 2 + 3 + 2 + 3 + 6 + 4 + 9 + 2;

/**
 * Hood, cab and bed: three parts of one closed surface without inner walls. They share the points along their seams, so the flow
 * finds no slit between them.
 */
export function shellParts(): { hood: Surface; cab: Surface; bed: Surface } {
  const { lines, cabStart, bedStart } = shellLines();
  const sections = lines[0].map((_, i) => section(lines.map((line) => line[i])));
  const hood = new Surface();
  const cab = new Surface();
  const bed = new Surface();
  closeNose(hood, sections[0]);
  hood.grid(sections.slice(0, cabStart + 1));
  cab.grid(sections.slice(cabStart, bedStart + 1));
  bed.grid(sections.slice(bedStart));
  closeTail(bed, sections[sections.length - 1]);
  for (const part of [hood, cab, bed]) part.addMirrorImage();
  return { hood, cab, bed };
}

/** The right half of a cross-section, from the floor's middle line to the top's. */
function section(points: LinePoint[]): Vector3[] {
  const corners: Corner[] = points.map(({ at, round }) => ({ at, reach: round }));
  // The mirrored neighbour beyond the middle makes the top cross the mid-plane at a right angle.
  const { at } = points[points.length - 2];
  corners.push({ at: [at[0], -at[1], at[2]], reach: 0 });
  return roundedLine(corners, acrossTheBody).slice(0, pointsToTheMiddle) as Vector3[];
}

const noseCentre = 0.7;
const noseTaper = 0.2;
const noseSteps = 5;
const noseSpacing = 0.038;

/** x of the front face: rounded in plan, leaning back above, with a bumper that stands out and a shallow opening above it. */
function noseFace(y: number, z: number): number {
  const side = y / 0.8;
  const above = Math.max(0, z - 0.62) / 0.4;
  const bumper = plateau(z, 0.5, 0.58, 0.06) * plateau(y, -0.62, 0.62, 0.1);
  const opening = plateau(z, 0.72, 0.84, 0.055) * plateau(y, -0.46, 0.46, 0.07);
  return -2.48 + 0.14 * side * side * side * side + 0.04 * side * side + 0.05 * above * above - 0.035 * bumper + 0.025 * opening;
}

/** Rounds the first section forward on to the front face by quarter ellipses, and fills that. */
function closeNose(hood: Surface, first: Vector3[]): void {
  const rings: Vector3[][] = [];
  for (let step = noseSteps; step >= 0; step--) {
    const angle = (step / noseSteps) * (Math.PI / 2);
    const scale = 1 - noseTaper * (1 - Math.cos(angle));
    const forward = step === noseSteps ? 1 : Math.sin(angle);
    rings.push(
      first.map(([x, y, z]) => {
        const at: Point = [y * scale, noseCentre + (z - noseCentre) * scale];
        return [x + forward * (noseFace(at[0], at[1]) - x), at[0], at[1]];
      }),
    );
  }
  rings[rings.length - 1] = first;
  hood.grid(rings);
  fillHalfEnd(hood, rings[0], noseSpacing, "forward", noseFace);
}

const tailRounding = 0.018;
const tailSpacing = 0.06;

/** Rounds the rim of the last section by a quarter circle and fills the U-shaped end face. */
function closeTail(bed: Surface, last: Vector3[]): void {
  const rings = [last];
  for (const angle of [Math.PI / 4, Math.PI / 2]) {
    const inset = movedInward(last, tailRounding * (1 - Math.cos(angle)));
    rings.push(inset.map(([y, z]) => [bedEnd + tailRounding * Math.sin(angle), y, z]));
  }
  bed.grid(rings);
  fillHalfEnd(bed, rings[2], tailSpacing, "rearward", () => bedEnd + tailRounding);
}

/** Each point of a half section moved at right angles to the line, towards the body's inside. */
function movedInward(line: Vector3[], by: number): Point[] {
  return line.map(([, y, z], k) => {
    const before = line[Math.max(0, k - 1)];
    const after = line[Math.min(line.length - 1, k + 1)];
    // On the mid-plane the line goes straight across.
    const dy = y === 0 ? (k === 0 ? 1 : -1) : after[1] - before[1];
    const dz = y === 0 ? 0 : after[2] - before[2];
    const length = Math.hypot(dy, dz);
    return [y - (by * dz) / length, z + (by * dy) / length];
  });
}
