import { mkdir, readlink, writeFile } from "node:fs/promises";
import { join } from "node:path";
import { expect, onTestFinished, test } from "vitest";
import { openWorkplace } from "../../src/run/workplace.js";
import { exists, problemOf } from "./listening.js";
import { temporaryFolder } from "./stand-in.js";

test("a plain path is worked in as it is", async () => {
  const path = await temporaryFolder();
  expect(await openWorkplace(path)).toMatchObject({ cwd: path, args: [] });
});

test.each(["my study", "front's", 'the "new" nose', "tab\there"])("%s: through a link, gone afterwards", async (name) => {
  const path = join(await temporaryFolder(), name);
  await mkdir(path);
  const place = await openWorkplace(path);
  expect(place.args[0]).toBe("-case");
  expect(place.args[1]).toMatch(/^[^\s"']+$/);
  expect(await readlink(place.args[1]!)).toBe(path);
  await writeFile(join(path, "kept"), "");
  await place.leave();
  expect(await exists(place.cwd)).toBe(false);
  expect(await exists(join(path, "kept"))).toBe(true);
});

test("no way round when the folder for temporary files has a blank too", async () => {
  const before = process.env.TMPDIR;
  const path = await temporaryFolder();
  process.env.TMPDIR = join(path, "temporary files");
  onTestFinished(() => {
    if (before === undefined) delete process.env.TMPDIR;
    else process.env.TMPDIR = before;
  });
  expect(await problemOf(openWorkplace(join(path, "a b")))).toMatchObject({
    kind: "input",
    code: "path-refused-by-solver",
    where: join(path, "a b"),
    remedy: "Move the study to a path without them, or set TMPDIR to one.",
  });
});
