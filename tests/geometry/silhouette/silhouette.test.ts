import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { measures } from "../../../src/geometry/measures.js";
import { silhouette } from "../../../src/geometry/silhouette/silhouette.js";
import { surfaceMesh } from "../../../src/geometry/surface-mesh.js";
import type { Vector3 } from "../../../src/geometry/vector.js";
import { car } from "../car.js";
import {
  bodyOf,
  box,
  capsule,
  cone,
  cylinder,
  directions,
  ellipsoid,
  joined,
  moved,
  random,
  shifted,
  shuffled,
  sphere,
  type Triangles,
  torus,
  turned,
  turnedOver,
} from "../shapes.js";

const deg = Math.PI / 180;
const meshOf = (shape: Triangles) => surfaceMesh(bodyOf({ shape }));
const areaOf = (shape: Triangles, direction: Vector3): number => silhouette(meshOf(shape), direction).area;
/** Within `share` of the truth, from below unless said otherwise: inscribed facets never cover more than the body. */
function near(value: number, truth: number, share: number): void {
  expect(Math.abs(value / truth - 1)).toBeLessThan(share);
}

// Closed forms: projected areas of the smooth bodies; tolerances are what inscribed facets leave out.
describe("closed forms", () => {
  it("sphere: pi r^2 from everywhere", () => {
    const mesh = meshOf(sphere(1, 64));
    for (const direction of directions(12)) near(silhouette(mesh, direction).area, Math.PI, 2e-3);
  });

  it("ellipsoid: pi sqrt((bc nx)^2 + (ca ny)^2 + (ab nz)^2), also at 10 degrees of yaw", () => {
    const mesh = meshOf(ellipsoid(2.25, 0.9, 0.7, 64));
    near(silhouette(mesh, [1, 0, 0]).area, 1.97920337, 12e-4);
    near(silhouette(mesh, [0, 1, 0]).area, 4.94800843, 12e-4);
    near(silhouette(mesh, [0, 0, 1]).area, 6.36172512, 12e-4);
    near(silhouette(mesh, [Math.cos(10 * deg), Math.sin(10 * deg), 0]).area, 2.13011102, 12e-4);
  });

  it("torus edge-on: 4 R r + pi r^2, where a sum over facets gives 2", () => {
    const shape = torus(1, 0.25, 96);
    const mesh = meshOf(shape);
    near(silhouette(mesh, [1, 0, 0]).area, 1.19634954, 8e-4);
    near(silhouette(mesh, [0, 0, 1]).area, Math.PI, 8e-4);
    expect(facetSum(shape, [1, 0, 0])).toBeCloseTo(2, 2);
  });

  it("capsule: pi r^2 + 2 r L sin t", () => {
    const mesh = meshOf(capsule(0.3, 1.2, 32));
    for (const t of [0, 30, 60, 90])
      near(
        silhouette(mesh, [Math.sin(t * deg), 0, Math.cos(t * deg)]).area,
        Math.PI * 0.09 + 2 * 0.3 * 1.2 * Math.sin(t * deg),
        6e-4,
      );
  });

  it.each([
    [0, Math.PI],
    [20, 2.95213143],
    [45, 2.70570585],
    [60, 2.59013194],
    [90, 2],
  ])("cone of radius 1 and height 2 tilted by %i degrees: %f", (t, truth) => {
    near(areaOf(cone(1, 2, 720), [Math.sin(t * deg), 0, Math.cos(t * deg)]), truth, 2e-5);
  });

  it("cylinder: 2 R L sin t + pi R^2 |cos t|", () => {
    const mesh = meshOf(cylinder(0.5, 2, 720));
    for (const t of [0, 25, 90, 130])
      near(
        silhouette(mesh, [0, Math.sin(t * deg), Math.cos(t * deg)]).area,
        2 * Math.sin(t * deg) + Math.PI * 0.25 * Math.abs(Math.cos(t * deg)),
        2e-5,
      );
  });

  it("box at yaw: bc |nx| + ca |ny| + ab |nz|, exactly", () => {
    const mesh = meshOf(box([0, 0, 0], [4, 1.75, 1.5]));
    for (const [x, y, z] of directions(40)) {
      const truth = 1.75 * 1.5 * Math.abs(x) + 1.5 * 4 * Math.abs(y) + 4 * 1.75 * Math.abs(z);
      expect(silhouette(mesh, [x, y, z]).area).toBeCloseTo(truth, 12);
    }
    expect(silhouette(mesh, [1, 0, 0]).area).toBe(2.625);
  });

  it("two spheres that hide each other: twice the disc less the lens, at any depth", () => {
    for (const depth of [0, 0.3, 5]) {
      const shape = joined(sphere(0.3, 40), sphere(0.3, 40, [depth, 0.4, 0]));
      near(areaOf(shape, [1, 0, 0]), 0.50353704, 3e-3);
    }
  });

  it("what is hidden or nested adds nothing", () => {
    const shell = box([-1, -1, -1], [1, 1, 1]);
    expect(areaOf(joined(shell, box([-0.5, -0.5, -0.5], [0.25, 0.5, 0.5])), [1, 0, 0])).toBe(4);
    expect(areaOf(joined(shell, shifted(box([-0.5, -0.5, -0.5], [0.5, 0.5, 0.5]), [7, 0.25, 0.25])), [1, 0, 0])).toBe(4);
  });
});

describe("surfaces that are no skin of a solid", () => {
  it("a single triangle, from the front, the back and edge-on", () => {
    const triangle = [0, 0, 0, 0, 2, 0, 0, 0, 3];
    expect(areaOf(triangle, [1, 0, 0])).toBe(3);
    expect(areaOf(triangle, [-1, 0, 0])).toBe(3);
    expect(areaOf(triangle, [0, 1, 0])).toBe(0);
  });

  it("a box without a lid", () => {
    const open = box([0, 0, 0], [2, 1, 1]).slice(0, 10 * 9);
    for (const direction of directions(9))
      expect(areaOf(open, direction)).toBeLessThanOrEqual(areaOf(box([0, 0, 0], [2, 1, 1]), direction) + 1e-12);
    expect(areaOf(open, [0, 0, 1])).toBe(2);
    expect(areaOf(open, [1, 0, 0])).toBe(1);
  });

  it("triangles that face at random", () => {
    const next = random(4);
    const shape = sphere(1, 12);
    const mixed: Triangles = [];
    for (let at = 0; at < shape.length; at += 9) {
      const one = shape.slice(at, at + 9);
      mixed.push(...(next() < 0.5 ? one : turnedOver(one)));
    }
    for (const direction of directions(9)) expect(areaOf(mixed, direction)).toBeCloseTo(areaOf(shape, direction), 12);
  });

  it("three walls that meet in one edge, and a triangle that is there twice", () => {
    const wall = (angle: number): Triangles => {
      const [c, s] = [Math.cos(angle), Math.sin(angle)];
      return [0, 0, 0, c, s, 0, c, s, 1, 0, 0, 0, c, s, 1, 0, 0, 1];
    };
    const walls = joined(wall(0), wall(2), wall(4));
    const [low, high] = [Math.min(0, Math.cos(2), Math.cos(4)), 1];
    expect(areaOf(walls, [0, 1, 0])).toBeCloseTo(high - low, 7);
    expect(areaOf(joined(walls, wall(2)), [0, 1, 0])).toBeCloseTo(high - low, 7);
  });

  it("no triangles, or none with area", () => {
    expect(silhouette(meshOf([]), [1, 0, 0])).toMatchObject({ area: 0, error: 0, edges: 0 });
    expect(areaOf([0, 0, 0, 1, 1, 1, 2, 2, 2], [1, 0, 0])).toBe(0);
    expect(areaOf([0, 0, 0, 0, 0, 0, 0, 1, 1], [1, 0, 0])).toBe(0);
  });

  it("triangles thrown together, against a count of covered points", () => {
    const next = random(11);
    for (let trial = 0; trial < 8; trial++) {
      const shape = Array.from({ length: 9 * 12 }, () => Math.fround(next()));
      near(areaOf(shape, [0, 0, 1]), coveredShare(shape, 500), 6e-3);
    }
  });

  it("a large body whose triangles hardly share vertices, within the error it states", () => {
    const { set } = car(40_000, 2);
    const loose = new Int32Array(set.positions.slice().buffer);
    const next = random(6);
    // A few units in the last place, as files have them whose triangles were transformed one by one.
    for (let k = 0; k < loose.length; k++) if (set.positions[k] !== 0) loose[k] += Math.floor(5 * next()) - 2;
    const mesh = surfaceMesh({ ...set, positions: new Float32Array(loose.buffer) });
    expect(mesh.vertices.length).toBeGreaterThan((2 * set.positions.length) / 3 / 3);
    const reference = silhouette(surfaceMesh(set), [1, 0, 0]);
    const found = silhouette(mesh, [1, 0, 0]);
    expect(found.edges).toBeLessThan(20_000);
    expect(Math.abs(found.area - reference.area)).toBeLessThan(found.error);
    expect(found.error).toBeLessThan(1e-3);
  });

  it("refuses a direction without a length", () => {
    expect(() => areaOf(box([0, 0, 0], [1, 1, 1]), [0, 0, 0])).toThrow("The direction of view (0 0 0) has no length.");
  });
});

describe("strips", () => {
  // Many bodies side by side and behind each other: a level line meets far more edges than are swept at once.
  it("gives what adding up rows of boxes gives", () => {
    const rows = Array.from({ length: 300 }, (_, k) =>
      shifted(box([0, 0, 0], [1, 0.5, 0.75]), [k % 7, 0.75 * (k % 100), Math.floor(k / 100)]),
    );
    const body = joined(...rows);
    // Each of 300 boxes is seen: 100 columns, 3 rows, none hides another along x.
    expect(areaOf(body, [1, 0, 0])).toBeCloseTo(300 * 0.5 * 0.75, 9);
    expect(silhouette(meshOf(body), [1, 0, 0]).outline).toBeCloseTo(300 * 2.5, 6);
  });

  it("gives what one sweep gives", () => {
    const next = random(21);
    const bodies = Array.from({ length: 120 }, () => sphere(0.05 + 0.2 * next(), 6, [next(), 4 * next(), 2 * next()]));
    const all = surfaceMesh(bodyOf({ shape: joined(...bodies) }));
    const { area, outline } = silhouette(all, [1, 0, 0]);
    // Stretched along the sweep the same edges are met by fewer level lines; areas stretch exactly.
    const stretched = silhouette(
      meshOf(
        joined(...bodies.map((body, k) => shifted(body, [0, 0, 0]).map((value, at) => (at % 3 === 2 ? value + 8 * k : value)))),
      ),
      [1, 0, 0],
    );
    const alone = bodies.reduce((sum, body) => sum + areaOf(body, [1, 0, 0]), 0);
    expect(Math.abs(stretched.area - alone)).toBeLessThan(stretched.error);
    expect(stretched.error).toBeLessThan(0.02);
    expect(area).toBeLessThan(alone);
    expect(outline).toBeLessThan(stretched.outline);
  });
});

describe("properties", () => {
  it("Cauchy: the mean over all directions of a convex body is a quarter of its surface", () => {
    const set = bodyOf({ shape: ellipsoid(2.25, 0.9, 0.7, 24) });
    const mesh = surfaceMesh(set);
    const all = directions(1500);
    const mean = all.reduce((sum, direction) => sum + silhouette(mesh, direction).area, 0) / all.length;
    near(mean, measures(mesh, set.partOf, 1).whole.area / 4, 1e-5);
  });

  it("does not care for shift, mirror, order or the sense of the direction, and scales with the square", () => {
    const body = joined(torus(1, 0.25, 10), shifted(box([0, 0, 0], [1, 0.5, 0.25]), [0.5, 0.5, 0.125]));
    fc.assert(
      fc.property(
        fc.tuple(...[0, 1, 2].map(() => fc.double({ min: -1, max: 1, noNaN: true }))),
        fc.integer({ min: -8, max: 8 }),
        fc.nat(1000),
        (direction, step, seed) => {
          fc.pre(Math.hypot(...direction) > 0.1);
          const [x, y, z] = direction;
          const area = areaOf(body, [x, y, z]);
          const close = (value: number, truth: number): void => expect(Math.abs(value - truth)).toBeLessThan(1e-11 * truth);
          close(areaOf(body, [-x, -y, -z]), area);
          close(areaOf(shuffled(body, seed), [x, y, z]), area);
          close(
            areaOf(
              moved(body, (p) => [2 * p[0], 2 * p[1], 2 * p[2]]),
              [x, y, z],
            ),
            4 * area,
          );
          close(areaOf(turnedOver(moved(body, (p) => [-p[0], p[1], p[2]])), [-x, y, z]), area);
          // Whole steps keep the rounding of the coordinates below the tolerance.
          const far = areaOf(shifted(body, [step, 2 * step, -step]), [x, y, z]);
          expect(Math.abs(far - area)).toBeLessThan(3e-6 * area);
        },
      ),
      { seed: 7, numRuns: 60 },
    );
  });

  it("turns with the body, within its own error", () => {
    const body = joined(torus(1, 0.25, 16), box([0.5, 0.25, -0.75], [1.5, 0.5, 0.125]));
    const axis: Vector3 = [0.6, 0, 0.8];
    const before = silhouette(meshOf(body), [1, 0, 0]);
    const [x, y, z] = turned([1, 0, 0], axis, 0.7);
    const after = silhouette(meshOf(turned(body, axis, 0.7)), [x, y, z]);
    expect(Math.abs(after.area - before.area)).toBeLessThan(before.error + after.error);
    expect(before.error).toBeLessThan(1e-5);
  });

  it("measures the outline", () => {
    expect(silhouette(meshOf(box([0, 0, 0], [4, 2, 1])), [1, 0, 0]).outline).toBeCloseTo(6, 9);
    near(silhouette(meshOf(sphere(1, 100)), [0.3, 0.4, 0.5]).outline, 2 * Math.PI, 1e-3);
  });
});

/** Half the sum of |n . d| A: the silhouette of convex bodies only. */
function facetSum(shape: Triangles, [dx, dy, dz]: Vector3): number {
  let sum = 0;
  for (let at = 0; at < shape.length; at += 9) {
    const [ax, ay, az, bx, by, bz, cx, cy, cz] = shape.slice(at, at + 9);
    const [ux, uy, uz, vx, vy, vz] = [bx - ax, by - ay, bz - az, cx - ax, cy - ay, cz - az];
    sum += Math.abs((uy * vz - uz * vy) * dx + (uz * vx - ux * vz) * dy + (ux * vy - uy * vx) * dz) / 4;
  }
  return sum;
}

/** Share of the unit square, seen along z, that triangles cover: middles of n x n pixels tried one by one. */
function coveredShare(shape: Triangles, n: number): number {
  const covered = new Uint8Array(n * n);
  for (let at = 0; at < shape.length; at += 9) {
    const [ax, ay, , bx, by, , cx, cy] = shape.slice(at, at + 9);
    const side = (px: number, py: number, qx: number, qy: number, x: number, y: number): number =>
      (qx - px) * (y - py) - (qy - py) * (x - px);
    for (let row = 0; row < n; row++)
      for (let column = 0; column < n; column++) {
        if (covered[row * n + column] === 1) continue;
        const [x, y] = [(column + 0.5) / n, (row + 0.5) / n];
        const s = [side(ax, ay, bx, by, x, y), side(bx, by, cx, cy, x, y), side(cx, cy, ax, ay, x, y)];
        if (s.every((value) => value >= 0) || s.every((value) => value <= 0)) covered[row * n + column] = 1;
      }
  }
  return covered.reduce((sum, value) => sum + value, 0) / (n * n);
}
