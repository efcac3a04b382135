import { mkdir, readdir, readFile, rm, writeFile } from "node:fs/promises";
import { dirname, join, relative } from "node:path";
import { gzipSync } from "node:zlib";
import { runCardName } from "../src/case/run-card.js";

// `npx tsx sample-geometry/record.ts <folder of a finished demo>`: keeps the histories of its cases in recorded/, for machines without the
// solver. Fields and meshes stay behind; each run card says what its results are.

const from = process.argv[2];
if (!from) throw new Error("give the folder of a finished demo");
const to = join(import.meta.dirname, "recorded");
await rm(to, { recursive: true, force: true });

/** Tables that the reading commands use. */
const kept = /^postProcessing\/(whole|coefficients|part-[^/]+)\/[^/]+\/[^/]+\.dat$/;

for (const name of await readdir(join(from, "cases"))) {
  const folder = join(from, "cases", name);
  const card = JSON.parse(await readFile(join(folder, runCardName), "utf8"));
  const check = await readFile(join(folder, "log.checkMesh"), "utf8");
  const version = /OPENFOAM=(\d+)/.exec(check)?.[1] ?? "of unknown version";
  card.recorded = `a run of this study with OpenFOAM v${version}, shipped with dragledger; not computed on this machine`;
  await mkdir(join(to, name), { recursive: true });
  await writeFile(join(to, name, runCardName), `${JSON.stringify(card, null, 2)}\n`);
  await writeFile(join(to, name, "log.checkMesh"), check.replace(/^(Host|Case|PID|Date|Time)\s*:.*\n/gm, ""));
  for (const entry of await readdir(folder, { recursive: true, withFileTypes: true })) {
    const path = join(entry.parentPath, entry.name);
    const inside = relative(folder, path);
    if (!entry.isFile() || !kept.test(inside)) continue;
    await mkdir(dirname(join(to, name, inside)), { recursive: true });
    await writeFile(join(to, name, `${inside}.gz`), gzipSync(await readFile(path), { level: 9 }));
  }
}
