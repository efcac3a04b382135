// Makes a checkout ready to use: installs packages when the lock file is newer than what is installed, and builds when a
// source is newer than the build. A fresh clone needs nothing else; a ready one costs a few milliseconds.
import { spawnSync } from "node:child_process";
import { existsSync, readdirSync, statSync } from "node:fs";
import { dirname, join } from "node:path";
import { fileURLToPath } from "node:url";

const root = dirname(dirname(fileURLToPath(import.meta.url)));
const age = (path) => (existsSync(path) ? statSync(path).mtimeMs : 0);

function newest(path) {
  if (!existsSync(path)) return 0;
  const stat = statSync(path);
  if (!stat.isDirectory()) return stat.mtimeMs;
  return Math.max(0, ...readdirSync(path).map((name) => newest(join(path, name))));
}

function must(what, command, args) {
  process.stderr.write(`${what} ...\n`);
  const done = spawnSync(command, args, { cwd: root, stdio: ["ignore", 2, 2] });
  if (done.status === 0) return;
  process.stderr.write(`${what}: failed (${command} ${args.join(" ")}).\n`);
  process.exit(1);
}

if (age(join(root, "node_modules/.package-lock.json")) < age(join(root, "package-lock.json")))
  must("installing packages", "npm", ["ci", "--no-audit", "--no-fund", "--loglevel=error"]);

const built = age(join(root, "dist/study.schema.json"));
const sources = ["src", "cli", ".build", "tsconfig.json", "package.json"].map((name) => newest(join(root, name)));
if (built < Math.max(...sources)) must("building", process.execPath, [join(root, ".build/build.mjs")]);

// npm links a package's own bin only where it is installed as a dependency; this makes `npx dragledger` work in the checkout.
