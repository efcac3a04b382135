import { mkdirSync, mkdtempSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { gzipSync } from "node:zlib";
import { afterAll, beforeAll, describe, expect, it } from "vitest";
import type { Problem } from "../../../src/errors.js";
import { readSurfaces } from "../../../src/geometry/files/read.js";
import { asciiStl, binaryStl } from "../../../src/geometry/files/write-stl.js";
import type { TriangleSet } from "../../../src/geometry/triangle-set.js";
import { bodyOf, box, joined, sphere } from "../shapes.js";

let folder = "";
beforeAll(() => {
  folder = mkdtempSync(join(tmpdir(), "dragledger-read-"));
});
afterAll(() => rmSync(folder, { recursive: true }));

function written(name: string, content: string | Uint8Array): string {
  const path = join(folder, name);
  writeFileSync(path, content);
  return path;
}

function madeFolder(name: string): string {
  mkdirSync(join(folder, name));
  return join(folder, name);
}

const read = (name: string, content: string | Uint8Array): Promise<TriangleSet> => readSurfaces([written(name, content)]);
const names = (set: TriangleSet): string[] => set.parts.map((part) => part.name);

/** Kind, code, message, where (without the folder) and remedy of what reading throws. */
async function problem(paths: string[]): Promise<Record<string, string | null>> {
  const error = (await readSurfaces(paths).then(
    () => null,
    (cause: unknown) => cause,
  )) as Problem | null;
  if (error === null) throw new Error("nothing was thrown");
  const plain = (text: string | null): string | null => text?.replaceAll(`${folder}/`, "") ?? null;
  return {
    kind: error.kind,
    code: error.code,
    message: plain(error.message),
    where: plain(error.where),
    remedy: plain(error.remedy),
  };
}
const problemOf = (name: string, content: string | Uint8Array) => problem([written(name, content)]);

const facet = "facet normal 0 0 1\nouter loop\nvertex 0 0 0\nvertex 1 0 0\nvertex 0 1 0\nendloop\nendfacet\n";
const triangle = [0, 0, 0, 1, 0, 0, 0, 1, 0];

function binary(triangles: number[][], change: (bytes: Uint8Array, view: DataView) => void = () => {}): Uint8Array {
  const bytes = new Uint8Array(84 + 50 * triangles.length);
  const view = new DataView(bytes.buffer);
  view.setUint32(80, triangles.length, true);
  triangles.forEach((corners, t) => {
    corners.forEach((value, k) => {
      view.setFloat32(84 + 50 * t + 12 + 4 * k, value, true);
    });
  });
  change(bytes, view);
  return bytes;
}

describe("binary STL", () => {
  it("is one part, named by the file", async () => {
    const set = await read("tail gate.stl", binary([triangle, triangle.map((value) => value + 0.5)]));
    expect(set.parts).toEqual([{ name: "tail gate", patch: "tail-gate", file: 0 }]);
    expect([...set.positions]).toEqual([...triangle, ...triangle.map((value) => value + 0.5)]);
    expect([...set.partOf]).toEqual([0, 0]);
    expect(set.files).toEqual([{ path: join(folder, "tail gate.stl"), format: "stl-binary", triangles: 2 }]);
    expect(set.findings).toEqual([]);
  });

  it.each(["solid shape", "SOLID", "solid facet normal 0 0 1 outer loop vertex"])(
    "is told by its size, even with the header %j",
    async (header) => {
      const set = await read(
        "x.stl",
        binary([triangle], (bytes) => bytes.set(Buffer.from(header.padEnd(80)))),
      );
      expect(set.files[0].format).toBe("stl-binary");
      expect([...set.positions]).toEqual(triangle);
    },
  );

  it("ignores normals and attributes, also NaN ones", async () => {
    const set = await read(
      "x.stl",
      binary([triangle], (_, view) => {
        view.setFloat32(84, Number.NaN, true);
        view.setUint16(132, 0xffff, true);
      }),
    );
    expect([...set.positions]).toEqual(triangle);
  });

  it("reads past trailing bytes with a remark", async () => {
    const set = await read("x.stl", Buffer.concat([binary([triangle]), Buffer.alloc(7)]));
    expect(set.partOf).toHaveLength(1);
    expect(set.findings).toMatchObject([{ code: "trailing-bytes", severity: "note", count: 7 }]);
  });

  it("may have no triangles", async () => {
    const set = await read("x.stl", binary([]));
    expect(set).toMatchObject({ partOf: new Uint16Array(0), parts: [{ name: "x" }] });
  });

  it.each([200, 333, 1024, 8 << 20])("keeps every bit of many triangles, read in pieces of %i bytes", async (piece) => {
    const many = bodyOf({ many: joined(sphere(1, 12), sphere(2, 12)) });
    const set = await readSurfaces([written("many.stl", binaryStl(many))], { piece });
    expect(set.partOf.length).toBe(many.partOf.length);
    expect(
      Buffer.compare(
        Buffer.from(set.positions.buffer, set.positions.byteOffset, set.positions.byteLength),
        Buffer.from(many.positions.buffer),
      ),
    ).toBe(0);
  });

  it("says both sizes when it was cut off", async () => {
    expect(await problemOf("cut.stl", binary([triangle, triangle]).subarray(0, 180))).toEqual({
      kind: "input",
      code: "stl-truncated",
      message: "The header announces 2 triangles, which need 184 bytes, but the file has 180.",
      where: "cut.stl",
      remedy: "Copy or export the file again; it was cut off, or it is no binary STL.",
    });
  });

  it("fails at once, and makes no room, when the header announces four billion triangles", async () => {
    const before = process.memoryUsage().arrayBuffers;
    const lie = binary([triangle], (_, view) => view.setUint32(80, 0xffffffff, true));
    expect(await problemOf("lie.stl", lie)).toMatchObject({
      code: "stl-truncated",
      message: "The header announces 4294967295 triangles, which need 214748364834 bytes, but the file has 134.",
    });
    expect(await problemOf("lie.stl.gz", gzipSync(lie))).toMatchObject({
      code: "stl-truncated",
      message: "The header announces 4294967295 triangles, which need 214748364834 bytes, but the file has 134.",
    });
    expect(process.memoryUsage().arrayBuffers - before).toBeLessThan(64 << 20);
  });

  it.each([
    [Number.NaN, "NaN"],
    [Number.POSITIVE_INFINITY, "Infinity"],
    [Number.NEGATIVE_INFINITY, "-Infinity"],
  ])("names triangle and byte of the coordinate %f", async (value, text) => {
    expect(
      await problemOf(
        "bad.stl",
        binary([triangle, triangle], (_, view) => view.setFloat32(84 + 50 + 12 + 16, value, true)),
      ),
    ).toEqual({
      kind: "input",
      code: "coordinate-not-finite",
      message: `Triangle 2 has the coordinate ${text}; every coordinate must be a finite number.`,
      where: "bad.stl, byte 162",
      remedy: "Export the surface again; such corners usually come from a failed scaling or an empty facet.",
    });
  });
});

describe("text STL", () => {
  it("makes a part of each solid and keeps blanks in names", async () => {
    const set = await read(
      "car.stl",
      `solid rear left door\n${facet}endsolid rear left door\nsolid hood\n${facet}${facet}endsolid\n`,
    );
    expect(set.parts.map(({ name, patch }) => [name, patch])).toEqual([
      ["rear left door", "rear-left-door"],
      ["hood", "hood"],
    ]);
    expect([...set.partOf]).toEqual([0, 1, 1]);
    expect([...set.positions]).toEqual([...triangle, ...triangle, ...triangle]);
    expect(set.files[0]).toMatchObject({ format: "stl-ascii", triangles: 3 });
    expect(set.findings).toEqual([]);
  });

  it("names a solid without a name by the file, less its ending", async () => {
    expect(names(await read("front splitter.STL", `solid\n${facet}endsolid\n`))).toEqual(["front splitter"]);
    expect(names(await read("hood.stl.gz", gzipSync(`solid   \n${facet}endsolid\n`)))).toEqual(["hood"]);
  });

  it.each([
    ["CRLF", (text: string) => text.replaceAll("\n", "\r\n")],
    ["old line ends", (text: string) => text.replaceAll("\n", "\r")],
    ["tabs and indents", (text: string) => text.replaceAll("\n", "\n\t  ").replaceAll(" 0", "\t\v0")],
    ["upper case", (text: string) => text.toUpperCase()],
    ["blank lines", (text: string) => text.replaceAll("\n", "\n\n \n")],
    ["a mark of the byte order", (text: string) => `\ufeff${text}`],
    ["no line end at the end", (text: string) => text.trimEnd()],
    [
      "each word on a line",
      (text: string) => text.replaceAll(" ", "\n").replace("solid\nA", "solid A").replace("endsolid\nA", "endsolid A"),
    ],
  ])("reads %s", async (_, change) => {
    const set = await read("x.stl", change(`solid A\n${facet}endsolid A\n`));
    expect(names(set)).toEqual(["A"]);
    expect([...set.positions]).toEqual(triangle);
    expect(set.findings).toEqual([]);
  });

  it("reads files without any line end, however long", async () => {
    const one = facet.replaceAll("\n", " ");
    const set = await read("x.stl", `solid one part ${one}${one}endsolid one part solid two ${one}endsolid two`);
    expect(names(set)).toEqual(["one part", "two"]);
    expect([...set.partOf]).toEqual([0, 0, 1]);
  });

  it("takes numbers as they are written", async () => {
    const set = await read(
      "x.stl",
      `solid A\nfacet normal nan -nan inf\nouter loop\nvertex -1.5e-3 +2.E2 .25\nvertex 1e-50 16777217 -0\nvertex 0.1 3.4028235e38 00\nendloop endfacet endsolid`,
    );
    expect([...set.positions]).toEqual([-1.5e-3, 200, 0.25, 0, 16777217, -0, 0.1, 3.4028235e38, 0].map(Math.fround));
  });

  it("goes on where endsolid is missing, with a remark", async () => {
    const set = await read("x.stl", `solid A\n${facet}solid B\n${facet}`);
    expect(names(set)).toEqual(["A", "B"]);
    expect(set.findings).toMatchObject([{ code: "missing-endsolid", severity: "note", count: 2 }]);
  });

  it("joins solids of one name, with a warning", async () => {
    const set = await read("x.stl", `solid A\n${facet}endsolid\nsolid B\n${facet}endsolid\nsolid A\n${facet}endsolid\n`);
    expect([...set.partOf]).toEqual([0, 1, 0]);
    expect(set.findings).toMatchObject([{ code: "duplicate-part-name", severity: "warning", part: "A", count: 2 }]);
    expect(set.findings[0].message).toContain('2 solids are named "A"; they were joined into one part');
  });

  it("keeps parts without triangles", async () => {
    expect(names(await read("x.stl", `solid A\nendsolid A\nsolid B\n${facet}endsolid B`))).toEqual(["A", "B"]);
  });

  it.each([512, 777, 4096, 8 << 20])("reads what is written, in pieces of %i bytes and from gzip", async (piece) => {
    const body = bodyOf({ "left half": sphere(1, 16), box: box([0, 0, 0], [1, 2, 3]), "right half": sphere(2, 16) });
    const bytes = asciiStl(body, (part) => part.name);
    for (const path of [written("body.stl", bytes), written("body.stl.gz", gzipSync(bytes, { level: 1 }))]) {
      const set = await readSurfaces([path], { piece });
      expect(names(set)).toEqual(["left half", "box", "right half"]);
      expect([...set.positions]).toEqual([...body.positions]);
      expect([...set.partOf]).toEqual([...body.partOf]);
      expect(set.findings).toEqual([]);
    }
  });

  it("reads long files without any line end in pieces, names in one piece", async () => {
    const one = facet.replaceAll("\n", " ");
    const path = written(
      "x.stl",
      Array.from({ length: 40 }, (_, k) => `solid part number ${k} ${one.repeat(7)}endsolid part number ${k} `).join(""),
    );
    for (const piece of [800, 1111, 5000]) {
      const set = await readSurfaces([path], { piece });
      expect(names(set)).toEqual(Array.from({ length: 40 }, (_, k) => `part number ${k}`));
      expect(set.partOf).toHaveLength(280);
    }
  });

  it.each<[string, string, Record<string, string>]>([
    [
      "a word out of place",
      `solid A\n${facet.replace("outer loop", "outer lopp")}`,
      { code: "stl-syntax", message: 'Expected loop, found "lopp".', where: "bad.stl, line 3, byte 33" },
    ],
    [
      "text after the end",
      `solid A\n${facet}endsolid A\nthat was all\n`,
      { code: "stl-syntax", message: 'Expected solid, found "that".' },
    ],
    [
      "four corners",
      `solid A\n${facet.replace("endloop", "vertex 1 1 0\nendloop")}`,
      {
        code: "stl-facet-corners",
        message: "A facet has more than 3 corners; STL knows triangles only.",
        where: "bad.stl, line 7, byte 77",
      },
    ],
    [
      "two corners",
      `solid A\n${facet.replace("vertex 0 1 0\n", "")}`,
      { code: "stl-facet-corners", message: "A facet has 2 corners; STL knows triangles only." },
    ],
    [
      "a decimal comma",
      `solid A\n${facet.replace("1 0 0", "1,5 0 0")}`,
      {
        code: "stl-number",
        message: 'Expected a coordinate, found "1,5".',
        where: "bad.stl, line 5, byte 58",
        remedy: "Write numbers with a decimal point and no unit, such as 1.25 or 3.1e-2.",
      },
    ],
    [
      "a coordinate too few",
      `solid A\n${facet.replace("1 0 0", "1 0")}`,
      { code: "stl-number", message: 'Expected a coordinate, found "vertex".', where: "bad.stl, line 6, byte 62" },
    ],
    [
      "nan",
      `solid A\n${facet.replace("1 0 0", "1 nan 0")}`,
      {
        code: "coordinate-not-finite",
        message: 'The coordinate "nan" is not a finite 32-bit number.',
        where: "bad.stl, line 5, byte 60",
      },
    ],
    ["-inf", `solid A\n${facet.replace("1 0 0", "1 -inf 0")}`, { code: "coordinate-not-finite" }],
    [
      "a number beyond 32 bits",
      `solid A\n${facet.replace("1 0 0", "1 1e39 0")}`,
      { code: "coordinate-not-finite", message: 'The coordinate "1e39" is not a finite 32-bit number.' },
    ],
    [
      "an end inside a facet",
      `solid A\n${facet}${facet.slice(0, 60)}`,
      { code: "stl-truncated", message: "The file ends inside a facet; it was cut off." },
    ],
    ["an end inside a word", `solid A\n${facet}${facet.slice(0, 25)}`, { code: "stl-truncated" }],
    ["a hostile word", `solid A\n${facet.replace("outer", "\u001b]0;x\u0007outer".padEnd(99, "z"))}`, { code: "stl-truncated" }],
  ])("refuses %s", async (_, text, expected) => {
    expect(await problemOf("bad.stl", text)).toMatchObject({ kind: "input", ...expected });
  });

  it("counts lines in files that end them with a carriage return", async () => {
    expect(await problemOf("mac.stl", `solid A\n${facet.replace("1 0 0", "x 0 0")}`.replaceAll("\n", "\r"))).toMatchObject({
      where: "mac.stl, line 5, byte 58",
    });
    expect(await problemOf("dos.stl", `solid A\n${facet.replace("1 0 0", "x 0 0")}`.replaceAll("\n", "\r\n"))).toMatchObject({
      where: "dos.stl, line 5, byte 62",
    });
  });

  it("counts lines in unpacked text", async () => {
    expect(
      await problemOf("bad.stl.gz", gzipSync(`solid A\n${facet.repeat(3).replace(/1 0 0(?!.*1 0 0)/s, "1 x 0")}`)),
    ).toMatchObject({ where: "bad.stl.gz, line 19, byte 232" });
  });
});

describe("OBJ", () => {
  const square = "v 0 0 0\nv 1 0 0\nv 1 1 0\nv 0 1 0\n";

  it("makes a part of each group and cuts faces into triangles", async () => {
    const set = await read(
      "car.obj",
      `# a comment\nmtllib x.mtl\n${square}vn 0 0 1\nvt 0 0\ng hood\nusemtl red\nf 1/1/1 2/1/1 3/1/1 4/1/1\ng front bumper\ns off\nf 1//1 2//1 3//1\ng hood\nf -4 -3 -2\n`,
    );
    expect(names(set)).toEqual(["hood", "front bumper"]);
    expect([...set.partOf]).toEqual([0, 0, 1, 0]);
    expect([...set.positions.subarray(0, 18)]).toEqual([0, 0, 0, 1, 0, 0, 1, 1, 0, 0, 0, 0, 1, 1, 0, 0, 1, 0]);
    expect([...set.positions.subarray(27)]).toEqual([0, 0, 0, 1, 0, 0, 1, 1, 0]);
    expect(set.files[0].format).toBe("obj");
  });

  it("takes objects for groups, and the file's name where there is neither", async () => {
    expect(names(await read("plain.obj", `${square}f 1 2 3\no lid\nf 1 3 4\n`))).toEqual(["plain", "lid"]);
    expect(names(await read("plain.obj.gz", gzipSync(`${square}f 1 2 3\n`)))).toEqual(["plain"]);
  });

  it("is told by its content as well", async () => {
    expect((await read("mesh.txt", `# made somewhere\n\n${square}f 1 2 3\n`)).files[0].format).toBe("obj");
  });

  it("reads continued lines, CRLF and a last line without end", async () => {
    const set = await read("x.obj", `${square}f 1 2 \\\n 3 4\nf 1 2 3`.replaceAll("\n", "\r\n"));
    expect(set.partOf).toHaveLength(3);
  });

  it.each<[string, string, Record<string, string>]>([
    [
      "a vertex that is not there",
      `${square}f 1 2 5\n`,
      { code: "obj-face", message: "A face names vertex 5; 4 vertices are known so far.", where: "bad.obj, line 5, byte 38" },
    ],
    ["vertex 0", `${square}f 0 1 2\n`, { code: "obj-face", message: "A face names vertex 0; 4 vertices are known so far." }],
    ["too far back", `${square}f -5 1 2\n`, { code: "obj-face", message: "A face names vertex -5; 4 vertices are known so far." }],
    ["two corners", `${square}f 1 2\n`, { code: "obj-face", message: "A face has 2 corners; it needs three at least." }],
    ["no number", `${square}f 1 two 3\n`, { code: "obj-face", message: 'Expected the number of a vertex, found "two".' }],
    [
      "two coordinates",
      "v 0 0\nf 1 1 1\n",
      { code: "obj-number", message: 'Expected a coordinate, found "".', where: "bad.obj, line 1, byte 5" },
    ],
    [
      "an infinite coordinate",
      "v 0 1e99 0\n",
      { code: "coordinate-not-finite", message: 'The coordinate "1e99" is not a finite 32-bit number.' },
    ],
  ])("refuses %s", async (_, text, expected) => {
    expect(await problemOf("bad.obj", text)).toMatchObject({ kind: "input", ...expected });
  });
});

describe("files", () => {
  it("reads several as one body", async () => {
    const a = written("cab.stl", binary([triangle]));
    const b = written("bed.stl", `solid floor\n${facet}endsolid\nsolid gate\n${facet}endsolid\n`);
    const set = await readSurfaces([a, b]);
    expect(set.parts.map(({ name, file }) => [name, file])).toEqual([
      ["cab", 0],
      ["floor", 1],
      ["gate", 1],
    ]);
    expect([...set.partOf]).toEqual([0, 1, 2]);
    expect(set.files.map((file) => file.triangles)).toEqual([1, 2]);
  });

  it("refuses two files that hold a part of the same name", async () => {
    const a = written("old.stl", `solid gate\n${facet}endsolid\n`);
    const b = written("new.stl", `solid gate\n${facet}endsolid\n`);
    expect(await problem([a, b])).toEqual({
      kind: "input",
      code: "duplicate-part-name",
      message: 'Both old.stl and new.stl hold a part named "gate".',
      where: "new.stl",
      remedy:
        "Give only one of the files, or rename the part in one of them (the file itself, for a part without a name of its own).",
    });
  });

  it("refuses a file that is given twice", async () => {
    const a = written("a.stl", binary([triangle]));
    expect(await problem([a, join(folder, ".", "a.stl")])).toMatchObject({
      code: "file-twice",
      message: "a.stl was given twice; its parts would lie upon each other.",
    });
  });

  it.each<[string, () => string[], Record<string, string>]>([
    ["no file at all", () => [], { code: "no-files", message: "No surface file was given." }],
    [
      "a file that is not there",
      () => [join(folder, "none.stl")],
      { code: "file-missing", message: "There is no such file.", where: "none.stl", remedy: "Check the spelling and the folder." },
    ],
    ["a path through a file", () => [join(written("f.stl", "x"), "y.stl")], { code: "file-missing" }],
    [
      "a folder",
      () => [madeFolder("dir.stl")],
      { code: "not-a-file", message: "This is a folder; a surface file was expected.", where: "dir.stl" },
    ],
    ["a device", () => ["/dev/null"], { code: "not-a-file", message: "This is no plain file; a surface file was expected." }],
    ["an empty file", () => [written("empty.stl", "")], { code: "file-empty", message: "The file is empty (0 bytes)." }],
    [
      "an empty gzip file",
      () => [written("empty.stl.gz", gzipSync(""))],
      { code: "file-empty", message: "The packed file holds nothing (0 bytes)." },
    ],
    [
      "a cut gzip file",
      () => [written("cut.stl.gz", gzipSync(`solid A\n${facet.repeat(500)}`).subarray(0, 60))],
      { code: "gzip-damaged", message: "The file begins like a gzip file but cannot be unpacked (unexpected end of file)." },
    ],
    [
      "plain text",
      () => [written("notes.stl", "These are notes, no surface.\n")],
      {
        code: "not-a-surface",
        message: 'The file is text, but neither STL (which begins with "solid") nor OBJ.',
        remedy: "Export the surface as STL or OBJ.",
      },
    ],
    ["a word that only begins like solid", () => [written("x.stl", "solidity of the matter\n")], { code: "not-a-surface" }],
    [
      "a few bytes",
      () => [written("x.stl", Buffer.from([0, 1, 2]))],
      { code: "not-a-surface", message: "The file has 3 bytes; a binary STL has 84 at least." },
    ],
    [
      "zeros",
      () => [written("x.stl", Buffer.alloc(200))],
      { code: "not-a-surface", message: "The header announces 0 triangles, yet the file has 200 bytes; it is no binary STL." },
    ],
    [
      "a picture",
      () => [written("x.stl", Buffer.concat([Buffer.from("\u0089PNG\r\n", "latin1"), Buffer.alloc(300, 0xa7)]))],
      { code: "stl-truncated" },
    ],
  ])("refuses %s", async (_, paths, expected) => {
    expect(await problem(paths())).toMatchObject({ kind: "input", ...expected });
  });

  it("says so when no part index is left", async () => {
    const text = Array.from({ length: 65_536 }, (_, k) => `solid p${k}\nendsolid\n`).join("");
    expect(await problemOf("many.stl", text)).toMatchObject({
      code: "too-many-parts",
      message: "The surface has more than 65535 parts.",
    });
  });
});
