import { mkdir, mkdtemp, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join, relative } from "node:path";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { parseStudy, readStudy } from "../../src/study/read.js";
import type { Study } from "../../src/study/study.js";
import { least, sketch } from "./sketch.js";
import { thrown } from "./thrown.js";

let folder = "";
beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), "study-"));
  await mkdir(join(folder, "geometry", "folder.stl"), { recursive: true });
  for (const name of ["pickup", "tailgate", "bed-cover"])
    await writeFile(join(folder, "geometry", `${name}.stl`), "solid\nendsolid\n");
});
afterAll(() => rm(folder, { recursive: true }));

async function write(name: string, text: string | Uint8Array): Promise<string> {
  const path = join(folder, name);
  await writeFile(path, text);
  return path;
}

describe("a study file", () => {
  test("resolves every key into SI and absolute paths", async () => {
    const path = await write("full.yaml", sketch);
    const file = (name: string): string => join(folder, "geometry", `${name}.stl`);
    const wanted: Study = {
      name: "pickup-bed",
      question: "Does a bed cover pay, and where?",
      path,
      folder,
      air: { temperature: 288.15, pressure: 101325, humidity: 0 },
      speeds: [30],
      yaws: [0],
      ground: "moving",
      baseline: "open-bed",
      variants: [
        { name: "open-bed", files: [file("pickup"), file("tailgate")] },
        { name: "covered-bed", files: [file("pickup"), file("tailgate"), file("bed-cover")] },
      ],
      body: { unit: "m", travel: "-x", up: "+z", clearance: 0, wheelbase: "auto", referenceArea: "auto" },
      parts: [
        { name: "wheels", match: "wheel-*", rotating: true },
        { name: "bed-cover", match: "bed-cover", rotating: false },
      ],
      mesh: { cells: 1_500_000, half: "auto", yPlus: 50, layers: 3, shift: 0 },
      solver: { turbulence: "k-omega-SST", mode: "steady", start: "ladder", relaxation: 0.9, mostIterations: 3000 },
      stop: { drag: 0.001, lift: 0.003, confidence: 0.95 },
    };
    expect(await readStudy(path)).toEqual(wanted);
  });

  test("needs a name, a speed and a variant; all else has the defaults that the full one spells out", () => {
    const short = parseStudy(least, "/s/least.yaml");
    const long = parseStudy(sketch, "/s/full.yaml");
    expect({ ...short, variants: [], name: "", path: "", question: null, baseline: "", parts: [] }).toEqual({
      ...long,
      variants: [],
      name: "",
      path: "",
      question: null,
      baseline: "",
      parts: [],
    });
    expect(short.baseline).toBe("blunt");
    expect(short.parts).toEqual([]);
    expect(short.question).toBeNull();
  });

  test("is found by a relative path, from the folder the program runs in", async () => {
    const path = await write("relative.yaml", sketch);
    const study = await readStudy(relative(process.cwd(), path));
    expect(study.path).toBe(path);
    expect(study.variants[0]!.files[0]).toBe(join(folder, "geometry", "pickup.stl"));
  });

  test("reads with a byte order mark, carriage returns and aliases, and as JSON", async () => {
    const plain = parseStudy(least, "/s/a.yaml");
    const marked = await write(
      "marked.yaml",
      `\ufeff${least.replaceAll("\n", "\r\n").replace("blunt.stl", "geometry/pickup.stl")}`,
    );
    expect((await readStudy(marked)).speeds).toEqual([30]);
    expect(parseStudy('{"study":"nose","speed":"30 m/s","variants":{"blunt":{"files":["blunt.stl"]}}}', "/s/a.yaml")).toEqual(
      plain,
    );
    expect(
      parseStudy(
        "study: nose\nspeed: 30 m/s\nvariants: { blunt: { files: &shared [blunt.stl] }, other: { files: *shared } }",
        "/s/a.yaml",
      ).variants,
    ).toEqual([
      { name: "blunt", files: ["/s/blunt.stl"] },
      { name: "other", files: ["/s/blunt.stl"] },
    ]);
  });

  test("takes lists of speeds, lengths for auto, and lists of patterns as several rules of one name", () => {
    const study = parseStudy(
      `${least.replace("30 m/s", "[108 km/h, 35, 67 mph]")}body: { wheelbase: 106 in, reference-area: 2.1 m2, unit: mm, travel: +y, up: +z }
parts: { wheels: { match: [front, "rear-*"], rotating: true } }
mesh: { half: false, cells: 60 thousand, layers: 0 }
ground: fixed
`,
      "/s/a.yaml",
    );
    expect(study.speeds).toEqual([30, 35, 29.95168]);
    expect(study.body).toEqual({ unit: "mm", travel: "+y", up: "+z", clearance: 0, wheelbase: 2.6924, referenceArea: 2.1 });
    expect(study.parts).toEqual([
      { name: "wheels", match: "front", rotating: true },
      { name: "wheels", match: "rear-*", rotating: true },
    ]);
    expect(study.mesh).toEqual({ cells: 60_000, half: false, yPlus: 50, layers: 0, shift: 0 });
    expect(study.ground).toBe("fixed");
    expect(parseStudy(`${least}body: { wheelbase: none }\n`, "/s/a.yaml").body.wheelbase).toBe("none");
  });

  test("may name zero yaw in any way", () => {
    for (const yaw of ["0", "0 deg", "0.0 rad", "[0 deg]", "-0"])
      expect(parseStudy(`${least}yaw: ${yaw}\n`, "/s/a.yaml").yaws).toEqual([0]);
    expect(parseStudy(least, "/s/a.yaml").yaws).toEqual([0]);
    expect(parseStudy(`${least}yaw: [-5 deg, 0.1 rad]\n`, "/s/a.yaml").yaws).toEqual([
      expect.closeTo((-5 * Math.PI) / 180, 12),
      0.1,
    ]);
  });

  test("may have variants with the names of an object's own members", () => {
    const text = "study: a\nspeed: 30 m/s\nvariants: { constructor: { files: [a.stl] }, toString: { files: [b.stl] } }\n";
    expect(parseStudy(text, "/s/a.yaml").variants.map((variant) => variant.name)).toEqual(["constructor", "toString"]);
  });
});

describe("a study file that cannot be read", () => {
  const remedy = "Write a study file with: dragledger new study.yaml body.stl";

  test("missing", async () => {
    const path = join(folder, "none.yaml");
    expect(await thrown(() => readStudy(path))).toEqual({
      code: "study-missing",
      message: "There is no such study file.",
      where: path,
      remedy: `Check the path. ${remedy}`,
    });
  });

  test("a folder", async () => {
    expect(await thrown(() => readStudy(folder))).toEqual({
      code: "study-is-folder",
      message: "This is a folder; expected a study file.",
      where: folder,
      remedy: "Name the study file in it.",
    });
  });

  test("a device", async () => {
    expect(await thrown(() => readStudy("/dev/zero"))).toMatchObject({
      code: "study-not-a-file",
      message: "This is no ordinary file; expected a study file.",
    });
  });

  test("empty, or of comments only", async () => {
    for (const text of ["", " \n\n"]) {
      const path = await write("empty.yaml", text);
      expect(await thrown(() => readStudy(path))).toEqual({
        code: "study-empty",
        message: "The study file is empty.",
        where: path,
        remedy,
      });
    }
    expect(await thrown(() => parseStudy("# later\n", "/s/a.yaml", "a.yaml"))).toEqual({
      code: "study-not-a-map",
      message: "The study file holds nothing; expected keys such as 'study', 'speed' and 'variants'.",
      where: "a.yaml:1:1",
      remedy,
    });
  });

  test("a surface: binary, other bytes, text", async () => {
    const binary = await write("a.stl", new Uint8Array(200));
    expect(await thrown(() => readStudy(binary))).toMatchObject({
      code: "study-not-text",
      message: "The file holds zero bytes; expected a study file.",
      remedy: "Name the study file, not a surface.",
    });
    const latin = await write("latin.yaml", Uint8Array.from([0x73, 0x3a, 0x20, 0xe9]));
    expect(await thrown(() => readStudy(latin))).toMatchObject({
      code: "study-not-text",
      message: "The file is not UTF-8 text; expected a study file.",
      remedy: "Save the file as UTF-8.",
    });
    expect(await thrown(() => parseStudy("solid car\n facet normal 0 0 1\n", "/s/a.yaml", "car.stl"))).toMatchObject({
      code: "study-not-a-map",
      message: `The study file holds "solid car facet normal 0 0 1"; expected keys such as 'study', 'speed' and 'variants'.`,
    });
  });

  test("too large", async () => {
    const path = await write("large.yaml", "# ".repeat(70_000));
    expect(await thrown(() => readStudy(path))).toMatchObject({
      code: "study-too-large",
      message: "The file has 140000 bytes; a study file has at most 131072.",
    });
  });

  test("one that names a missing file, or a folder", async () => {
    const text = least.replace("[blunt.stl]", "[geometry/pickup.stl, geometry/pick-up.stl]");
    const path = await write("gone.yaml", text);
    expect(await thrown(() => readStudy(path))).toEqual({
      code: "study-missing-file",
      message: "Variant 'blunt' names geometry/pick-up.stl, which does not exist.",
      where: `${path}:4:41 (variants.blunt.files[1])`,
      remedy: `Looked for at ${join(folder, "geometry", "pick-up.stl")}; relative paths start at the folder of the study file.`,
    });
    const other = await write("folder.yaml", least.replace("blunt.stl", "geometry/folder.stl"));
    expect(await thrown(() => readStudy(other))).toMatchObject({
      code: "study-missing-file",
      message: "Variant 'blunt' names geometry/folder.stl, which is not a file.",
    });
  });
});
