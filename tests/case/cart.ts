import { mkdir, mkdtemp, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { onTestFinished } from "vitest";
import { asciiStl } from "../../src/geometry/files/write-stl.js";
import type { TriangleSet } from "../../src/geometry/triangle-set.js";
import { parseStudy } from "../../src/study/read.js";
import type { Study } from "../../src/study/study.js";
import { bodyOf, box, cylinder, shifted, type Triangles, turned } from "../geometry/shapes.js";

/** A cart of boxes on four cylinders, metres, drives to -x; the wheels touch z = 0 and reach into the hull. */
export const cart = {
  wheelbase: 1.8,
  axleHeight: 0.3,
  /** hull 1.4 x 0.8, the cab above it 1.2 wide and 0.4 high, and the wheels' lowest 0.2 m below the hull */
  frontalArea: 1.4 * 0.8 + 1.2 * 0.4 + 2 * 0.2 * 0.2,
};

const wheel = (x: number, y: number): Triangles =>
  shifted(turned(cylinder(cart.axleHeight, 0.2, 32), [1, 0, 0], Math.PI / 2), [x, y, cart.axleHeight]);

export const cartParts: Record<string, Triangles> = {
  hull: box([0, -0.7, 0.2], [3, 0.7, 1]),
  cab: box([0.9, -0.6, 0.95], [2, 0.6, 1.4]),
  "wheel-front-left": wheel(0.6, -0.55),
  "wheel-front-right": wheel(0.6, 0.55),
  "wheel-rear-left": wheel(2.4, -0.55),
  "wheel-rear-right": wheel(2.4, 0.55),
};

/** A lid behind the cab, from the hull's middle to its tail. */
export const lid: Triangles = box([2, -0.6, 0.98], [3, 0.6, 1.1]);

export async function temporaryFolder(): Promise<string> {
  const folder = await mkdtemp(join(tmpdir(), "case-"));
  onTestFinished(() => rm(folder, { recursive: true, force: true, maxRetries: 3 }));
  return folder;
}

export interface CartStudy {
  folder?: string;
  /** parts of each variant by variant name; the plain cart and one with a lid unless given */
  variants?: Record<string, Record<string, Triangles>>;
  /** lines of the study file that replace those below, by key */
  keys?: Record<string, string>;
}

/** Writes the variants as STL files into a folder of the test and reads a study of them. */
export async function cartStudy({ folder, variants, keys = {} }: CartStudy = {}): Promise<Study> {
  const home = folder ?? (await temporaryFolder());
  const bodies = variants ?? { plain: cartParts, lidded: { ...cartParts, lid } };
  await mkdir(home, { recursive: true });
  for (const [name, parts] of Object.entries(bodies)) await writeFile(join(home, `${name}.stl`), stlOf(bodyOf(parts)));
  const lines: Record<string, string> = {
    study: "cart-lid",
    question: "Does a lid pay?",
    speed: "30 m/s",
    ground: "moving",
    baseline: Object.keys(bodies)[0]!,
    body: "{ unit: m, travel: -x, up: +z, wheelbase: auto, reference-area: auto }",
    parts: '{ wheels: { match: "wheel-*", rotating: true } }',
    mesh: "{ cells: 20 thousand, half: auto, y-plus: 200, layers: 2 }",
    stop: "{ drag: 2 counts, lift: 6 counts }",
    ...keys,
  };
  const text = [
    ...Object.entries(lines).map(([key, value]) => `${key}: ${value}`),
    "variants:",
    ...Object.keys(bodies).map((name) => `  ${name}: { files: [${name}.stl] }`),
  ].join("\n");
  const path = join(home, "cart.yaml");
  await writeFile(path, text);
  return parseStudy(text, path);
}

export const stlOf = (set: TriangleSet): Uint8Array => asciiStl(set, ({ name }) => name);
