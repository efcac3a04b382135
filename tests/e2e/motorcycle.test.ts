import { existsSync } from "node:fs";
import { mkdtemp, readFile, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { gunzipSync } from "node:zlib";
import { execa } from "execa";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { dragledger, solverMissing } from "../helpers/built.js";

// A real body that nobody here made: the motorcycle of the platform's own examples, 67 parts. Used where it is installed, not copied.

const source = "/usr/share/doc/openfoam-examples/examples/resources/geometry/motorBike.obj.gz";
const missing = solverMissing ?? (existsSync(source) ? null : "openfoam-examples is not installed");
let folder: string;

beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), "dragledger-motorcycle-"));
  if (missing) return;
  await writeFile(join(folder, "motorcycle.obj"), gunzipSync(await readFile(source)));
  await execa("surfaceConvert", ["motorcycle.obj", "motorcycle.stl"], {
    cwd: folder,
    env: { WM_PROJECT_DIR: process.env.WM_PROJECT_DIR ?? "/usr/share/openfoam", PWD: folder },
  });
});

afterAll(() => rm(folder, { recursive: true, force: true }));

describe.skipIf(missing !== null)(`the motorcycle${missing ? ` (${missing})` : ""}`, () => {
  test("inspect reads 67 parts and says what is wrong with them", { timeout: 120_000 }, async () => {
    const { code, stdout } = await dragledger(
      ["inspect", "motorcycle.stl", "--travel", "-x", "--up", "+z", "--unit", "m", "--json"],
      { cwd: folder },
    );
    const survey = JSON.parse(stdout);
    expect(survey.schema).toBe("dragledger/inspect/1");
    expect(survey.parts).toHaveLength(67);
    expect(survey.triangles).toBeGreaterThan(300_000);
    expect(new Set(survey.parts.map((part: { patch: string }) => part.patch)).size).toBe(67);
    expect(survey.topology.openEdges + survey.topology.nonManifoldEdges).toBeGreaterThan(0);
    expect(survey.findings.length).toBeGreaterThan(0);
    expect([0, 3]).toContain(code);
  });

  test("new, prepare, run 50 iterations, and a ledger with every part", { timeout: 420_000 }, async () => {
    expect((await dragledger(["new", "motorcycle.yaml", "motorcycle.stl"], { cwd: folder })).code).toBe(0);
    const draft = await readFile(join(folder, "motorcycle.yaml"), "utf8");
    expect(draft).toContain("GUESS");
    await writeFile(
      join(folder, "motorcycle.yaml"),
      draft
        .replace(/cells: [^,}\n]+/, "cells: 60 thousand")
        .replace(/layers: \d+/, "layers: 0")
        .replace(/most-iterations: \d+/, "most-iterations: 50"),
    );
    const run = await dragledger(["run", "motorcycle.yaml", "--json"], { cwd: folder, timeout: 400_000 });
    const { cases } = JSON.parse(run.stdout);
    expect(cases[0]).toMatchObject({ state: "stopped-at-limit", iterations: 50 });
    const ledger = await dragledger(["ledger", cases[0].path, "--json"], { cwd: folder });
    const [entry] = JSON.parse(ledger.stdout).runs;
    expect(ledger.code).toBe(0);
    expect(entry.parts).toHaveLength(67);
    expect(entry.closing.ok).toBe(true);
    // The platform's own example ends near 0.41 on its own mesh and area; fifty iterations on a coarse mesh only show the size.
    expect(entry.total.cd.value).toBeGreaterThan(0.2);
    expect(entry.total.cd.value).toBeLessThan(1.2);
  });
});
