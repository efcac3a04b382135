import { readdir } from "node:fs/promises";
import { join, relative } from "node:path";
import { beforeAll, describe, expect, test } from "vitest";
import { listPlan } from "../../src/case/list-plan.js";
import { type PlannedCase, planStudy } from "../../src/case/prepare.js";
import { renderCase } from "../../src/case/render.js";
import { packageFile } from "../../src/package-files.js";
import { readStudy } from "../../src/study/read.js";

const golden = join(import.meta.dirname, "..", "golden", "pickup-open-bed");

/** Six digits: the last ones may differ between machines. */
const shown = (value: string | number | number[]): string =>
  typeof value === "string"
    ? value
    : [value]
        .flat()
        .map((number) => Number(number.toPrecision(6)))
        .join(" ");

describe("the sample study", () => {
  let planned: PlannedCase[] = [];
  beforeAll(async () => {
    const study = await readStudy(packageFile("sample-geometry", "pickup-bed.yaml"));
    planned = await planStudy({
      ...study,
      // The size of the sample's mesh is a matter of taste and time; here it stands still.
      mesh: { cells: 45_000, half: "auto", yPlus: 300, layers: 3, shift: 0 },
      solver: { ...study.solver, start: "ladder", mostIterations: 400 },
    });
  }, 60_000);

  test("its baseline is written as tests/golden has it (see the README there for how to write it again)", async () => {
    const { plan } = planned[0]!;
    const files = renderCase(plan);
    for (const { path, content } of files) await expect(content).toMatchFileSnapshot(join(golden, path));
    const rows = listPlan(plan).map(
      ({ key, value, unit, reason, source }) => `${key}: ${shown(value)} ${unit}\n    ${reason} [${source}]\n`,
    );
    await expect(rows.join("")).toMatchFileSnapshot(join(golden, "plan.txt"));
    const there = (await readdir(golden, { recursive: true, withFileTypes: true }))
      .filter((entry) => entry.isFile())
      .map((entry) => relative(golden, join(entry.parentPath, entry.name)));
    const written = [...files.map(({ path }) => path), "plan.txt"];
    expect(there.filter((path) => !written.includes(path))).toEqual([]);
  });

  // Cells of the meshes that OpenFOAM v1912 made of these cases.
  test.each([
    ["open-bed", 43_294],
    ["covered-bed", 41_338],
    ["tailgate-down", 43_235],
  ])("the cells predicted for %s are within 5 %% of the %i that were made", (variant, made) => {
    const { plan } = planned.find((each) => each.variant === variant)!;
    expect(Math.abs(plan.mesh.predictedCells.value / made - 1)).toBeLessThan(0.05);
  });

  test("what its bodies are to its cells: one warning, of the cover that is thinner than a cell", () => {
    const said = planned.map(({ variant, findings }) => [variant, ...findings.map(({ code, severity }) => `${severity} ${code}`)]);
    expect(said).toEqual([
      ["open-bed", "note thin-part", "note narrow-gap"],
      ["covered-bed", "note enclosed-air", "warning thin-part", "note thin-part", "note narrow-gap"],
      ["tailgate-down", "note thin-part", "note narrow-gap"],
    ]);
    expect(planned[1]!.findings[1]).toMatchObject({ part: "bed-cover" });
  });
});
