import { inflateSync } from "node:zlib";
import { describe, expect, test } from "vitest";
import { finding } from "../../src/finding.js";
import type { Survey } from "../../src/geometry/survey.js";
import { surveyBody } from "../../src/geometry/survey-body.js";
import type { TriangleSet } from "../../src/geometry/triangle-set.js";
import { bodyPicture, type SeenFrom, viewNamed } from "../../src/picture/body-picture.js";
import { channels, severityTones, toneOf } from "../../src/picture/tones.js";
import { bodyOf, box } from "../geometry/shapes.js";

/** A box two metres long, one wide and half high on the ground, driving to -x, with a smaller one behind its left side. */
const set = bodyOf({ block: box([0, -0.5, 0], [2, 0.5, 0.5]), tag: box([2.5, -0.5, 0], [3, 0, 0.25]) });
const asked = { unit: "m", travel: "-x", up: "+z", cell: null } as const;
const survey = surveyBody(set, asked);
const views: SeenFrom[] = ["front", "side", "plan"];

function decoded(bytes: Uint8Array): { width: number; height: number; at: (x: number, y: number) => number[]; all: Uint8Array } {
  const file = Buffer.from(bytes);
  expect(file.subarray(1, 4).toString("latin1")).toBe("PNG");
  const [width, height] = [file.readUInt32BE(16), file.readUInt32BE(20)];
  let packed: Buffer | null = null;
  for (let at = 8; at < file.length; at += 12 + file.readUInt32BE(at))
    if (file.subarray(at + 4, at + 8).toString("latin1") === "IDAT") packed = file.subarray(at + 8, at + 8 + file.readUInt32BE(at));
  const rows = inflateSync(packed!);
  const all = new Uint8Array(3 * width * height);
  for (let y = 0; y < height; y++) {
    expect(rows[y * (3 * width + 1)]).toBe(1);
    for (let k = 0; k < 3 * width; k++)
      all[y * 3 * width + k] = rows[y * (3 * width + 1) + 1 + k]! + (k < 3 ? 0 : all[y * 3 * width + k - 3]!);
  }
  return { width, height, all, at: (x, y) => [...all.subarray(3 * (y * width + x), 3 * (y * width + x) + 3)] };
}

/** Columns and rows that pixels of about a colour take, and how many there are. */
function extentOf(picture: ReturnType<typeof decoded>, colour: number[], tolerance: number, below = Infinity) {
  const found = { left: Infinity, right: -Infinity, top: Infinity, bottom: -Infinity, count: 0 };
  for (let y = 0; y < Math.min(below, picture.height); y++)
    for (let x = 0; x < picture.width; x++) {
      const pixel = picture.at(x, y);
      if (Math.max(...pixel.map((value, k) => Math.abs(value - colour[k]!))) > tolerance) continue;
      found.count++;
      found.left = Math.min(found.left, x);
      found.right = Math.max(found.right, x);
      found.top = Math.min(found.top, y);
      found.bottom = Math.max(found.bottom, y);
    }
  return found;
}

const marked = (places: [number, number, number][]): Survey => ({
  ...survey,
  findings: [finding("planted", "error", "a planted defect", "none", { places })],
});

describe("picture of a body", () => {
  test.each(views)("%s is as wide as asked and the same every time", (seen) => {
    const bytes = bodyPicture(set, survey, { seen, width: 600 });
    expect(decoded(bytes).width).toBe(600);
    expect(Buffer.compare(Buffer.from(bytes), Buffer.from(bodyPicture(set, survey, { seen, width: 600 })))).toBe(0);
  });

  test("front is to the left from the side and from above, and the vehicle's left is to the right from ahead", () => {
    // The vehicle's right is +y; a ring at the front left, upper corner is dark red wherever it is drawn.
    const red = channels(severityTones.error);
    const where = (seen: SeenFrom) => {
      const picture = decoded(bodyPicture(set, marked([[0, -0.5, 0.5]]), { seen, width: 600 }));
      const { left, right, top, bottom } = extentOf(picture, red, 6, 170);
      return { x: (left + right) / 2 / 600, y: (top + bottom) / 2 };
    };
    expect(where("side").x).toBeLessThan(0.3);
    expect(where("plan").x).toBeLessThan(0.3);
    expect(where("front").x).toBeGreaterThan(0.6);
  });

  test("a box has the proportions that it has in metres (closed form)", () => {
    const alone = bodyOf({ block: box([0, -0.5, 0], [2, 0.5, 0.5]) });
    const own = surveyBody(alone, asked);
    const picture = decoded(bodyPicture(alone, { ...own, findings: [] }, { seen: "plan", width: 800 }));
    const middle = picture.at(400, 120);
    const { left, right, top, bottom } = extentOf(picture, middle, 1, 420);
    expect((right - left) / (bottom - top)).toBeGreaterThan(1.9);
    expect((right - left) / (bottom - top)).toBeLessThan(2.1);
  });

  test("a place that the body hides is drawn with less ink than one in sight", () => {
    const red = channels(severityTones.error);
    const ink = (place: [number, number, number]) =>
      extentOf(decoded(bodyPicture(set, marked([place]), { seen: "side", width: 800 })), red, 4).count;
    expect(ink([1, 0.5, 0.25])).toBeLessThan(0.95 * ink([1, -0.5, 0.25]));
  });

  test("unit and axes of the file do not change the picture", () => {
    // Millimetres, driving to +y: x to the right of the vehicle becomes the file's x.
    const turned = set.positions.slice();
    for (let at = 0; at < turned.length; at += 3) {
      turned[at] = 1000 * set.positions[at + 1]!;
      turned[at + 1] = -1000 * set.positions[at]!;
      turned[at + 2] = 1000 * set.positions[at + 2]!;
    }
    const other: TriangleSet = { ...set, positions: turned };
    const own = surveyBody(other, { ...asked, unit: "mm", travel: "+y" });
    for (const seen of views) {
      const one = decoded(bodyPicture(set, { ...survey, findings: [] }, { seen, width: 500 }));
      const two = decoded(bodyPicture(other, { ...own, findings: [] }, { seen, width: 500 }));
      expect([two.width, two.height]).toEqual([one.width, one.height]);
      let apart = 0;
      for (let k = 0; k < one.all.length; k++) if (Math.abs(one.all[k]! - two.all[k]!) > 8) apart++;
      expect(apart / one.all.length).toBeLessThan(0.002);
    }
  });

  test("every part has its tone in the legend", () => {
    const picture = decoded(bodyPicture(set, survey, { seen: "front", width: 900 }));
    set.parts.forEach((_, part) => {
      expect(extentOf(picture, channels(toneOf(part)), 0).count).toBeGreaterThan(20);
    });
  });

  test("hostile names, no triangles, places that are nowhere", () => {
    const names = ["\u0000\u001b[31m", "x".repeat(10_000), "\u202etxt.exe", "\u{1f697}", "<script>alert(1)</script>", ""];
    const parts = names.map((name, index) => ({ name, patch: `p${index}`, file: 0 }));
    const hostile = { ...set, parts };
    const findings = names.map((name) =>
      finding("odd", "warning", name, name, {
        part: name,
        places: [
          [Number.NaN, 0, 0],
          [1e30, Infinity, 0],
        ],
      }),
    );
    const picture = decoded(bodyPicture(hostile, { ...survey, findings }, { seen: "side", width: 700 }));
    expect(picture.width).toBe(700);
    const empty = { ...set, positions: new Float32Array(0), partOf: new Uint16Array(0) };
    expect(decoded(bodyPicture(empty, survey, { seen: "plan", width: 400 })).width).toBe(400);
  });

  test("thousands of parts and findings do not make an endless picture", () => {
    const parts = Array.from({ length: 5000 }, (_, k) => ({ name: `part ${k}`, patch: `p${k}`, file: 0 }));
    const findings = Array.from({ length: 3000 }, () => finding("many", "note", "m", "r", { places: [[1, 0, 0.5]] }));
    const { height } = decoded(bodyPicture({ ...set, parts }, { ...survey, findings }, { seen: "side", width: 800 }));
    expect(height).toBeLessThan(1600);
  });
});

describe("view by the name of the file", () => {
  test.each([
    ["front.png", "front"],
    ["pickup-front.png", "front"],
    ["out/Pickup_SIDE.PNG", "side"],
    ["C:\\pictures\\v2.plan.png", "plan"],
  ])("%s", (path, seen) => expect(viewNamed(path)).toBe(seen));

  test.each(["picture.png", "front.jpg", "seaside.png", "front/picture.png", "", "front.png\n"])("%j is refused", (path) =>
    expect(() => viewNamed(path)).toThrow(/which view/),
  );
});
