import { lstat, mkdir, readdir, readFile, rename, rm, stat, symlink, writeFile } from "node:fs/promises";
import { join, relative } from "node:path";
import { describe, expect, test } from "vitest";
import { prepareStudy } from "../../src/case/prepare.js";
import { readRunCard } from "../../src/case/read-run-card.js";
import { lockCase } from "../../src/run/case-lock.js";
import { withEntries } from "../../src/run/control-dict.js";
import { thrown } from "../study/thrown.js";
import { cartParts, cartStudy, temporaryFolder } from "./cart.js";

const one = { variants: { plain: cartParts } };
const rough = "{ cells: 5 thousand, half: auto, y-plus: 200, layers: 2 }";
const finer = "{ cells: 9 thousand, half: auto, y-plus: 200, layers: 2 }";

async function prepared(folder: string, keys: Record<string, string> = {}, options = {}) {
  const [done] = await prepareStudy(await cartStudy({ ...one, folder, keys: { mesh: rough, ...keys } }), options);
  return done!;
}

/** Every file below a folder with its content and the moment and node of its last writing. */
async function state(folder: string): Promise<Record<string, { text: string; written: number; node: number }>> {
  const entries = await readdir(folder, { recursive: true, withFileTypes: true });
  const files = entries.filter((entry) => entry.isFile()).map((entry) => join(entry.parentPath, entry.name));
  return Object.fromEntries(
    await Promise.all(
      files.sort().map(async (path) => {
        const { mtimeMs, ino } = await stat(path);
        return [relative(folder, path), { text: await readFile(path, "latin1"), written: mtimeMs, node: ino }] as const;
      }),
    ),
  );
}

const texts = (files: Awaited<ReturnType<typeof state>>) =>
  Object.fromEntries(Object.entries(files).map(([path, { text }]) => [path, text]));

async function withResults(path: string): Promise<void> {
  await mkdir(join(path, "postProcessing", "whole", "0"), { recursive: true });
  await writeFile(join(path, "postProcessing", "whole", "0", "force.dat"), "1 2 3\n");
  await mkdir(join(path, "100"));
  await writeFile(join(path, "100", "U"), "field");
  await mkdir(join(path, "constant", "polyMesh"));
  await writeFile(join(path, "constant", "polyMesh", "faces"), "mesh");
  await writeFile(join(path, "log.simpleFoam"), "log");
  await writeFile(join(path, "run-state.json"), "{}");
}

describe("writing a case", () => {
  test("a new case is whole: the tree, an executable script, a card with the hash of every file", async () => {
    const folder = await temporaryFolder();
    const { path, changed, remarks } = await prepared(folder);
    expect([path, changed, remarks]).toEqual([join(folder, "cases", "plain-30ms"), true, []]);
    const files = Object.keys(await state(path)).sort();
    const card = (await readRunCard(path))!;
    expect(files).toEqual([...Object.keys(card.hashes.files), "dragledger.json"].sort());
    expect(files).toEqual([
      "0/U",
      "0/k",
      "0/nut",
      "0/omega",
      "0/p",
      "Allclean",
      "Allrun",
      "README.md",
      "constant/transportProperties",
      "constant/triSurface/body.stl",
      "constant/turbulenceProperties",
      "dragledger.json",
      "first-order/system/controlDict",
      "first-order/system/fvSchemes",
      "first-order/system/fvSolution",
      "system/blockMeshDict",
      "system/controlDict",
      "system/decomposeParDict",
      "system/fvSchemes",
      "system/fvSolution",
      "system/meshQualityDict",
      "system/snappyHexMeshDict",
      "system/surfaceFeatureExtractDict",
    ]);
    expect((await stat(join(path, "Allrun"))).mode & 0o111).toBe(0o111);
    expect(card).toMatchObject({
      variant: "plain",
      leftOut: ["wheel-front-left", "wheel-rear-left"],
      reference: { symmetryFactor: 2 },
    });
    expect(card.hashes.inputs).toEqual([{ path: "plain.stl", sha256: expect.stringMatching(/^[0-9a-f]{64}$/) }]);
    expect(await readdir(join(folder, "cases"))).toEqual(["plain-30ms"]);
  });

  test("an unchanged study writes nothing at all", async () => {
    const folder = await temporaryFolder();
    const { path } = await prepared(folder);
    const before = await state(path);
    expect(await prepared(folder)).toMatchObject({ changed: false, remarks: [] });
    expect(await state(path)).toEqual(before);
  });

  test("the same study gives the same bytes", async () => {
    const [a, b] = [await prepared(await temporaryFolder()), await prepared(await temporaryFolder())];
    expect(texts(await state(a.path))).toEqual(texts(await state(b.path)));
  });

  test("a changed study rewrites what differs and nothing else", async () => {
    const folder = await temporaryFolder();
    const { path } = await prepared(folder);
    const before = await state(path);
    expect((await prepared(folder, { speed: "30.0 m/s", solver: "{ most-iterations: 777 }" })).changed).toBe(true);
    const after = await state(path);
    const touched = Object.keys(after).filter(
      (file) => after[file]!.node !== before[file]!.node || after[file]!.text !== before[file]!.text,
    );
    expect(touched).toEqual(["dragledger.json", "system/controlDict"]);
    expect(after["system/controlDict"]!.text).toContain("endTime             777;");
  });

  test("targets and limits change without --again, results stay", async () => {
    const folder = await temporaryFolder();
    const { path } = await prepared(folder);
    await withResults(path);
    expect(
      (await prepared(folder, { stop: "{ drag: 1 count, lift: 2 counts }", solver: "{ most-iterations: 900 }" })).changed,
    ).toBe(true);
    expect(await readFile(join(path, "100", "U"), "utf8")).toBe("field");
    expect((await readRunCard(path))!.stop.drag).toBe(0.001);
  });

  test("a change that spoils results is refused and says what changed; --again keeps them aside", async () => {
    const folder = await temporaryFolder();
    const { path } = await prepared(folder);
    await withResults(path);
    const before = await state(path);
    const refusal = await thrown(() => prepared(folder, { mesh: finer }));
    expect(refusal).toMatchObject({
      code: "case-has-results",
      where: path,
      remedy: "Prepare with --again to set it up anew (the old results are moved to earlier/), or undo the change.",
    });
    expect(refusal.message).toMatch(
      /^The case holds a mesh or results of another set-up: domain\.min \(.*\) m -> \(.*\) m; .* and \d+ more\.$/,
    );
    expect(await state(path)).toEqual(before);

    expect(await prepared(folder, { mesh: finer }, { again: true })).toMatchObject({
      changed: true,
      remarks: ["The results of the earlier set-up were moved to earlier/1."],
    });
    expect((await readdir(join(path, "earlier", "1"))).sort()).toEqual([
      "100",
      "constant",
      "log.simpleFoam",
      "postProcessing",
      "run-state.json",
    ]);
    expect(await readFile(join(path, "earlier", "1", "constant", "polyMesh", "faces"), "utf8")).toBe("mesh");
    expect((await readdir(path)).sort()).not.toContain("100");
    expect((await prepared(folder, { mesh: finer })).changed).toBe(false);
  });

  test("a surface that changed is named", async () => {
    const folder = await temporaryFolder();
    const { path } = await prepared(folder);
    await withResults(path);
    const higher = {
      plain: { ...cartParts, cab: cartParts.cab!.map((value, k) => (k % 3 === 2 && value > 1.3 ? value + 1e-4 : value)) },
    };
    const study = await cartStudy({ variants: higher, folder, keys: { mesh: rough } });
    expect((await thrown(() => prepareStudy(study))).message).toContain("plain.stl has changed");
  });

  test("a file edited by hand: left when the study has not changed it, else refused", async () => {
    const folder = await temporaryFolder();
    const { path } = await prepared(folder);
    const file = join(path, "system", "fvSolution");
    await writeFile(file, `${await readFile(file, "utf8")}// mine\n`);
    expect(await prepared(folder)).toMatchObject({
      changed: false,
      remarks: ["Edited by hand and left as it is: system/fvSolution."],
    });
    expect(await readFile(file, "utf8")).toContain("// mine");

    const control = join(path, "system", "controlDict");
    await writeFile(
      control,
      (await readFile(control, "utf8")).replace("purgeWrite          2;", "purgeWrite          9;\nmine 1;"),
    );
    const refusal = await thrown(() => prepared(folder, { solver: "{ most-iterations: 900 }" }));
    expect(refusal).toMatchObject({
      code: "case-edited",
      message: "system/controlDict was edited by hand since the case was prepared, and would change.",
    });
    expect((await prepared(folder, { solver: "{ most-iterations: 900 }" }, { again: true })).changed).toBe(true);
    expect(await readFile(control, "utf8")).toContain("endTime             900;");
    expect(await readFile(file, "utf8")).toContain("// mine");
  });

  test("what a killed run has left in controlDict counts as no edit", async () => {
    const folder = await temporaryFolder();
    const { path } = await prepared(folder);
    const control = join(path, "system", "controlDict");
    const running = withEntries(await readFile(control, "utf8"), { stopAt: "writeNow", endTime: "123", runTimeModifiable: "yes" });
    await writeFile(control, running);
    expect(await prepared(folder)).toMatchObject({ changed: false, remarks: [] });
    expect(await readFile(control, "utf8")).toBe(running);
    expect((await prepared(folder, { solver: "{ most-iterations: 900 }" })).changed).toBe(true);
    expect(await readFile(control, "utf8")).toContain("stopAt              endTime;");
  });

  test("a call that was cut short is made good by the next", async () => {
    const folder = await temporaryFolder();
    const { path } = await prepared(folder);
    const whole = texts(await state(path));
    // While a new case was assembled.
    await rename(path, join(folder, "cases", ".plain-30ms.part"));
    await rm(join(folder, "cases", ".plain-30ms.part", "dragledger.json"));
    expect((await prepared(folder)).changed).toBe(true);
    expect(texts(await state(path))).toEqual(whole);
    expect(await readdir(join(folder, "cases"))).toEqual(["plain-30ms"]);
    // While a case was changed: some files are new, one is missing, the card is old.
    const other = texts(await state((await prepared(await temporaryFolder(), { speed: "31 m/s" })).path));
    await writeFile(join(path, "0", "U"), other["0/U"]!);
    await writeFile(join(path, "0", ".k.part"), "half of it");
    await rm(join(path, "0", "k"));
    const study = await cartStudy({ ...one, folder, keys: { mesh: rough, speed: "31 m/s" } });
    const folderNow = join(folder, "cases", "plain-31ms");
    await rename(path, folderNow);
    await prepareStudy(study);
    const after = texts(await state(folderNow));
    delete after["0/.k.part"];
    expect(after).toEqual(other);
  });

  test("a file that was deleted comes back", async () => {
    const folder = await temporaryFolder();
    const { path } = await prepared(folder);
    const whole = texts(await state(path));
    await rm(join(path, "system"), { recursive: true });
    expect((await prepared(folder)).changed).toBe(true);
    expect(texts(await state(path))).toEqual(whole);
  });

  test("folders of others are left alone", async () => {
    const folder = await temporaryFolder();
    const path = join(folder, "cases", "plain-30ms");
    await mkdir(path, { recursive: true });
    expect((await prepared(folder)).changed).toBe(true);
    await rm(path, { recursive: true });
    await mkdir(path);
    await writeFile(join(path, "notes.txt"), "mine");
    expect(await thrown(() => prepared(folder))).toEqual({
      code: "foreign-folder",
      message:
        "This folder has no dragledger.json: it was not made by dragledger and is left alone; a case was to be written here.",
      where: path,
      remedy: "Move it away, or rename the variant.",
    });
    expect(await readdir(path)).toEqual(["notes.txt"]);
    await rm(path, { recursive: true });
    await writeFile(path, "a file");
    expect(await thrown(() => prepared(folder))).toMatchObject({
      code: "foreign-folder",
      message: "This was not made by dragledger and is left alone; a case was to be written here.",
    });
    await rm(path);
    await symlink(join(folder, "nowhere"), path);
    expect(await thrown(() => prepared(folder))).toMatchObject({ code: "foreign-folder" });
  });

  test("what the system refuses is said in words", async () => {
    const folder = await temporaryFolder();
    await writeFile(join(folder, "cases"), "a file");
    expect(await thrown(() => prepared(folder))).toMatchObject({
      code: "cannot-write-case",
      message: "The case cannot be written: there is a file where a folder is needed.",
      remedy: "Make room or set the permissions there, then prepare again: what was written so far is kept or repaired.",
    });
  });

  test("a case of another study is left alone", async () => {
    const folder = await temporaryFolder();
    await prepared(folder);
    expect(await thrown(() => prepared(folder, { study: "other" }))).toMatchObject({
      code: "case-of-another-study",
      message: "The folder holds variant 'plain' of study 'cart-lid'; variant 'plain' of 'other' was to be written here.",
    });
  });

  test("links in the place of files are replaced, not followed", async () => {
    const folder = await temporaryFolder();
    const { path } = await prepared(folder);
    const outside = join(folder, "outside");
    await writeFile(outside, "mine");
    await rm(join(path, "0", "U"));
    await symlink(outside, join(path, "0", "U"));
    expect((await prepared(folder, { speed: "30.001 m/s" }, { again: true }).catch((error) => error)).code).not.toBe(
      "foreign-folder",
    );
    expect(await readFile(outside, "utf8")).toBe("mine");
  });

  test("a card that lists paths outside of the case removes nothing there", async () => {
    const folder = await temporaryFolder();
    const { path } = await prepared(folder);
    await writeFile(join(folder, "precious"), "mine");
    const card = JSON.parse(await readFile(join(path, "dragledger.json"), "utf8"));
    card.hashes.files["../../precious"] = "0".repeat(64);
    await writeFile(join(path, "dragledger.json"), JSON.stringify(card));
    await prepared(folder, { speed: "30 m/s" });
    expect(await readFile(join(folder, "precious"), "utf8")).toBe("mine");
  });

  test("a case that is being run is not changed", async () => {
    const folder = await temporaryFolder();
    const { path } = await prepared(folder);
    const held = await lockCase(path, () => undefined);
    try {
      const before = await state(path);
      expect(await prepared(folder)).toMatchObject({ changed: false });
      expect(await thrown(() => prepared(folder, { solver: "{ most-iterations: 900 }" }))).toMatchObject({
        code: "case-is-running",
        message: "This case is being run; it was not changed.",
      });
      expect(texts(await state(path))).toEqual(texts(before));
    } finally {
      await held.release();
    }
    expect((await prepared(folder, { solver: "{ most-iterations: 900 }" })).changed).toBe(true);
    expect((await lstat(join(path, "run.lock")).catch(() => null)) === null).toBe(true);
  });
});
