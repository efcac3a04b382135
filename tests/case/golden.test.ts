import { readdir } from "node:fs/promises";
import { join, relative } from "node:path";
import { describe, expect, test } from "vitest";
import { listPlan } from "../../src/case/list-plan.js";
import { planStudy } from "../../src/case/prepare.js";
import { renderCase } from "../../src/case/render.js";
import { packageFile } from "../../src/package-files.js";
import { readStudy } from "../../src/study/read.js";
import type { Study } from "../../src/study/study.js";

const golden = join(import.meta.dirname, "..", "golden", "pickup-open-bed");

/** Six digits: the last ones may differ between machines. */
const shown = (value: string | number | number[]): string =>
  typeof value === "string"
    ? value
    : [value]
        .flat()
        .map((number) => Number(number.toPrecision(6)))
        .join(" ");

describe("the sample study's baseline", () => {
  test("is written as tests/golden has it (see its README for how to write it again)", async () => {
    const study = await readStudy(packageFile("sample-geometry", "pickup-bed.yaml"));
    const fixed: Study = {
      ...study,
      variants: study.variants.filter(({ name }) => name === study.baseline),
      // The size of the sample's mesh is a matter of taste and time; here it stands still.
      mesh: { cells: 50_000, half: "auto", yPlus: 300, layers: 3 },
      solver: { ...study.solver, mostIterations: 400 },
    };
    const [{ plan }] = (await planStudy(fixed)) as [Awaited<ReturnType<typeof planStudy>>[number]];
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
});
