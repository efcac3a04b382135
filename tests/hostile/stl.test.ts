import { mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { gzipSync } from "node:zlib";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import { Problem } from "../../src/errors.js";
import { parseSurface, readSurfaces } from "../../src/geometry/files/read.js";
import { asciiStl, binaryStl } from "../../src/geometry/files/write-stl.js";
import { fitSurveyed } from "../../src/geometry/fit-at-cell.js";
import { repair } from "../../src/geometry/repair/repair.js";
import { surveyBody } from "../../src/geometry/survey-body.js";
import type { TriangleSet } from "../../src/geometry/triangle-set.js";
import { bodyOf, box, random, sphere } from "../geometry/shapes.js";
import { broken } from "./breaking.js";

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

/** The same kinds of file in some hundred bytes, so that a hundred thousand can be tried. */
const little = bodyOf({ "left door": box([0, 0, 0], [1, 2, 3]).slice(0, 36), nose: box([1, 0, 0], [2, 1, 1]).slice(0, 18) });
const smallText = Buffer.from(asciiStl(little, (part) => part.name));
const smallBinary = Buffer.from(binaryStl(little));
const smallObj = obj.subarray(0, 260);

/** Seconds of processor time after which a file counts as one that hangs the program. */
const HANG = 2;

/** Reads the file; returns the result, or null where it was refused as it should be. */
async function tried(name: string, bytes: Buffer, label: string): Promise<TriangleSet | null> {
  const path = join(folder, name);
  writeFileSync(path, bytes);
  try {
    return await readSurfaces([path]);
  } catch (error) {
    refused(error, label);
    return null;
  }
}

/** The same from memory, twenty times as fast; it must not hang either. */
function parsed(name: string, bytes: Buffer, label: string): TriangleSet | null {
  const begin = performance.now();
  try {
    const set = parseSurface(name, bytes);
    if (performance.now() - begin > 1000 * HANG) throw new Error(`${label}: took more than ${HANG} s`);
    return set;
  } catch (error) {
    refused(error, label);
    return null;
  }
}

function refused(error: unknown, label: string): void {
  if (!(error instanceof Problem)) throw new Error(`${label}: ${String(error)}`, { cause: error });
  const { kind, message, where } = error;
  // biome-ignore lint/suspicious/noControlCharactersInRegex: none may reach a terminal
  const clean = !/[\u0000-\u001f\u007f-\u009f\u202e]/.test(`${message}${where}`);
  if (kind !== "input" || message.length >= 300 || !clean) throw new Error(`${label}: ${kind}: ${message} ${where}`);
}

/** Throws where a result is not what a reader may return; plain comparisons, since there are a hundred thousand of them. */
function sound(set: TriangleSet, size: number, factor: number, label: string): void {
  const { positions, partOf, parts } = set;
  const fine =
    positions.length === 9 * partOf.length &&
    positions.every(Number.isFinite) &&
    partOf.every((part) => part < parts.length) &&
    parts.every(({ patch }) => /^[A-Za-z][A-Za-z0-9_-]*$/.test(patch)) &&
    positions.buffer.byteLength + partOf.buffer.byteLength <= factor * size + SMALL_FILE;
  if (!fine) throw new Error(`${label}: ${positions.length} numbers, ${partOf.length} triangles, parts ${JSON.stringify(parts)}`);
}

/** Many files on a machine that does other things as well. */
const PATIENCE = 120_000;

describe("files broken at random", { timeout: PATIENCE }, () => {
  it.each<[string, number, string, Buffer, number]>([
    ["text STL", 600, "text.stl", text, STL_FACTOR],
    ["binary STL", 900, "binary.stl", binary, STL_FACTOR],
    ["OBJ", 500, "shape.obj", obj, OBJ_FACTOR],
  ])("%s: %i of them, from disk", async (_, count, name, source, factor) => {
    let read = 0;
    for (let seed = 0; seed < count; seed++) {
      const bytes = broken(source, random(seed));
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

  it.each<[string, number, string, Buffer, number]>([
    ["text STL", 40_000, "text.stl", smallText, STL_FACTOR],
    ["binary STL", 40_000, "binary.stl", smallBinary, STL_FACTOR],
    ["OBJ", 20_000, "shape.obj", smallObj, OBJ_FACTOR],
  ])("small %s: %i of them, from memory", (_, count, name, source, factor) => {
    let read = 0;
    for (let seed = 0; seed < count; seed++) {
      const bytes = broken(source, random(100_000 + seed));
      const label = `${name}, seed ${100_000 + seed}`;
      const set = parsed(name, bytes, label);
      if (set === null) continue;
      read++;
      sound(set, bytes.length, factor, label);
    }
    expect(read).toBeGreaterThan(count / 100);
    expect(read).toBeLessThan(count - count / 100);
  });

  it("from memory and from disk are the same: 300", async () => {
    for (let seed = 0; seed < 300; seed++) {
      const [name, source] = [
        ["a.stl", smallText],
        ["a.stl", smallBinary],
        ["a.obj", smallObj],
      ][seed % 3] as [string, Buffer];
      const bytes = broken(source, random(5000 + seed));
      const [memory, disk] = [parsed(name, bytes, `seed ${seed}`), await tried(name, bytes, `seed ${seed}`)];
      expect(memory?.positions, `seed ${seed}`).toEqual(disk?.positions);
      expect(memory?.parts, `seed ${seed}`).toEqual(disk?.parts);
    }
  });

  it("gzip: 500, packed before and after breaking", async () => {
    for (let seed = 0; seed < 500; seed++) {
      const next = random(7000 + seed);
      const source = [smallText, smallBinary, smallObj][seed % 3];
      const name = seed % 3 === 2 ? "x.obj.gz" : "x.stl.gz";
      const bytes = seed % 2 === 0 ? gzipSync(broken(source, next), { level: 1 }) : broken(gzipSync(source, { level: 1 }), next);
      const set = await tried(name, bytes, `gzip, seed ${seed}`);
      if (set !== null) expect(set.positions.length).toBe(9 * set.partOf.length);
    }
  });

  it("what could be read can be surveyed and repaired: 200, of these 4 against cells", async () => {
    let surveyed = 0;
    for (let seed = 0; surveyed < 200; seed++) {
      const source = [smallText, smallBinary, text, smallObj][seed % 4];
      const set = await tried(
        seed % 4 === 3 ? "shape.obj" : "text.stl",
        broken(source, random(9000 + seed)),
        `survey, seed ${seed}`,
      );
      if (set === null) continue;
      surveyed++;
      const begin = process.cpuUsage();
      const survey = surveyBody(set, { cell: null });
      const mended = repair(set);
      expect(repair(mended.set).changes, `seed ${seed}`).toEqual([]);
      expect(process.cpuUsage(begin).user / 1e6, `seed ${seed}`).toBeLessThan(4 * HANG);
      if (surveyed % 50 === 0) fitSurveyed(set, survey, survey.extents.length / 40);
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
