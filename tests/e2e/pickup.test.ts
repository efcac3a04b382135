import { cp, mkdtemp, readFile, rm, stat, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { readCaseRecord } from "../../src/ledger/case-record.js";
import { readCheckMesh } from "../../src/openfoam/mesh-log.js";
import { dragledger, root, solverMissing } from "../helpers/built.js";

// The sample study with the built program and the real solver, on a mesh that is far too coarse and too short for results and fine for the chain.

let folder: string;
const variants = ["open-bed", "covered-bed", "tailgate-down"];
const caseOf = (variant: string) => join(folder, "cases", `${variant}-30ms`);

beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), "dragledger-pickup-"));
  await cp(join(root, "sample-geometry/geometry"), join(folder, "geometry"), { recursive: true });
  const study = await readFile(join(root, "sample-geometry/pickup-bed.yaml"), "utf8");
  await writeFile(
    join(folder, "pickup-bed.yaml"),
    study.replace(/cells: [^,]+,/, "cells: 20 thousand,").replace(/most-iterations: \d+/, "most-iterations: 60"),
  );
});

afterAll(() => rm(folder, { recursive: true, force: true }));

describe.skipIf(solverMissing !== null)(
  `the sample study with the real solver${solverMissing ? ` (${solverMissing})` : ""}`,
  () => {
    test("all three variants are prepared, meshed and solved by one run", { timeout: 360_000 }, async () => {
      const { code, stdout } = await dragledger(["run", "pickup-bed.yaml", "--json"], { cwd: folder, timeout: 350_000 });
      const document = JSON.parse(stdout);
      expect(document.schema).toBe("dragledger/run/1");
      expect(document.cases.map((each: { path: string }) => each.path)).toEqual(variants.map(caseOf));
      for (const each of document.cases) {
        expect(each.state).toMatch(/^(settled|stopped-at-limit)$/);
        expect(each.iterations).toBeGreaterThanOrEqual(50);
        expect(each.iterations).toBeLessThanOrEqual(60);
      }
      // so few iterations need not settle a pickup: done, and the answer is no.
      expect(code).toBe(document.cases.every((each: { settled: boolean }) => each.settled) ? 0 : 3);
    });

    test.each(variants)("%s: the mesh check reports no failed check", async (variant) => {
      const path = join(caseOf(variant), "log.checkMesh");
      expect(readCheckMesh(await readFile(path), path)).toMatchObject({ ok: true, failedChecks: 0 });
    });

    test.each(variants)("%s: the parts add up to the whole within print precision in every row", async (variant) => {
      const record = await readCaseRecord(caseOf(variant));
      expect(record.parts.length).toBe(record.card!.parts.length);
      // Tables hold eleven digits; a sum of a dozen of them is good to some 1e-10 of the sizes summed.
      for (const key of ["cd", "cl"] as const)
        for (let row = 0; row < record.whole.time.length; row++) {
          const sum = record.parts.reduce((total, part) => total + part[key][row], 0);
          const size = record.parts.reduce((total, part) => total + Math.abs(part[key][row]), 0);
          expect(Math.abs(sum - record.whole[key][row])).toBeLessThanOrEqual(1e-9 * size);
        }
      expect(record.whole.time.length).toBeGreaterThanOrEqual(50);
    });

    test("the ledger closes, the comparison names the bed cover, the report is written", async () => {
      const ledger = await dragledger(["ledger", "pickup-bed.yaml", "--json"], { cwd: folder });
      const { runs } = JSON.parse(ledger.stdout);
      expect(ledger.code).toBe(0);
      expect(runs.map((run: { variant: string }) => run.variant)).toEqual(variants);
      for (const run of runs) {
        expect(run.closing.ok).toBe(true);
        expect(run.total.cd.value).toBeGreaterThan(0.2);
        expect(run.total.cd.value).toBeLessThan(1);
      }
      const compared = await dragledger(["compare", "pickup-bed.yaml", "--json"], { cwd: folder });
      const { comparisons } = JSON.parse(compared.stdout);
      expect(
        comparisons.map((each: { a: { variant: string }; b: { variant: string } }) => [each.a.variant, each.b.variant]),
      ).toEqual([
        ["open-bed", "covered-bed"],
        ["open-bed", "tailgate-down"],
      ]);
      expect(comparisons[0].comparable).toBe(true);
      expect(comparisons[0].differences).toContainEqual(expect.objectContaining({ part: "bed-cover", name: "cd", a: null }));
      const report = await dragledger(["report", "pickup-bed.yaml", "--json"], { cwd: folder });
      expect(report.code).toBe(0);
      const { path, bytes } = JSON.parse(report.stdout);
      expect((await stat(path)).size).toBe(bytes);
    });

    test("a second run does nothing", async () => {
      const before = await stat(join(caseOf("open-bed"), "postProcessing/whole/0/force.dat"));
      const { stdout } = await dragledger(["run", "pickup-bed.yaml", "--json"], { cwd: folder });
      expect(JSON.parse(stdout).cases.map((each: { state: string }) => each.state)).not.toContain("failed");
      expect((await stat(join(caseOf("open-bed"), "postProcessing/whole/0/force.dat"))).mtimeMs).toBe(before.mtimeMs);
    });
  },
);
