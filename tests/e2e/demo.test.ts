import { mkdtemp, readFile, rm } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { execa } from "execa";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { dragledger, root } from "../helpers/built.js";

let folder: string;
beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), "dragledger-demo-"));
});
afterAll(() => rm(folder, { recursive: true, force: true }));

describe("the demo without the solver", () => {
  test("does the whole job and labels the recorded results wherever they appear", { timeout: 120_000 }, async () => {
    const { code, stdout } = await dragledger(["demo", "pickup", "--recorded"], { cwd: folder, timeout: 110_000 });
    expect(code).toBe(0);
    expect(stdout).toContain("recorded results of a real run are read instead: as asked");
    for (const variant of ["open-bed", "covered-bed", "tailgate-down"]) {
      const block = stdout.slice(stdout.indexOf(`\n${variant}  30ms`));
      expect(block.split("\n").slice(0, 3).join("\n")).toContain("recorded results: a run of this study with OpenFOAM");
    }
    expect(stdout).toMatch(/covered-bed against open-bed: .* counts of Cd \((direction-only|not-resolved)/);
    expect(stdout).toContain("Recorded results are compared");
    const page = await readFile(join(folder, "pickup", "pickup-bed.html"), "utf8");
    expect(page).toContain("Recorded results");
    expect(page).toContain("Content-Security-Policy");
  });

  test("the recorded ledgers close", async () => {
    const cases = ["open-bed", "covered-bed", "tailgate-down"].map((variant) =>
      join(root, "sample-geometry/recorded", `${variant}-30ms`),
    );
    const { code, stdout } = await dragledger(["ledger", ...cases, "--json"], { cwd: folder });
    expect(code).toBe(0);
    for (const run of JSON.parse(stdout).runs) {
      expect(run.closing.ok).toBe(true);
      expect(run.recorded).toMatch(/^a run of this study with OpenFOAM/);
    }
  });
});

describe("the packed package", () => {
  test("installs elsewhere without development tools and does the job there", { timeout: 240_000 }, async () => {
    const { stdout } = await execa("npm", ["pack", "--json", "--ignore-scripts", "--pack-destination", folder], { cwd: root });
    const [packed] = JSON.parse(stdout.slice(stdout.indexOf("[")));
    expect(packed.size).toBeLessThan(5e6);
    await execa("npm", ["init", "-y"], { cwd: folder });
    await execa("npm", ["install", "--no-audit", "--no-fund", packed.filename], { cwd: folder });
    const version = await execa("npx", ["dragledger", "--version"], { cwd: folder });
    expect(version.stdout).toBe(JSON.parse(await readFile(join(root, "package.json"), "utf8")).version);
    const demo = await execa("npx", ["dragledger", "demo", "installed", "--recorded", "--quiet"], { cwd: folder });
    expect(demo.stdout).toContain("pickup-bed.html");
    const schema = await readFile(join(folder, "node_modules/dragledger/dist/study.schema.json"), "utf8");
    expect(JSON.parse(schema)).toHaveProperty("properties.variants");
  });
});
