import { mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { gzipSync } from "node:zlib";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { Problem } from "../../src/errors.js";
import { readSurfaces } from "../../src/geometry/files/read.js";
import { asciiStl, binaryStl } from "../../src/geometry/files/write-stl.js";
import { surveyBody } from "../../src/geometry/survey-body.js";
import type { TriangleSet } from "../../src/geometry/triangle-set.js";
import { bodyOf, box, random, sphere } from "../geometry/shapes.js";

/**
 * Files that are broken at random, from seeds: whatever happens, it is a readable result or a Problem of the input; no other error,
 * no hang (the test's own time limit), no memory beyond a fixed multiple of the file's size.
 */

let folder = "";
beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), "dragledger-hostile-"));
});
afterAll(() => rmSync(folder, { recursive: true }));

/** Bytes of the result per byte of the file: a facet of text STL or a record of binary STL is longer than what is kept of it. */
const STL_FACTOR = 2;
/** In OBJ a corner can be two bytes ("f 1 1 1 1 1 ..."), and each gives a triangle of 38; half of the memory may be spare room. */
const OBJ_FACTOR = 40;
const SMALL_FILE = 1 << 18;

const original = bodyOf({ "left door": box([0, 0, 0], [1, 2, 3]), nose: sphere(1, 5) });
const text = Buffer.from(asciiStl(original, (part) => part.name));
const binary = Buffer.from(binaryStl(original));
const obj = Buffer.from(
  `# a shape\nv 0 0 0\nv 1 0 0\nv 1 1 0\nv 0 1 0\nv 0.5 0.5 1\n${"g left door\nf 1 2 3 4\nf 1/1 2/2/2 5//3\ng nose\nf -1 -2 -3\nf 4 1 5\n".repeat(20)}`,
);

const words = [
  "solid",
  "endsolid x",
  "facet normal",
  "vertex",
  "outer loop",
  "endloop",
  "endfacet",
  "nan",
  "-inf",
  "1e999",
  "1e-999",
  "9".repeat(400),
  "\0\0\0\0",
  "\n\n\n",
  "\r",
  "f 1 2 99999999999",
  "f -1 -1",
  "v 1e38 1e38 1e38",
  "g \u001b[2J",
  "\\\n",
  "solid ../../../etc/passwd",
  "ÿþ",
  "\u202e",
  "#calc #codeStream",
  " ".repeat(3000),
];

/** One to four changes: a cut, flipped bytes, a word put in, a stretch doubled, moved or set to one value. */
function broken(source: Buffer, next: () => number): Buffer {
  let bytes = Buffer.from(source);
  const at = (): number => Math.floor(next() * (bytes.length + 1));
  for (let changes = 1 + Math.floor(4 * next()); changes > 0; changes--) {
    const [from, to] = [at(), at()].sort((a, b) => a - b);
    switch (Math.floor(7 * next())) {
      case 0:
        bytes = bytes.subarray(0, from);
        break;
      case 1:
        for (let k = 0; k < 1 + 8 * next() && bytes.length > 0; k++)
          bytes[Math.floor(next() * bytes.length)] ^= 1 << Math.floor(8 * next());
        break;
      case 2:
        bytes = Buffer.concat([
          bytes.subarray(0, from),
          Buffer.from(words[Math.floor(next() * words.length)]),
          bytes.subarray(from),
        ]);
        break;
      case 3:
        bytes = Buffer.concat([bytes.subarray(0, to), bytes.subarray(from)]);
        break;
      case 4:
        bytes = Buffer.concat([bytes.subarray(0, from), bytes.subarray(to)]);
        break;
      case 5:
        bytes = Buffer.concat([bytes.subarray(to), bytes.subarray(0, from)]);
        break;
      default:
        bytes = Buffer.from(bytes.fill(Math.floor(256 * next()), from, Math.min(to, from + 64)));
    }
  }
  return bytes;
}

/** Reads the file; returns the result, or null where it was refused as it should be. */
async function tried(name: string, bytes: Buffer, label: string): Promise<TriangleSet | null> {
  const path = join(folder, name);
  writeFileSync(path, bytes);
  try {
    return await readSurfaces([path]);
  } catch (error) {
    if (!(error instanceof Problem)) throw new Error(`${label}: ${String(error)}`, { cause: error });
    expect(error.kind, label).toBe("input");
    expect(error.message.length, label).toBeLessThan(300);
    // biome-ignore lint/suspicious/noControlCharactersInRegex: none may reach a terminal
    expect(`${error.message}${error.where}`, label).not.toMatch(/[\u0000-\u001f\u007f-\u009f\u202e]/);
    return null;
  }
}

function sound(set: TriangleSet, size: number, factor: number, label: string): void {
  expect(set.positions.length, label).toBe(9 * set.partOf.length);
  expect(set.positions.every(Number.isFinite), label).toBe(true);
  expect(
    set.partOf.every((part) => part < set.parts.length),
    label,
  ).toBe(true);
  for (const { patch } of set.parts) expect(patch, label).toMatch(/^[A-Za-z][A-Za-z0-9_-]*$/);
  expect(set.positions.buffer.byteLength + set.partOf.buffer.byteLength, label).toBeLessThanOrEqual(factor * size + SMALL_FILE);
}

/** Many files on a machine that does other things as well. */
const PATIENCE = 120_000;

describe("files broken at random", { timeout: PATIENCE }, () => {
  it.each<[string, number, string, Buffer, number]>([
    ["text STL", 600, "text.stl", text, STL_FACTOR],
    ["binary STL", 900, "binary.stl", binary, STL_FACTOR],
    ["OBJ", 500, "shape.obj", obj, OBJ_FACTOR],
  ])("%s: %i of them", async (_, count, name, source, factor) => {
    let read = 0;
    for (let seed = 0; seed < count; seed++) {
      const next = random(seed);
      const bytes = broken(source, next);
      const label = `${name}, seed ${seed}`;
      const set = await tried(name, bytes, label);
      if (set === null) continue;
      read++;
      sound(set, bytes.length, factor, label);
    }
    // Neither all refused nor all read: the changes do reach both ways.
    expect(read).toBeGreaterThan(12);
    expect(read).toBeLessThan(count - 12);
  });

  it("gzip: 200, packed before and after breaking", async () => {
    for (let seed = 0; seed < 200; seed++) {
      const next = random(7000 + seed);
      const source = [text, binary, obj][seed % 3];
      const name = seed % 3 === 2 ? "x.obj.gz" : "x.stl.gz";
      const bytes = seed % 2 === 0 ? gzipSync(broken(source, next), { level: 1 }) : broken(gzipSync(source, { level: 1 }), next);
      const set = await tried(name, bytes, `gzip, seed ${seed}`);
      if (set !== null) expect(set.positions.length).toBe(9 * set.partOf.length);
    }
  });

  it("what could be read can be surveyed: 40", async () => {
    let surveyed = 0;
    for (let seed = 0; surveyed < 40; seed++) {
      const set = await tried("text.stl", broken([text, binary][seed % 2], random(9000 + seed)), `survey, seed ${seed}`);
      if (set === null) continue;
      surveyed++;
      const survey = surveyBody(set);
      expect(survey.triangles, `seed ${seed}`).toBe(set.partOf.length);
      expect(Number.isFinite(survey.frontalArea.value + survey.wettedArea + survey.volume), `seed ${seed}`).toBe(true);
      expect(survey.frontalArea.value, `seed ${seed}`).toBeLessThanOrEqual(survey.wettedArea * (1 + 1e-9));
    }
  });
});

describe("coordinates at the ends of float32", () => {
  it.each([3e38, 1e-45, 1e-38, 1e20])("a box of size %f can be surveyed", (size) => {
    const survey = surveyBody(bodyOf({ box: box([-size, -size / 2, 0], [size, size / 2, size / 2]) }));
    expect(survey.verdict).toBe("not-fit");
    expect(Number.isFinite(survey.frontalArea.value)).toBe(true);
    expect(survey.topology.openEdges).toBe(0);
  });

  it("a body with one vertex at the end of the world can be surveyed", () => {
    const set = bodyOf({ ball: sphere(1, 12) });
    set.positions[100] = 3.4e38;
    expect(surveyBody(set).verdict).toBe("not-fit");
  });
});

describe("headers that lie", () => {
  it.each([0xffffffff, 0x80000000, 100_000_000])(
    "%i triangles announced, one there: both sizes are in the message",
    async (announced) => {
      const bytes = Buffer.from(binary.subarray(0, 134));
      bytes.writeUInt32LE(announced, 80);
      const path = join(folder, "lie.stl");
      writeFileSync(path, bytes);
      const before = process.memoryUsage().arrayBuffers;
      await expect(readSurfaces([path])).rejects.toMatchObject({
        kind: "input",
        code: "stl-truncated",
        message: `The header announces ${announced} triangles, which need ${84 + 50 * announced} bytes, but the file has 134.`,
      });
      expect(process.memoryUsage().arrayBuffers - before).toBeLessThan(1 << 20);
    },
  );

  it("text that promises many facets in its first lines gets room for no more than its size", async () => {
    const facet = "facet\nouter\nloop\nvertex\n0 0 0\nvertex\n0 1 0\nvertex\n0 0 1\nendloop\nendfacet\n";
    const path = join(folder, "dense.stl");
    const content = `solid\n${facet.repeat(1500)}${" ".repeat(3_000_000)}\nendsolid\n`;
    writeFileSync(path, content);
    const set = await readSurfaces([path]);
    sound(set, content.length, STL_FACTOR, "dense");
    expect(set.partOf).toHaveLength(1500);
  });

  it("a small gzip file that unpacks to much of nothing needs little memory", async () => {
    const path = join(folder, "bomb.stl.gz");
    writeFileSync(
      path,
      gzipSync(Buffer.concat([Buffer.from("solid x\n"), Buffer.alloc(60_000_000, "\n"), Buffer.from("endsolid x\n")])),
    );
    const before = process.memoryUsage().arrayBuffers;
    expect((await readSurfaces([path])).partOf).toHaveLength(0);
    expect(process.memoryUsage().arrayBuffers - before).toBeLessThan(48 << 20);
  });
});
