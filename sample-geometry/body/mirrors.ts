import type { Vector3 } from "../../src/geometry/vector.js";
import { fillDisc } from "./end-cap.js";
import { throughPoints } from "./shapes.js";
import { Surface } from "./surface.js";

/** Sections at constant |y|, from inside the door over the stalk to the outer end of the shell. Metres. */
interface MirrorSection {
  side: number;
  x: number;
  z: number;
  /** Half the extent forward, rearward, and up or down. */
  forward: number;
  rearward: number;
  tall: number;
}

const sections: MirrorSection[] = [
  { side: 0.78, x: -0.6, z: 1.2, forward: 0.05, rearward: 0.03, tall: 0.03 },
  { side: 0.88, x: -0.6, z: 1.2, forward: 0.05, rearward: 0.03, tall: 0.03 },
  { side: 0.925, x: -0.605, z: 1.21, forward: 0.055, rearward: 0.034, tall: 0.04 },
  { side: 0.955, x: -0.61, z: 1.23, forward: 0.075, rearward: 0.045, tall: 0.078 },
  { side: 0.99, x: -0.612, z: 1.24, forward: 0.09, rearward: 0.048, tall: 0.096 },
  { side: 1.07, x: -0.606, z: 1.243, forward: 0.088, rearward: 0.048, tall: 0.098 },
  { side: 1.12, x: -0.598, z: 1.243, forward: 0.076, rearward: 0.044, tall: 0.09 },
  { side: 1.142, x: -0.592, z: 1.242, forward: 0.054, rearward: 0.033, tall: 0.068 },
  { side: 1.15, x: -0.59, z: 1.242, forward: 0.028, rearward: 0.02, tall: 0.04 },
];
const sides = [0.78, 0.82, 0.85, 0.88, 0.905, 0.925, 0.94, 0.955, 0.972, 0.99, 1.03, 1.07, 1.097, 1.12, 1.133, 1.142, 1.15];
const turns = 20;
const endSpacing = 0.02;

/** The right-hand mirror: a rounded shell on a stalk that reaches 40 mm into the door. */
export function rightMirror(): Surface {
  const rings = sides.map(ring);
  const part = new Surface();
  for (let i = 0; i + 1 < rings.length; i++) {
    for (let j = 0; j < turns; j++) {
      const next = (j + 1) % turns;
      const corners: [Vector3, Vector3, Vector3, Vector3] = [rings[i + 1][j], rings[i + 1][next], rings[i][next], rings[i][j]];
      part.quad(...corners);
    }
  }
  fillDisc(part, rings[0], endSpacing, "left");
  fillDisc(part, rings[rings.length - 1], endSpacing, "right");
  return part;
}

function ring(at: number): Vector3[] {
  const value = (key: keyof MirrorSection): number =>
    throughPoints(
      at,
      sections.map((section) => [section.side, section[key]]),
    );
  const [x, z, forward, rearward, tall] = [value("x"), value("z"), value("forward"), value("rearward"), value("tall")];
  return Array.from({ length: turns }, (_, k) => {
    const angle = (k / turns) * 2 * Math.PI;
    const [cosine, sine] = [Math.cos(angle), Math.sin(angle)];
    // Between a circle and a square: the fourth powers of the coordinates add up to one.
    const grow = 1 / Math.sqrt(Math.sqrt(cosine * cosine * cosine * cosine + sine * sine * sine * sine));
    return [x + (cosine > 0 ? rearward : forward) * cosine * grow, at, z + tall * sine * grow];
  });
}
