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
    // Every finding says what, why, where and what to do.
    const found = new Map<string, { part: string | null; count: number; message: string; remedy: string; places: number[][] }>(
      survey.findings.map((finding: { code: string }) => [finding.code, finding]),
    );
    for (const { message, remedy, count } of found.values()) {
      expect(message).toMatch(/\.\)?$/);
      expect(remedy.length).toBeGreaterThan(5);
      expect(count).toBeGreaterThan(0);
    }
    // Both tyres are open where they stand on the ground, and inside out; a quarter of the triangles is there twice.
    for (const code of ["open-edges", "non-manifold-edges", "duplicate-triangles", "leak", "inward-part", "thin-part"])
      expect([...found.keys()]).toContain(code);
    expect(survey.topology.borders.map(({ parts }: { parts: string[] }) => parts[0]).sort()).toEqual([
      expect.stringContaining("fr-wh-tyre"),
      expect.stringContaining("rr-wh-tyre"),
    ]);
    // The leak test at the cell and at half of it: the same two ways in, at the lowest points of the wheels.
    expect(survey.fit.leaks.map(({ cell }: { cell: number }) => cell / survey.fit.cell)).toEqual([1, 0.5]);
    for (const { reached, holes } of survey.fit.leaks) {
      expect(reached).toBe(true);
      const near = (x: number) =>
        holes.some(({ centre }: { centre: number[] }) => Math.abs(centre[0]! - x) < 0.03 && centre[2]! < 0.01);
      expect([near(0), near(1.42)]).toEqual([true, true]);
    }
    expect(survey.wheels.map(({ position }: { position: string }) => position)).toContain("front");
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
        .replace("start: ladder", "start: cold")
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
