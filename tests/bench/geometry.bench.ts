// Times the geometry room on generated car-like bodies next to peers on the same files in the same run: three's STLLoader and, where it
// is installed, the solver's own surfaceCheck. Absolute times drift with the machine: only the ratios mean anything. Each job runs alone
// in a process of its own, three times; medians of wall and user time and the greatest peak memory are printed as a Markdown table.
//
//   npx tsx tests/bench/geometry.bench.ts [repeats, 3 by default] [millions of triangles..., 0.1 1 5 by default]
import { spawn, spawnSync } from "node:child_process";
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { cpus, tmpdir } from "node:os";
import { join } from "node:path";
import { fileURLToPath } from "node:url";
import { STLLoader } from "three/addons/loaders/STLLoader.js";
import { mergeVertices } from "three/addons/utils/BufferGeometryUtils.js";
import { readSurfaces } from "../../src/geometry/files/read.js";
import { asciiStl, binaryStl } from "../../src/geometry/files/write-stl.js";
import { shellsOf } from "../../src/geometry/shells.js";
import { silhouette } from "../../src/geometry/silhouette/silhouette.js";
import { surfaceMesh } from "../../src/geometry/surface-mesh.js";
import { surveyBody } from "../../src/geometry/survey-body.js";
import type { TriangleSet } from "../../src/geometry/triangle-set.js";
import { findSolver } from "../../src/openfoam/environment.js";
import { car } from "../geometry/car.js";

interface Timing {
  wall: number;
  user: number;
  /** MB */
  memory: number;
}

type Job = (path: string, start: () => void) => Promise<void>;

/** `start` is called where the clock begins; without it the clock runs from the job's beginning. */
const jobs: Record<string, Job> = {
  read: async (path) => void (await readSurfaces([path])),
  "read, weld, edges, shells, silhouette": async (path) => {
    const mesh = surfaceMesh(await readSurfaces([path]));
    shellsOf(mesh);
    silhouette(mesh, [1, 0, 0]);
  },
  "silhouette (after edges)": async (path, start) => {
    const mesh = surfaceMesh(await readSurfaces([path]));
    start();
    silhouette(mesh, [1, 0, 0]);
  },
  "read and survey": async (path) => void surveyBody(await readSurfaces([path])),
  "read and full survey": async (path) => void surveyBody(await readSurfaces([path]), { full: true }),
  "three: read": async (path) => void threeGeometry(path),
  "three: read, merge vertices": async (path) => void mergeVertices(threeGeometry(path)),
};

function threeGeometry(path: string) {
  const file = readFileSync(path);
  return new STLLoader()
    .parse(file.buffer.slice(file.byteOffset, file.byteOffset + file.byteLength) as ArrayBuffer)
    .deleteAttribute("normal");
}

/** MB, as the kernel has it since the program began; what a process itself is told counts the memory of its parent too. */
const peakMemory = (process: number | "self"): number =>
  Number(/VmHWM:\s+(\d+)/.exec(readFileSync(`/proc/${process}/status`, "utf8"))?.[1] ?? 0) / 1000;

async function runJob(name: string, path: string): Promise<void> {
  let wall = performance.now();
  let cpu = process.cpuUsage();
  await jobs[name](path, () => {
    wall = performance.now();
    cpu = process.cpuUsage();
  });
  const timing: Timing = {
    wall: (performance.now() - wall) / 1000,
    user: process.cpuUsage(cpu).user / 1e6,
    memory: peakMemory("self"),
  };
  console.log(JSON.stringify(timing));
}

/** Undefined where a run failed. */
async function measured(run: () => Promise<Timing | undefined>, repeats: number): Promise<Timing | undefined> {
  const timings: Timing[] = [];
  for (let k = 0; k < repeats; k++) {
    const timing = await run();
    if (timing === undefined) return undefined;
    timings.push(timing);
  }
  const median = (value: (timing: Timing) => number): number => timings.map(value).sort((a, b) => a - b)[repeats >> 1];
  return {
    wall: median(({ wall }) => wall),
    user: median(({ user }) => user),
    memory: Math.max(...timings.map(({ memory }) => memory)),
  };
}

async function jobTiming(name: string, path: string): Promise<Timing | undefined> {
  const child = spawnSync(process.execPath, ["--import", "tsx", fileURLToPath(import.meta.url), "--job", name, path], {
    encoding: "utf8",
  });
  return child.status === 0 ? (JSON.parse(child.stdout) as Timing) : undefined;
}

/** The solver's own check, as a process that is watched: user time and peak memory as the kernel tells them while it runs. */
function surfaceCheckTiming(env: NodeJS.ProcessEnv, folder: string, path: string): Promise<Timing | undefined> {
  return new Promise((resolve) => {
    const begin = performance.now();
    const child = spawn("surfaceCheck", [path], { cwd: folder, env, stdio: "ignore" });
    let memory = 0;
    let user = 0;
    const look = setInterval(() => {
      try {
        memory = Math.max(memory, peakMemory(child.pid!));
        const fields = readFileSync(`/proc/${child.pid}/stat`, "utf8").split(") ")[1].split(" ");
        // Field 14 of the line, in hundredths of a second.
        user = Number(fields[11]) / 100;
      } catch {
        // It has ended between two looks.
      }
    }, 20);
    child.on("error", () => resolve(undefined));
    child.on("close", (code) => {
      clearInterval(look);
      resolve(code === 0 ? { wall: (performance.now() - begin) / 1000, user, memory } : undefined);
    });
  });
}

/** The same triangles in an order that tells nothing of where they are. */
function shuffled(set: TriangleSet): TriangleSet {
  const { positions, partOf } = set;
  const other = { ...set, positions: new Float32Array(positions.length), partOf: new Uint16Array(partOf.length) };
  // A step without a common divisor visits every triangle once.
  let step = Math.floor(partOf.length * 0.618);
  while (divisor(step, partOf.length) !== 1) step++;
  for (let k = 0, t = 0; k < partOf.length; k++, t = (t + step) % partOf.length) {
    other.positions.set(positions.subarray(9 * t, 9 * t + 9), 9 * k);
    other.partOf[k] = partOf[t];
  }
  return other;
}

const divisor = (a: number, b: number): number => (b === 0 ? a : divisor(b, a % b));

const shown = (timing: Timing | undefined): string =>
  timing === undefined ? "failed | | |" : `${timing.wall.toFixed(2)} | ${timing.user.toFixed(2)} | ${timing.memory.toFixed(0)} |`;

const ratio = (peer: Timing | undefined, own: Timing | undefined, value: keyof Timing): string =>
  peer === undefined || own === undefined ? "-" : (peer[value] / own[value]).toFixed(1);

async function main(repeats: number, sizes: number[]): Promise<void> {
  const folder = mkdtempSync(join(tmpdir(), "dragledger-bench-"));
  const solver = await findSolver();
  const processor = cpus()[0]?.model ?? "unknown processor";
  console.log(
    `${processor}, ${cpus().length} cores, Node ${process.version}; medians of ${repeats}; OpenFOAM ${solver?.version ?? "not installed"}\n`,
  );
  console.log("| triangles | file | work | wall s | user s | peak MB |\n|---|---|---|---|---|---|");
  const ratios: string[] = [];
  try {
    for (const millions of sizes) {
      const { set } = car(millions * 1e6);
      const count = set.partOf.length;
      const time = async (kind: string, path: string, name: string): Promise<Timing | undefined> => {
        const timing = await measured(() => jobTiming(name, path), repeats);
        console.log(`| ${count} | ${kind} | ${name} | ${shown(timing)}`);
        return timing;
      };
      const whole = "read, weld, edges, shells, silhouette";
      const path = join(folder, "car.stl");
      writeFileSync(path, binaryStl(set));
      const read = await time("binary", path, "read");
      const all = await time("binary", path, whole);
      const seen = await time("binary", path, "silhouette (after edges)");
      await time("binary", path, "read and survey");
      if (millions > 1) await time("binary", path, "read and full survey");
      const three = await time("binary", path, "three: read");
      await time("binary", path, "three: read, merge vertices");
      const line = [
        `${count}: binary read ${ratio(three, read, "wall")} times faster than three's loader`,
        `silhouette takes ${ratio(seen, read, "wall")} of the time of reading`,
      ];
      if (solver !== null) {
        const check = await measured(() => surfaceCheckTiming(solver.env, folder, path), repeats);
        console.log(`| ${count} | binary | surfaceCheck | ${shown(check)}`);
        line.push(
          `${whole} ${ratio(check, all, "wall")} times faster than surfaceCheck in 1/${ratio(check, all, "memory")} of its memory`,
        );
      }
      writeFileSync(path, binaryStl(shuffled(set)));
      const mixed = await time("binary, shuffled", path, whole);
      line.push(`shuffled it takes ${ratio(mixed, all, "wall")} times as long`);
      writeFileSync(path, asciiStl(set));
      const text = await time("ASCII", path, "read");
      if (millions <= 1)
        line.push(`ASCII read ${ratio(await time("ASCII", path, "three: read"), text, "wall")} times faster than three's loader`);
      ratios.push(line.join("; "));
    }
    console.log(`\n${ratios.join("\n")}`);
  } finally {
    rmSync(folder, { recursive: true });
  }
}

if (process.argv[2] === "--job") await runJob(process.argv[3], process.argv[4]);
else {
  const sizes = process.argv.slice(3).map(Number);
  await main(Number(process.argv[2] ?? 3), sizes.length > 0 ? sizes : [0.1, 1, 5]);
}
