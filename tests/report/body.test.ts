import { inflateSync } from "node:zlib";
import fc from "fast-check";
import { describe, expect, test } from "vitest";
import type { TriangleSet } from "../../src/geometry/triangle-set.js";
import type { Vector3 } from "../../src/geometry/vector.js";
import { weld } from "../../src/geometry/weld.js";
import { cornersOf, packMesh } from "../../src/picture/pack-mesh.js";
import { gridSteps } from "../../src/picture/packed-mesh.js";
import { png } from "../../src/picture/png.js";
import { normalsTowards, rasterise, viewOf } from "../../src/picture/raster.js";
import { thinBody } from "../../src/picture/thin-body.js";
import { differenceTone, differenceTones, partTones, toneOf } from "../../src/picture/tones.js";
import { unpackMesh } from "../../src/picture/viewer/unpack.js";
import { bodySection } from "../../src/report/body-section.js";
import { packScene } from "../../src/report/pack-body.js";
import { withMirrorImage } from "../../src/report/read-bodies.js";
import { stillPictures } from "../../src/report/still-picture.js";
import { bodyOf, box, shifted, sphere } from "../geometry/shapes.js";
import { exampleBody, variants } from "./example.js";

const single = (name: string, shape: number[]): TriangleSet => bodyOf({ [name]: shape });

describe("packed meshes", () => {
  /** Every corner of every triangle is back in its place, within half a step of the grid and the rounding of a float32. */
  async function expectBack(corners: Float32Array): Promise<void> {
    const packed = packMesh(corners);
    const { vertices, indices } = await unpackMesh(packed);
    expect(indices.length).toBe(corners.length / 3);
    expect(packed.triangles).toBe(corners.length / 9);
    for (let k = 0; k < corners.length; k++) {
      const axis = k % 3;
      const back = vertices[3 * indices[Math.floor(k / 3)]! + axis]!;
      const half = (packed.max[axis]! - packed.min[axis]!) / gridSteps / 2;
      const rounding = 2 ** -23 * Math.max(Math.abs(packed.min[axis]!), Math.abs(packed.max[axis]!));
      expect(Math.abs(back - corners[k]!)).toBeLessThanOrEqual(half * (1 + 1e-9) + rounding);
    }
  }

  test("come back within half a step, in order (seed 907)", async () => {
    const coordinate = fc.float({ min: -8, max: 8, noNaN: true, noDefaultInfinity: true });
    const soup = fc.array(fc.array(coordinate, { minLength: 9, maxLength: 9 }), { minLength: 1, maxLength: 40 });
    await fc.assert(
      fc.asyncProperty(soup, (list) => expectBack(Float32Array.from(list.flat()))),
      { seed: 907, numRuns: 100 },
    );
  });

  test.each([
    ["flat in one direction", box([0, 0, 1], [2, 1, 1])],
    ["a point", new Array(9).fill(0.25)],
    ["far from the origin", shifted(sphere(0.5, 12), [500, -300, 20])],
    ["of the size of a dust grain", sphere(1e-6, 6)],
  ])("%s", async (_, shape) => {
    await expectBack(Float32Array.from(shape));
  });

  test("without triangles", async () => {
    const { vertices, indices } = await unpackMesh(packMesh(new Float32Array(0)));
    expect([vertices.length, indices.length]).toEqual([0, 0]);
  });

  test("a text that was damaged is refused", async () => {
    const packed = packMesh(Float32Array.from(box([0, 0, 0], [1, 1, 1])));
    await expect(unpackMesh({ ...packed, vertices: packed.vertices + 1 })).rejects.toThrow("the packed body is damaged");
    await expect(unpackMesh({ ...packed, indices: packed.indices.slice(8) })).rejects.toThrow();
  });

  test("parts that variants share travel once", () => {
    const section = bodySection(
      variants.map((variant) => ({ variant, set: exampleBody(variant) })),
      [],
      [],
      { run: (path) => path, condition: () => "", severalConditions: false },
    )!;
    const { meshes, variants: packed } = packScene(section);
    expect(packed.map(({ parts }) => parts.length)).toEqual([11, 12, 11]);
    // Ten parts are the same in all, the tailgate in two; one cover, one lowered tailgate.
    expect(meshes).toHaveLength(13);
    expect(packed[0]!.parts.find(({ name }) => name === "cab")!.mesh).toBe(
      packed[2]!.parts.find(({ name }) => name === "cab")!.mesh,
    );
  });
});

describe("thinning a body", () => {
  const fine = bodyOf({ ball: sphere(1, 60), lid: box([2, 0, 0], [3, 1, 0.2]) });

  test("keeps a body that is small enough", () => {
    expect(thinBody(fine, 1e6)).toEqual({ set: fine, moved: 0 });
  });

  test("keeps parts and place: every corner is a vertex of the body, no farther from its own than said", () => {
    const most = 2000;
    const { set, moved } = thinBody(fine, most);
    expect(set.partOf.length).toBeLessThanOrEqual(most);
    expect(set.partOf.length).toBeGreaterThan(most / 4);
    expect(new Set(set.partOf)).toEqual(new Set([0, 1]));
    const key = (from: Float32Array, at: number) => `${from[at]} ${from[at + 1]} ${from[at + 2]}`;
    const known = new Set(Array.from({ length: fine.positions.length / 3 }, (_, k) => key(fine.positions, 3 * k)));
    for (let at = 0; at < set.positions.length; at += 3) expect(known.has(key(set.positions, at))).toBe(true);
    // Brute force: each vertex of the body has a kept one within the distance.
    const { vertices } = weld(set.positions);
    for (let v = 0; v < fine.positions.length; v += 297) {
      let nearest = Number.POSITIVE_INFINITY;
      for (let k = 0; k < vertices.length; k += 3)
        nearest = Math.min(
          nearest,
          Math.hypot(
            vertices[k]! - fine.positions[v]!,
            vertices[k + 1]! - fine.positions[v + 1]!,
            vertices[k + 2]! - fine.positions[v + 2]!,
          ),
        );
      expect(nearest).toBeLessThanOrEqual(moved);
    }
  });

  test("no triangle without area, none twice", () => {
    const { set } = thinBody(fine, 1500);
    const seen = new Set<string>();
    for (let at = 0; at < set.positions.length; at += 9) {
      const corners = [0, 3, 6].map((k) => [...set.positions.subarray(at + k, at + k + 3)].join(" "));
      expect(new Set(corners).size).toBe(3);
      const name = corners.sort().join("|");
      expect(seen.has(name)).toBe(false);
      seen.add(name);
    }
  });
});

describe("still pictures", () => {
  const covered = (set: TriangleSet, eye: Vector3, width = 600) => {
    const view = viewOf([set], eye, width, 10);
    const { triangle } = rasterise(set, view);
    return { view, pixels: triangle.filter((each) => each > 0).length, triangle };
  };

  test("a sphere covers the area of its circle (closed form)", () => {
    const { view, pixels } = covered(single("ball", sphere(0.7, 64)), [-0.7, -0.5, 0.4]);
    // 128 columns: the outline's polygon lacks about (2 pi / 128)^2 / 6 of the circle; a pixel's width of the outline is rounding.
    expect(pixels / view.scale ** 2).toBeCloseTo(Math.PI * 0.49, 2);
  });

  test("a box from its side covers width times height, and fills the frame between the margins", () => {
    const { view, pixels, triangle } = covered(single("box", box([0, -3, 0], [4, 3, 2])), [0, -1, 1e-9]);
    expect(pixels / view.scale ** 2).toBeCloseTo(8, 1);
    const columns = new Set<number>();
    triangle.forEach((seen, at) => {
      if (seen > 0) columns.add(at % view.width);
    });
    expect([Math.min(...columns), Math.max(...columns)]).toEqual([10, 589]);
  });

  test("the nearest triangle is seen, whichever comes first", () => {
    const [near, far] = [box([-1, -1, 0], [0, 1, 1]), box([1, -0.9, 0.1], [2, 0.9, 0.9])];
    for (const body of [bodyOf({ near, far }), bodyOf({ far, near })]) {
      const { triangle } = covered(body, [-1, 0, 1e-9]);
      const seen = new Set([...triangle].filter((each) => each > 0).map((each) => body.parts[body.partOf[each - 1]!]!.name));
      expect([...seen]).toEqual(["near"]);
    }
  });

  test("normals are unit vectors on the side of the eye", () => {
    const eye: Vector3 = [-0.6, -0.64, 0.48];
    const { positions } = single("ball", sphere(1, 12));
    const normals = normalsTowards(positions, eye);
    for (let at = 0; at < normals.length; at += 3) {
      expect(Math.hypot(normals[at]!, normals[at + 1]!, normals[at + 2]!)).toBeCloseTo(1, 6);
      expect(normals[at]! * eye[0] + normals[at + 1]! * eye[1] + normals[at + 2]! * eye[2]).toBeGreaterThanOrEqual(0);
    }
  });

  test("a PNG says what it holds: size, palette with opacities, rows, checks of the standard", () => {
    const file = Buffer.from(
      png({ width: 2, height: 2, pixels: Uint8Array.of(0, 1, 1, 0), palette: Uint8Array.of(0, 0, 0, 0, 9, 8, 7, 255) }),
    );
    expect(file.subarray(0, 8).toString("hex")).toBe("89504e470d0a1a0a");
    // The check of an empty IEND chunk as the standard's tools print it.
    expect(file.subarray(-12).toString("hex")).toBe("0000000049454e44ae426082");
    const chunks = new Map<string, Buffer>();
    for (let at = 8; at < file.length; ) {
      const length = file.readUInt32BE(at);
      chunks.set(file.toString("latin1", at + 4, at + 8), file.subarray(at + 8, at + 8 + length));
      at += 12 + length;
    }
    expect([...chunks.keys()]).toEqual(["IHDR", "PLTE", "tRNS", "IDAT", "IEND"]);
    expect([...chunks.get("IHDR")!]).toEqual([0, 0, 0, 2, 0, 0, 0, 2, 8, 3, 0, 0, 0]);
    expect([...chunks.get("PLTE")!]).toEqual([0, 0, 0, 9, 8, 7]);
    expect([...chunks.get("tRNS")!]).toEqual([0, 255]);
    expect([...inflateSync(chunks.get("IDAT")!)]).toEqual([0, 0, 1, 0, 1, 0]);
  });

  test("all variants are drawn from the same places at one size, small enough for a page", () => {
    const section = bodySection(
      variants.map((variant) => ({ variant, set: exampleBody(variant) })),
      [],
      [],
      { run: (path) => path, condition: () => "", severalConditions: false },
    )!;
    const rows = stillPictures(section);
    expect(rows.map((row) => row.map(({ variant }) => variant))).toEqual([[...variants], [...variants]]);
    for (const row of rows) {
      expect(new Set(row.map(({ width, height }) => `${width} x ${height}`)).size).toBe(1);
      expect(new Set(row.map(({ address }) => address)).size).toBe(3);
      for (const { address } of row) {
        expect(address).toMatch(/^data:image\/png;base64,iVBOR/);
        expect(address.length).toBeLessThan(40_000);
      }
    }
  });

  test("a body without triangles gives empty pictures", () => {
    const empty = {
      variant: "none",
      set: { ...exampleBody("open-bed"), positions: new Float32Array(0), partOf: new Uint16Array(0) },
    };
    const section = bodySection([empty], [], [], { run: (path) => path, condition: () => "", severalConditions: false })!;
    expect(stillPictures(section).flat()).toHaveLength(2);
  });
});

test("a half body and its mirror image: twice the triangles, mirrored and turned outward", () => {
  const half = single("half", box([0, 0, 0], [2, 1, 1]));
  const whole = withMirrorImage(half);
  expect(whole.partOf.length).toBe(24);
  // The divergence theorem: both halves count positive.
  const volume = ({ positions }: TriangleSet) => {
    let sum = 0;
    for (let at = 0; at < positions.length; at += 9) {
      const [a, b, c] = [0, 3, 6].map((k) => positions.subarray(at + k, at + k + 3)) as [Float32Array, Float32Array, Float32Array];
      sum +=
        (a[0]! * (b[1]! * c[2]! - b[2]! * c[1]!) +
          a[1]! * (b[2]! * c[0]! - b[0]! * c[2]!) +
          a[2]! * (b[0]! * c[1]! - b[1]! * c[0]!)) /
        6;
    }
    return sum;
  };
  expect(volume(half)).toBeCloseTo(2, 6);
  expect(volume(whole)).toBeCloseTo(4, 6);
  expect(Math.min(...cornersOf(whole, 0).filter((_, k) => k % 3 === 1))).toBe(-1);
});

describe("tones", () => {
  test("neighbours differ in lightness by a fifth of the mean at least, so they stay apart without colour vision", () => {
    // Relative luminance (WCAG 2).
    const luminance = (colour: string) => {
      const value = Number.parseInt(colour.slice(1), 16);
      const [r, g, b] = [value >> 16, (value >> 8) & 255, value & 255].map((each) =>
        each <= 10 ? each / 255 / 12.92 : ((each / 255 + 0.055) / 1.055) ** 2.4,
      ) as [number, number, number];
      return 0.2126 * r + 0.7152 * g + 0.0722 * b;
    };
    partTones.forEach((tone, k) => {
      const next = toneOf(k + 1);
      const [a, b] = [luminance(tone), luminance(next)];
      expect(Math.abs(a - b) / ((a + b) / 2), `${tone} and ${next}`).toBeGreaterThan(0.2);
    });
  });

  test("the scale of differences ends in its tones and has none in the middle", () => {
    expect(differenceTone(-5, 5)).toBe(differenceTones.less);
    expect(differenceTone(5, 5)).toBe(differenceTones.more);
    expect(differenceTone(0, 5)).toBe(differenceTones.none);
    expect(differenceTone(null, 5)).toBe(differenceTones.none);
    expect(differenceTone(7, 0)).toBe(differenceTones.none);
    expect(differenceTone(99, 5)).toBe(differenceTones.more);
  });
});
