import { link, mkdtemp, readdir, readFile, rm, symlink, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterEach, beforeEach, describe, expect, it } from "vitest";
import { readSurfaces } from "../../../src/geometry/files/read.js";
import { writeRepaired } from "../../../src/geometry/files/write-repaired.js";
import { asciiStl, binaryStl } from "../../../src/geometry/files/write-stl.js";
import { repair } from "../../../src/geometry/repair/repair.js";
import { bodyOf, box, sphere, turnedOver } from "../shapes.js";

let folder: string;
beforeEach(async () => {
  folder = await mkdtemp(join(tmpdir(), "repaired-"));
});
afterEach(() => rm(folder, { recursive: true, force: true }));

const body = bodyOf({ "left door": turnedOver(box([0, 0, 0], [1, 2, 3])), nose: sphere(1, 6, [5, 0, 0]) });

async function readBack(text: Uint8Array) {
  const path = join(folder, "body.stl");
  await writeFile(path, text);
  return readSurfaces([path]);
}

describe("a repaired body as a file", () => {
  it("keeps names and parts in text, and coordinates to the bit", async () => {
    const set = await readBack(asciiStl(body, ({ name }) => name));
    const mended = repair(set).set;
    const path = join(folder, "mended.stl");
    await writeRepaired(path, mended);
    const again = await readSurfaces([path]);
    expect(again.parts.map(({ name }) => name)).toEqual(["left door", "nose"]);
    expect(again.positions).toEqual(mended.positions);
    expect(await readdir(folder)).toHaveLength(2);
  });

  it("is binary where the one part is called like the file, and keeps another name in text", async () => {
    const set = { ...(await readBack(binaryStl(bodyOf({ ball: sphere(1, 5) })))) };
    const ball = { ...set, parts: [{ ...set.parts[0]!, name: "ball" }] };
    await writeRepaired(join(folder, "ball.stl"), ball);
    expect((await readFile(join(folder, "ball.stl"))).length).toBe(84 + 50 * set.partOf.length);
    await writeRepaired(join(folder, "other.stl"), ball);
    expect((await readSurfaces([join(folder, "other.stl")])).parts.map(({ name }) => name)).toEqual(["ball"]);
  });

  it("never goes over a file that was read, by no name, path or link", async () => {
    const text = asciiStl(body);
    const set = await readBack(text);
    await symlink(join(folder, "body.stl"), join(folder, "soft.stl"));
    await link(join(folder, "body.stl"), join(folder, "hard.stl"));
    for (const path of [
      join(folder, "body.stl"),
      join(folder, ".", "..", folder.split("/").at(-1)!, "body.stl"),
      join(folder, "soft.stl"),
      join(folder, "hard.stl"),
    ])
      await expect(writeRepaired(path, set, { overwrite: true })).rejects.toMatchObject({
        kind: "input",
        code: "would-overwrite-input",
      });
    expect(await readFile(join(folder, "body.stl"))).toEqual(Buffer.from(text));
  });

  it("goes over no other file unless told, and only to an STL name", async () => {
    const set = await readBack(asciiStl(body));
    const path = join(folder, "other.stl");
    await writeFile(path, "mine");
    await expect(writeRepaired(path, set)).rejects.toMatchObject({ code: "file-exists" });
    expect(await readFile(path, "utf8")).toBe("mine");
    await writeRepaired(path, set, { overwrite: true });
    expect((await readSurfaces([path])).parts).toHaveLength(2);
    await expect(writeRepaired(join(folder, "body.obj"), set)).rejects.toMatchObject({ code: "not-an-stl-name" });
  });
});
