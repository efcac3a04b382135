import { readdirSync, readFileSync, statSync } from "node:fs";
import { describe, expect, it } from "vitest";
import { pickup } from "../../sample-geometry/body/pickup.js";
import { bytesOf } from "../../sample-geometry/body/write.js";
import type { Vector3 } from "../../src/geometry/vector.js";
import {
  asSet,
  folder,
  mirrored,
  slenderness,
  type Triangle,
  trianglesOf,
  unpairedEdges,
  volumeOf,
  windingNumber,
} from "./triangles.js";

const files = readdirSync(folder).sort();
const surfaces = new Map<string, Triangle[]>(files.map((file) => [file, trianglesOf(file)]));
const part = (name: string): Triangle[] => surfaces.get(`${name}.stl`) ?? [];
const joined = (...names: string[]): Triangle[] => names.flatMap(part);

const shell = joined("hood", "cab", "bed");
const wheels = ["wheel-front-left", "wheel-front-right", "wheel-rear-left", "wheel-rear-right"];
const always = ["hood", "cab", "bed", "underbody", "mirror-left", "mirror-right", ...wheels];
const variants: [string, Triangle[]][] = [
  ["open-bed", joined(...always, "tailgate")],
  ["covered-bed", joined(...always, "tailgate", "bed-cover")],
  ["tailgate-down", joined(...always, "tailgate-down")],
];
const solids: [string, Triangle[]][] = [
  ["hood, cab and bed together", shell],
  ...["tailgate", "tailgate-down", "bed-cover", "underbody", "mirror-left", "mirror-right", ...wheels].map(
    (name): [string, Triangle[]] => [name, part(name)],
  ),
];

const along = (triangles: Triangle[], axis: 0 | 1 | 2): number[] => triangles.flat().map((corner) => corner[axis]);
const least = (values: number[]): number => values.reduce((a, b) => Math.min(a, b));
const greatest = (values: number[]): number => values.reduce((a, b) => Math.max(a, b));

describe("the committed files of the sample body", () => {
  it("are what the generator makes, byte for byte", () => {
    const made = pickup();
    expect(made.map(({ file }) => file).sort()).toEqual(files);
    for (const sample of made) {
      expect(Buffer.compare(Buffer.from(bytesOf(sample)), readFileSync(folder + sample.file)), sample.file).toBe(0);
    }
  });

  it("weigh less than 2.5 MB and name the lowered tailgate like the closed one", () => {
    const bytes = files.map((file) => statSync(folder + file).size);
    expect(bytes.reduce((a, b) => a + b)).toBeLessThan(2.5e6);
    const text = readFileSync(`${folder}tailgate-down.stl`, "utf8");
    expect(text.startsWith("solid tailgate\n")).toBe(true);
    expect(text.match(/^solid /gm)).toHaveLength(1);
  });
});

describe("each solid of the sample body", () => {
  it.each(solids)("%s is closed, turned outward, and has a volume", (_, triangles) => {
    expect(unpairedEdges(triangles)).toBe(0);
    expect(volumeOf(triangles)).toBeGreaterThan(0.004);
  });

  it("leaves hood, cab and bed open only along the two seams they share", () => {
    for (const name of ["hood", "cab", "bed"]) expect(unpairedEdges(part(name))).toBeGreaterThan(50);
    expect(unpairedEdges(joined("hood", "cab"))).toBe(unpairedEdges(part("bed")));
  });

  it.each(solids)("%s has no needles among its triangles", (_, triangles) => {
    expect(greatest(triangles.map(slenderness))).toBeLessThan(25);
    const slender = triangles.filter((triangle) => slenderness(triangle) > 10).length;
    expect(slender / triangles.length).toBeLessThan(0.015);
  });
});

describe("the sample body's symmetry", () => {
  it.each(["hood", "cab", "bed", "tailgate", "tailgate-down", "bed-cover", "underbody"])(
    "%s is its own mirror image, bit for bit",
    (name) => {
      expect(asSet(mirrored(part(name)))).toEqual(asSet(part(name)));
    },
  );

  it.each(["mirror", "wheel-front", "wheel-rear"])("%s: the left one is the mirror image of the right one", (name) => {
    expect(greatest(along(part(`${name}-left`), 1))).toBeLessThan(0);
    expect(asSet(mirrored(part(`${name}-left`)))).toEqual(asSet(part(`${name}-right`)));
  });
});

describe("the sample body's dimensions", () => {
  it.each(variants)("%s has 15 to 41 thousand triangles and stands on the ground", (_, triangles) => {
    expect(triangles.length).toBeGreaterThan(15_000);
    expect(triangles.length).toBeLessThan(41_000);
    expect(least(along(triangles, 2))).toBe(0);
  });

  it("is about 5.2 m long, 1.9 m wide without its mirrors and 1.8 m high", () => {
    const [, open] = variants[0];
    expect(greatest(along(open, 0)) - least(along(open, 0))).toBeCloseTo(5.19, 1);
    expect(greatest(along(shell, 1)) * 2).toBeCloseTo(1.92, 1);
    expect(greatest(along(open, 1)) * 2).toBeCloseTo(2.3, 1);
    expect(greatest(along(open, 2))).toBeCloseTo(1.8, 1);
  });

  it("is touched by the ground at the wheels only", () => {
    for (const name of ["hood", "cab", "bed", "underbody", "tailgate"])
      expect(least(along(part(name), 2)), name).toBeGreaterThan(0.24);
  });

  it.each([
    ["wheel-front-right", -1.6],
    ["wheel-rear-right", 1.6],
  ])("%s: radius 0.39 m, axle 0.375 m high, 0.27 m wide, flat for 0.21 m", (name, axle) => {
    const corners = part(name).flat();
    const radii = corners.map(([x, , z]) => Math.hypot(x - axle, z - 0.375));
    expect(greatest(radii)).toBeCloseTo(0.39, 6);
    const ys = along(part(name), 1);
    expect(greatest(ys) - least(ys)).toBeCloseTo(0.266, 3);
    const onGround = corners.filter(([, , z]) => z === 0);
    // Half the chord that the ground cuts off: sqrt(0.39² - 0.375²).
    expect(greatest(onGround.map(([x]) => x)) - axle).toBeCloseTo(0.107122, 5);
    expect(onGround.length).toBeGreaterThan(10);
  });
});

describe("how the sample body's parts meet", () => {
  const [body, tailgate, cover] = [shell, part("tailgate"), part("bed-cover")].map((triangles) =>
    Float64Array.from(triangles.flat(2)),
  );
  const inside = (point: Vector3, triangles: Float64Array): boolean => Math.round(windingNumber(point, triangles)) === 1;

  it("has an open bed: air above the floor, metal around it", () => {
    for (const x of [1.1, 1.8, 2.5]) {
      for (const y of [0, 0.4, 0.7]) {
        expect(inside([x, y, 0.93], body), `${x} ${y}`).toBe(false);
        expect(inside([x, y, 0.88], body), `${x} ${y}`).toBe(true);
      }
      expect(inside([x, 0.88, 1.15], body), `side wall at ${x}`).toBe(true);
    }
    expect(inside([0.75, 0, 1.1], body)).toBe(true);
  });

  it("closes the bed by a tailgate whose bottom and sides are inside the bed's metal", () => {
    const corners = part("tailgate").flat();
    const bottom = corners.filter(([, , z]) => z < 0.88);
    const sides = corners.filter(([, y, z]) => Math.abs(y) > 0.775 + 0.19 * (z - 0.875) - 0.002 && z < 1.22);
    expect(bottom.length).toBeGreaterThan(50);
    expect(sides.length).toBeGreaterThan(50);
    for (const point of [...bottom, ...sides].filter((_, k) => k % 9 === 0)) expect(inside(point, body), point.join()).toBe(true);
  });

  it("holds the lowered tailgate in the end of the bed", () => {
    const held = part("tailgate-down")
      .flat()
      .filter(([x]) => x < 2.65 && x > 2.625);
    expect(held.length).toBeGreaterThan(50);
    for (const point of held.filter((_, k) => k % 9 === 0)) expect(inside(point, body), point.join()).toBe(true);
  });

  it("leaves no slit around the cover: its rim lies in the rear wall, in the rails or in the tailgate", () => {
    const inMetal = (point: Vector3): boolean => [body, tailgate, cover].some((triangles) => inside(point, triangles));
    // Along the rim of the cavity, just below the cover's upper face, nothing but metal from the cavity outwards.
    for (let k = 0; k <= 40; k++) {
      const x = 0.9 + (k / 40) * 1.72;
      for (const y of [0.8, 0.82, 0.84, 0.86]) expect(inMetal([x, y, 1.245]), `${x} ${y}`).toBe(true);
    }
    for (let k = 0; k <= 20; k++) {
      const y = (k / 20) * 0.84;
      expect(inMetal([0.83, y, 1.245]), `front ${y}`).toBe(true);
      expect(inMetal([2.61, y, 1.24]), `rear ${y}`).toBe(true);
    }
  });

  it("roots the mirrors in the doors and keeps their shells off them", () => {
    const corners = part("mirror-right").flat();
    const [root, outside] = [corners.filter(([, y]) => y < 0.785), corners.filter(([, y]) => y > 0.9)];
    expect(root.length).toBeGreaterThan(50);
    for (const point of root.filter((_, k) => k % 5 === 0)) expect(inside(point, body), point.join()).toBe(true);
    for (const point of outside.filter((_, k) => k % 11 === 0)) expect(inside(point, body), point.join()).toBe(false);
  });

  it("fills the arches with the underbody: its top is inside the shell, the wheels are at least 40 mm from everything", () => {
    const top = part("underbody")
      .flat()
      .filter(([x, y]) => Math.abs(y) < 0.3 && Math.abs(Math.abs(x) - 1.6) < 0.3)
      .filter(([, , z]) => z > 0.7);
    expect(top.length).toBeGreaterThan(20);
    for (const point of top.filter((_, k) => k % 5 === 0)) expect(inside(point, body), point.join()).toBe(true);
    const others = joined("hood", "cab", "bed", "underbody").flat();
    for (const wheel of ["wheel-front-right", "wheel-rear-right"]) {
      const near = part(wheel).flat();
      const [from, to] = [least(near.map(([x]) => x)) - 0.1, greatest(near.map(([x]) => x)) + 0.1];
      const candidates = others.filter(([x, y]) => x > from && x < to && y > 0.5);
      const gap = near.reduce(
        (best, [x, y, z], k) =>
          k % 23 ? best : candidates.reduce((nearest, c) => Math.min(nearest, Math.hypot(c[0] - x, c[1] - y, c[2] - z)), best),
        1,
      );
      expect(gap).toBeGreaterThan(0.04);
      expect(gap).toBeLessThan(0.12);
    }
  });
});
