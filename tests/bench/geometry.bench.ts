// Times the geometry room on generated car-like bodies, next to three's STLLoader on the same files in the same run. Absolute times
// drift with the machine: only the ratios mean anything. Each job runs alone in a process of its own, three times; the medians of
// wall and user time and the greatest peak memory are printed.
//
//   npx tsx tests/bench/geometry.bench.ts [millions of triangles, 1 by default] [repeats, 3 by default]
import { spawnSync } from "node:child_process";
import { mkdtempSync, readFileSync, rmSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
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
import { car } from "../geometry/car.js";

interface Timing {
  wall: number;
  user: number;
  memory: number;
}

type Job = (path: string, start: () => void) => Promise<void>;

/** `start` is called where the clock begins; without it the clock runs from the job's beginning. */
const jobs: Record<string, Job> = {
  read: async (path) => void (await readSurfaces([path])),
  "read, weld, edges, shells": async (path) => void shellsOf(surfaceMesh(await readSurfaces([path]))),
  "silhouette (after edges)": async (path, start) => {
    const mesh = surfaceMesh(await readSurfaces([path]));
    start();
    silhouette(mesh, [1, 0, 0]);
  },
  "read and whole survey": async (path) => void surveyBody(await readSurfaces([path])),
  "three: read": async (path) => void threeGeometry(path),
  "three: read, merge vertices": async (path) => void mergeVertices(threeGeometry(path)),
};

function threeGeometry(path: string) {
  const file = readFileSync(path);
  return new STLLoader()
    .parse(file.buffer.slice(file.byteOffset, file.byteOffset + file.byteLength) as ArrayBuffer)
    .deleteAttribute("normal");
}

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
    memory: process.resourceUsage().maxRSS / 1000,
  };
  console.log(JSON.stringify(timing));
}

/** Undefined where the job failed. */
function measured(name: string, path: string, repeats: number): Timing | undefined {
  const timings: Timing[] = [];
  for (let k = 0; k < repeats; k++) {
    const child = spawnSync(process.execPath, ["--import", "tsx", fileURLToPath(import.meta.url), "--job", name, path], {
      encoding: "utf8",
    });
    if (child.status !== 0) return undefined;
    timings.push(JSON.parse(child.stdout) as Timing);
  }
  const median = (value: (timing: Timing) => number): number => timings.map(value).sort((a, b) => a - b)[repeats >> 1];
  return {
    wall: median(({ wall }) => wall),
    user: median(({ user }) => user),
    memory: Math.max(...timings.map(({ memory }) => memory)),
  };
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

function main(millions: number, repeats: number): void {
  const folder = mkdtempSync(join(tmpdir(), "dragledger-bench-"));
  try {
    const { set } = car(millions * 1e6);
    const files = { binary: join(folder, "car.stl"), shuffled: join(folder, "shuffled.stl"), text: join(folder, "car-text.stl") };
    writeFileSync(files.binary, binaryStl(set));
    writeFileSync(files.shuffled, binaryStl(shuffled(set)));
    writeFileSync(files.text, asciiStl(set));
    console.log(
      `${set.partOf.length} triangles, ${set.parts.length} parts; medians of ${repeats}; ratio = wall time over three's "read" of the same file`,
    );
    for (const [kind, path] of Object.entries(files)) {
      const reference = measured("three: read", path, repeats);
      for (const name of Object.keys(jobs)) {
        if (kind === "shuffled" && !name.includes("weld")) continue;
        const timing = name === "three: read" ? reference : measured(name, path, repeats);
        const figures =
          timing === undefined
            ? "failed"
            : `${timing.wall.toFixed(2)} s wall, ${timing.user.toFixed(2)} s user, ${timing.memory.toFixed(0)} MB${reference === undefined ? "" : `, ratio ${(timing.wall / reference.wall).toFixed(2)}`}`;
        console.log(`${kind.padEnd(9)} ${name.padEnd(28)} ${figures}`);
      }
    }
  } finally {
    rmSync(folder, { recursive: true });
  }
}

if (process.argv[2] === "--job") await runJob(process.argv[3], process.argv[4]);
else main(Number(process.argv[2] ?? 1), Number(process.argv[3] ?? 3));
