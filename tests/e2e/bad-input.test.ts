import { copyFile, mkdir, mkdtemp, readFile, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { dragledger, root } from "../helpers/built.js";

// Every message as a user sees it: what is wrong, where, and the way out.

let folder: string;
const sample = join(root, "sample-geometry/geometry/mirror-left.stl");

beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), "dragledger-bad-"));
  await mkdir(join(folder, "folder.stl"));
  await mkdir(join(folder, "two"));
  await copyFile(sample, join(folder, "body.stl"));
  await copyFile(sample, join(folder, "two/body.stl"));
  await writeFile(join(folder, "empty.stl"), "");
  await writeFile(join(folder, "cut.stl"), (await readFile(sample)).subarray(0, 1000));
  await writeFile(join(folder, "text.stl"), "hello world, no surface here\n");
  await writeFile(
    join(folder, "nan.stl"),
    "solid a\nfacet normal 0 0 1\nouter loop\nvertex 0 0 0\nvertex 1 0 nan\nvertex 0 1 0\nendloop\nendfacet\nendsolid a\n",
  );
  await writeFile(join(folder, "key.yaml"), "study: x\nspeed: 30 m/s\ngroud: moving\nvariants: { a: { files: [body.stl] } }\n");
  await writeFile(join(folder, "unit.yaml"), "study: x\nspeed: 30 kg\nvariants: { a: { files: [body.stl] } }\n");
  await writeFile(join(folder, "nofiles.yaml"), "study: x\nspeed: 30 m/s\nvariants:\n  a: { files: [] }\n");
  await writeFile(
    join(folder, "good.yaml"),
    "study: x\nspeed: 30 m/s\nbody: { wheelbase: none }\nmesh: { cells: 5 thousand }\nvariants:\n  a: { files: [body.stl] }\n",
  );
});

afterAll(() => rm(folder, { recursive: true, force: true }));

const cases: { what: string; args: string[]; message: string[] }[] = [
  {
    what: "a missing file",
    args: ["inspect", "missing.stl"],
    message: ["error: There is no such file.", "  at missing.stl", "  Check the spelling and the folder."],
  },
  {
    what: "a directory",
    args: ["inspect", "folder.stl"],
    message: [
      "error: This is a folder; a surface file was expected.",
      "  at folder.stl",
      "  Name the STL or OBJ files themselves.",
    ],
  },
  {
    what: "an empty file",
    args: ["inspect", "empty.stl"],
    message: ["error: The file is empty (0 bytes).", "  at empty.stl", "  Export the surface again."],
  },
  {
    what: "a truncated binary",
    args: ["inspect", "cut.stl"],
    message: [
      "error: The header announces 698 triangles, which need 34984 bytes, but the file has 1000.",
      "  at cut.stl",
      "  Copy or export the file again; it was cut off, or it is no binary STL.",
    ],
  },
  {
    what: "text that is no STL",
    args: ["inspect", "text.stl"],
    message: [
      'error: The file is text, but neither STL (which begins with "solid") nor OBJ.',
      "  at text.stl",
      "  Export the surface as STL or OBJ.",
    ],
  },
  {
    what: "a coordinate that is no number",
    args: ["inspect", "nan.stl"],
    message: [
      'error: The coordinate "nan" is not a finite 32-bit number.',
      "  at nan.stl, line 5, byte 62",
      "  Export the surface again; such corners usually come from a failed scaling or an empty facet.",
    ],
  },
  {
    what: "two files with a part of one name",
    args: ["inspect", "body.stl", "two/body.stl"],
    message: [
      'error: Both body.stl and two/body.stl hold a part named "body".',
      "  at two/body.stl",
      "  Give only one of the files, or rename the part in one of them (the file itself, for a part without a name of its own).",
    ],
  },
  {
    what: "a study with an unknown key",
    args: ["prepare", "key.yaml"],
    message: [
      "error: Unknown key 'groud' (did you mean 'ground'?).",
      "  at key.yaml:3:1 (groud)",
      "  Keys possible here: study, question, air, speed, yaw, ground, baseline, variants, body, parts, mesh, solver, stop, floor.",
    ],
  },
  {
    what: "a study with a wrong unit",
    args: ["prepare", "unit.yaml"],
    message: [
      'error: Key \'speed\' is "30 kg", which is not a speed; expected a speed such as "30 m/s" or "108 km/h".',
      "  at unit.yaml:2:8 (speed)",
      "  Write, for example, speed: 30 m/s.",
    ],
  },
  {
    what: "a variant without files",
    args: ["prepare", "nofiles.yaml"],
    message: [
      "error: Key 'variants.a.files' is empty; expected a list of paths such as [geometry/body.stl, geometry/wheels.stl].",
      "  at nofiles.yaml:4:15 (variants.a.files)",
      "  Write, for example, files: [geometry/body.stl].",
    ],
  },
];

describe("bad input is exit 2 and says what, where and what to do", () => {
  test.each(cases)("$what", async ({ args, message }) => {
    const { code, stdout, stderr } = await dragledger(args, { cwd: folder });
    expect(stderr.split("\n")).toEqual(message);
    expect(stdout).toBe("");
    expect(code).toBe(2);
  });

  test.each(cases)("$what, as JSON", async ({ args, message }) => {
    const { code, stdout, stderr } = await dragledger([...args, "--json"], { cwd: folder });
    expect(code).toBe(2);
    expect(stderr).toBe("");
    const document = JSON.parse(stdout);
    expect(document).toMatchObject({
      schema: "dragledger/error/1",
      message: message[0].replace("error: ", ""),
      where: message[1].replace("  at ", ""),
      remedy: message[2].trim(),
    });
    expect(document.code).toMatch(/^[a-z-]+$/);
  });
});

describe("a missing solver", () => {
  test("is exit 4, names the command that installs it, and leaves the prepared case as it is", async () => {
    const empty = join(folder, "no-programs");
    await mkdir(empty);
    const { code, stdout, stderr } = await dragledger(["run", "good.yaml", "--json"], {
      cwd: folder,
      env: { PATH: empty, WM_PROJECT_DIR: "", DRAGLEDGER_OPENFOAM: "" },
    });
    expect(JSON.parse(stdout)).toMatchObject({ schema: "dragledger/error/1", code: "solver-missing" });
    expect(stdout).toContain("apt-get install openfoam");
    expect(stderr).not.toContain("error");
    expect(code).toBe(4);
  });
});
