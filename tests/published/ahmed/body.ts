import type { Part, TriangleSet } from "../../../src/geometry/triangle-set.js";
import type { Vector3 } from "../../../src/geometry/vector.js";

/**
 * Dimensions of the body of Ahmed, Ramm and Faltin (SAE paper 840300, 1984), metres. The front of the original is a surface of its own;
 * edges rounded with 0.1 m are its usual approximation.
 */
export const ahmed = {
  length: 1.044,
  width: 0.389,
  height: 0.288,
  clearance: 0.05,
  slant: 0.222,
  noseRadius: 0.1,
} as const;

/** Steps of a quarter turn of the nose: fine enough that no facet is taken for an edge. */
const noseSteps = 24;

type Corner = Vector3;

/** A cross-section: half width, lower and upper height at a distance from the foremost point. */
interface Ring {
  x: number;
  half: number;
  low: number;
  high: number;
}

/**
 * The body with a slant of so many degrees (0 to 40), without its stilts: x rearward from the foremost point, y to the right, z up from the
 * ground, metres. Parts: nose, roof, sides, underbody, slant and base, which together are one closed shell.
 */
export function ahmedBody(slantDegrees: number): TriangleSet {
  const triangles = new Map<string, Corner[][]>();
  const face = (part: string, corners: Corner[]): void => {
    const list = triangles.get(part) ?? [];
    triangles.set(part, list);
    for (let k = 2; k < corners.length; k++) list.push([corners[0]!, corners[k - 1]!, corners[k]!]);
  };
  const rings = ringsOf(slantDegrees);
  const [first, last] = [rings[0]!, rings.at(-1)!];
  face("nose", cornersOf(first).toReversed());
  for (let k = 1; k < rings.length; k++) {
    const [a, b] = [rings[k - 1]!, rings[k]!];
    const nose = k <= noseSteps;
    const names = nose ? ["nose", "nose", "nose", "nose"] : ["underbody", "sides", b.high < a.high ? "slant" : "roof", "sides"];
    const [before, after] = [cornersOf(a), cornersOf(b)];
    for (let side = 0; side < 4; side++) {
      const next = (side + 1) % 4;
      face(names[side]!, [before[side]!, before[next]!, after[next]!, after[side]!]);
    }
  }
  face("base", cornersOf(last));
  return setOf(triangles);
}

/** From the flat front over the rounded edges to the tail. */
function ringsOf(slantDegrees: number): Ring[] {
  const { length, width, height, clearance, noseRadius, slant } = ahmed;
  const angle = (Math.PI / 180) * slantDegrees;
  const whole = { half: width / 2, low: clearance, high: clearance + height };
  const nose = Array.from({ length: noseSteps + 1 }, (_, k) => {
    const turn = ((Math.PI / 2) * k) / noseSteps;
    const inset = noseRadius * (1 - Math.sin(turn));
    return {
      x: noseRadius * (1 - Math.cos(turn)),
      half: whole.half - inset,
      low: whole.low + inset,
      high: whole.high - inset,
    };
  });
  const tail = { ...whole, x: length, high: whole.high - slant * Math.sin(angle) };
  return slantDegrees === 0
    ? [...nose, { ...whole, x: length }]
    : [...nose, { ...whole, x: length - slant * Math.cos(angle) }, tail];
}

/** Left low, right low, right high, left high: counter-clockwise seen from behind. */
const cornersOf = ({ x, half, low, high }: Ring): Corner[] => [
  [x, -half, low],
  [x, half, low],
  [x, half, high],
  [x, -half, high],
];

function setOf(triangles: Map<string, Corner[][]>): TriangleSet {
  const parts: Part[] = [...triangles.keys()].map((name) => ({ name, patch: name, file: 0 }));
  const all = [...triangles.values()];
  const count = all.reduce((sum, list) => sum + list.length, 0);
  return {
    positions: Float32Array.from(all.flat(3)),
    partOf: Uint16Array.from(all.flatMap((list, part) => list.map(() => part))),
    parts,
    files: [{ path: "ahmed.stl", format: "stl-ascii", triangles: count }],
    findings: [],
  };
}
