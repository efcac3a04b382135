import { mkdir, mkdtemp, readdir, readFile, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterEach, beforeEach, expect, test } from "vitest";
import { writeWhole } from "../src/write-whole.js";

let folder: string;
beforeEach(async () => {
  folder = await mkdtemp(join(tmpdir(), "whole-"));
});
afterEach(() => rm(folder, { recursive: true, force: true }));

test("writes text and part of an array, over what was there, and leaves nothing else", async () => {
  const path = join(folder, "a.txt");
  await writeWhole(path, "first");
  await writeWhole(path, Uint8Array.from([1, 65, 66, 2]).subarray(1, 3));
  expect(await readFile(path, "utf8")).toBe("AB");
  expect(await readdir(folder)).toEqual(["a.txt"]);
});

test("says why it cannot, as an input problem, and keeps what was there", async () => {
  await writeFile(join(folder, "file"), "mine");
  await mkdir(join(folder, "taken"));
  const fault = (path: string) =>
    writeWhole(path, "x").then(
      () => null,
      (error: unknown) => error,
    );
  expect(await fault(join(folder, "none", "a.txt"))).toMatchObject({
    kind: "input",
    code: "cannot-write",
    message: `${join(folder, "none", "a.txt")} cannot be written: its folder does not exist.`,
  });
  expect(await fault(join(folder, "file", "a.txt"))).toMatchObject({ message: expect.stringContaining("its folder is a file") });
  expect(await fault(join(folder, "taken"))).toMatchObject({ message: expect.stringContaining("there is a folder of that name") });
  expect(await readFile(join(folder, "file"), "utf8")).toBe("mine");
});
