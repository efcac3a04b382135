// Builds dist/: compiled sources, the bundled report pieces (charts and viewer, so that a user installs neither a plotting
// library nor three), and the published schema of the study file.
import { spawnSync } from "node:child_process";
import { chmodSync, existsSync, mkdirSync, rmSync, writeFileSync } from "node:fs";
import { dirname, join } from "node:path";
import { fileURLToPath } from "node:url";
import { build } from "esbuild";

const root = dirname(dirname(fileURLToPath(import.meta.url)));
const dist = join(root, "dist");

rmSync(dist, { recursive: true, force: true });
const compiled = spawnSync(process.execPath, [join(root, "node_modules/typescript/bin/tsc"), "-p", root], { stdio: "inherit" });
if (compiled.status !== 0) process.exit(compiled.status ?? 1);

// Charts run in Node: the plotting library and its document stand-in go inside the one module that uses them.
await build({
  entryPoints: [join(root, "src/report/charts.ts")],
  outfile: join(dist, "src/report/charts.js"),
  bundle: true,
  format: "esm",
  platform: "node",
  target: "node20",
  allowOverwrite: true,
  logLevel: "warning",
  legalComments: "eof",
  banner: {
    js: "import { createRequire as __createRequire } from 'node:module'; const require = __createRequire(import.meta.url);",
  },
});
// The viewers run in the reader's browser, inside the report and inside the page of one body.
for (const room of ["report", "picture"])
  await build({
    entryPoints: [join(root, `src/${room}/viewer/main.ts`)],
    outfile: join(dist, `${room}/viewer.js`),
    bundle: true,
    format: "iife",
    platform: "browser",
    target: "es2022",
    minify: true,
    logLevel: "warning",
    legalComments: "eof",
  });

const { studyJsonSchema } = await import(join(dist, "src/study/schema.js"));
mkdirSync(dist, { recursive: true });
writeFileSync(join(dist, "study.schema.json"), `${JSON.stringify(studyJsonSchema(), null, 2)}\n`);
const entry = join(dist, "cli/main.js");
if (existsSync(entry)) chmodSync(entry, 0o755);
