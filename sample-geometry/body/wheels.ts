import type { Vector3 } from "../../src/geometry/vector.js";
import { frontAxle, rearAxle, wheel } from "./dimensions.js";
import { fillDisc } from "./end-cap.js";
import { type Corner, roundedLine } from "./rounded-line.js";
import { Surface } from "./surface.js";

/** r and how far outboard of the middle of the tyre, from the inner face over the tread to the outer face; reach of the rounding. */
const profile: [r: number, outboard: number, reach: number][] = [
  [0.13, -0.1, 0],
  [0.25, -0.115, 0.03],
  [0.33, -0.137, 0.04],
  [wheel.radius, -0.118, 0.045],
  [wheel.radius, 0.118, 0.045],
  [0.33, 0.137, 0.04],
  [0.25, 0.118, 0.03],
  [0.235, 0.085, 0.02],
  [0.12, 0.108, 0],
];
const pieces = { straight: [2, 1, 1, 2, 1, 1, 1, 2], turn: [1, 2, 3, 3, 2, 1, 1] };

const turnsOnTheGround = 4;
const turnsAbove = 40;
const discSpacing = 0.045;

/** The four wheels, each a tyre with a closed disc. */
export function wheelParts(): Record<"wheel-front-left" | "wheel-front-right" | "wheel-rear-left" | "wheel-rear-right", Surface> {
  const front = rightWheel(frontAxle);
  const rear = rightWheel(rearAxle);
  return {
    "wheel-front-left": front.mirrored(),
    "wheel-front-right": front,
    "wheel-rear-left": rear.mirrored(),
    "wheel-rear-right": rear,
  };
}

function rightWheel(axle: number): Surface {
  const surface = new Surface();
  const line = roundedLine(
    profile.map(([r, outboard, reach]): Corner => ({ at: [r, outboard, 0], reach })),
    pieces,
  );
  const angles = anglesAroundTheTyre();
  const rings = line.map(([r, outboard]) =>
    angles.map((angle): Vector3 => [axle + r * Math.sin(angle), wheel.side + outboard, height(r, angle)]),
  );
  for (let i = 0; i + 1 < rings.length; i++) {
    for (let j = 0; j < angles.length; j++) {
      const next = (j + 1) % angles.length;
      const corners: [Vector3, Vector3, Vector3, Vector3] = [rings[i + 1][j], rings[i + 1][next], rings[i][next], rings[i][j]];
      surface.quad(...corners);
    }
  }
  fillDisc(surface, rings[0], discSpacing, "left");
  fillDisc(surface, rings[rings.length - 1], discSpacing, "right");
  return surface;
}

/** Angles from the lowest point, turning towards +x; the edges of the contact patch are among them. */
function anglesAroundTheTyre(): number[] {
  const half = Math.acos(wheel.height / wheel.radius);
  const below = Array.from({ length: turnsOnTheGround }, (_, k) => -half + (k / turnsOnTheGround) * 2 * half);
  const above = Array.from({ length: turnsAbove }, (_, k) => half + (k / turnsAbove) * (2 * Math.PI - 2 * half));
  return [...below, ...above];
}

/** What would lie below the ground is pressed flat on to it. */
function height(r: number, angle: number): number {
  const z = wheel.height - r * Math.cos(angle);
  return z < 1e-9 ? 0 : z;
}
