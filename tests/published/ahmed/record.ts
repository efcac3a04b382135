import { mkdir, readdir, readFile, rm, writeFile } from "node:fs/promises";
import { dirname, join, relative } from "node:path";
import { gzipSync } from "node:zlib";
import { readRunCard } from "../../../src/case/read-run-card.js";
import { readRunState } from "../../../src/run/run-state.js";

// `npx tsx tests/published/ahmed/record.ts <folder>`: keeps what ahmed.test.ts reads of the cases of the three studies in a copy of this
// folder: histories of the whole, of slant and of base, and what the run cards and run states say. See recorded/README.md.

const from = process.argv[2];
if (!from) throw new Error("give a copy of this folder whose studies have been run");
const to = join(import.meta.dirname, "recorded");
const kept = /^postProcessing\/(coefficients\/[^/]+\/coefficient|part-(slant|base)\/[^/]+\/force)[^/]*\.dat$/;

const records: Record<string, unknown> = {};
for (const grid of ["anchor", "shifted-1", "shifted-2"]) {
  await rm(join(to, grid), { recursive: true, force: true });
  for (const name of (await readdir(join(from, grid, "cases"))).sort()) {
    const folder = join(from, grid, "cases", name);
    const [card, state] = [await readRunCard(folder), await readRunState(folder)];
    if (card === null || state === null || state.iterations === 0) continue;
    const planned = (key: string) => card.plan.find((row) => row.key === key)?.value;
    const rungs = [];
    for (const { folder: rung, mesh } of card.ladder ?? []) {
      const each = await readRunState(join(folder, rung));
      if (each !== null)
        rungs.push({
          predictedCells: mesh.predictedCells,
          cells: each.mesh?.cells,
          iterations: each.iterations,
          seconds: Math.round(each.steps.reduce((sum, step) => sum + step.seconds, 0)),
        });
    }
    records[`${grid}/${name}`] = {
      variant: card.variant,
      shift: planned("domain.shift"),
      relaxation: planned("iterations.relaxation"),
      start: planned("start"),
      predictedCells: card.mesh.predictedCells,
      cells: state.mesh?.cells,
      state: state.state,
      reason: state.reason,
      iterations: state.iterations,
      seconds: Math.round(state.seconds),
      reference: card.reference,
      rungs,
    };
    for (const entry of await readdir(folder, { recursive: true, withFileTypes: true })) {
      const path = join(entry.parentPath, entry.name);
      const inside = relative(folder, path);
      if (!entry.isFile() || !kept.test(inside)) continue;
      const target = join(to, grid, name, `${inside}.gz`);
      await mkdir(dirname(target), { recursive: true });
      await writeFile(target, gzipSync(await readFile(path), { level: 9 }));
    }
  }
}
await mkdir(to, { recursive: true });
await writeFile(join(to, "runs.json"), `${JSON.stringify(records, null, 2)}\n`);
