import { chmod, mkdir, mkdtemp, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { onTestFinished } from "vitest";
import type { SolverEnvironment } from "../../src/openfoam/environment.js";

/** A made-up solver: small programs that leave behind what the real ones do, or fail as they do. */
export interface StandIn {
  solver: SolverEnvironment;
  /** Runs all programs from now on under these settings, read by the programs below. */
  behave: (behaviour: Record<string, string>) => void;
}

const meshPrograms: Record<string, string> = {
  blockMesh: "mkdir -p constant/polyMesh",
  surfaceFeatureExtract: "echo edges > constant/triSurface/body.eMesh",
  snappyHexMesh: `
echo snappy >> constant/polyMesh/made
if [ "$STAND_IN_MESHER" = fatal ]; then
  printf '%s\\n' '--> FOAM FATAL ERROR: ' 'Point (9 0 0) is not inside the mesh or on a face or edge.' 'Bounding box of the mesh:(-1 -1 0) (3 1 2)' '' '    From function refinementParameters' 'FOAM exiting'
  exit 1
fi
if [ "$STAND_IN_MESHER" = hang ]; then exec sleep 60; fi
[ "$STAND_IN_MESHER" = limit ] && echo 'No cells marked for refinement since reached limit 2000.'
for name in points faces neighbour; do echo x > constant/polyMesh/$name; done
echo 'note "nPoints:900  nCells:'\${STAND_IN_CELLS:-1000}'  nFaces:3000";' > constant/polyMesh/owner
patch() { echo "  $1 { type wall; inGroups 1(wall); nFaces $2; startFace 10; }"; }
{
  echo 'FoamFile { version 2.0; format binary; class polyBoundaryMesh; object boundary; }'
  echo '6 ('
  [ "$STAND_IN_PATCHES" = inside ] || { patch inlet 4; patch outlet 4; patch ground 8; }
  [ "$STAND_IN_PATCHES" = no-body ] || { patch body_nose 30; [ "$STAND_IN_PATCHES" = lost ] && patch body_wing 0 || patch body_wing 12; }
  echo ')'
} > constant/polyMesh/boundary
echo 'Finished meshing without any errors'`,
  renumberMesh: `[ "$STAND_IN_HANGS" = renumberMesh ] && exec sleep 60 || true`,
  checkMesh: `[ "$STAND_IN_HANGS" = checkMesh ] && exec sleep 60
[ -n "$STAND_IN_CHECKS" ] && echo "Failed $STAND_IN_CHECKS mesh checks." || echo 'Mesh OK.'`,
  decomposePar: `
ranks=$(sed -n 's/numberOfSubdomains \\([0-9]*\\);/\\1/p' system/decomposition)
latest=$(ls -d [0-9]* | sort -n | tail -1)
rank=0
while [ $rank -lt $ranks ]; do
  rm -rf processor$rank; mkdir -p processor$rank; cp -r $latest processor$rank/
  rank=$((rank + 1))
done`,
  mapFields: `
[ "$STAND_IN_MAPPER" = fatal ] && { printf '%s\\n' '--> FOAM FATAL ERROR: ' 'Incompatible meshes: different number of patches' '' 'FOAM exiting'; exit 1; }
[ "$STAND_IN_MAPPER" = hang ] && exec sleep 60
[ -f constant/polyMesh/faces ] && [ -f system/controlDict ] || exit 1
latest=$(ls -d "$1"/[1-9]* | sed 's:.*/::' | sort -n | tail -1)
[ -f "$1/$latest/U" ] || exit 1
{ echo "mapped from $1 at $latest"; cat 0/U; echo '// ***** //'; } > 0/U.new && mv 0/U.new 0/U
printf 'mapped\\n// ***** //\\n' > 0/yPlus`,
  reconstructPar: `
latest=$(ls processor0 | grep '^[0-9]' | sort -n | tail -1)
cp -r processor0/$latest .`,
};

/** Writes a coefficient history and fields like the solver, one row per millisecond or so, and obeys system/controlDict. */
const flowProgram = `
const fs = require("node:fs");
const below = process.env.PWD.split("/ladder/")[1];
const rung = below ? "ladder_" + below[0] : null;
const first = process.env.PWD.endsWith("/first-order");
const behaviour = (first ? process.env.STAND_IN_FIRST : rung && process.env["STAND_IN_" + rung.toUpperCase()]) || (process.env.STAND_IN_SOLVER ?? "calm");
const root = process.argv.includes("-parallel") ? "processor0" : ".";
const roots = root === "." ? ["."] : fs.readdirSync(".").filter((name) => name.startsWith("processor"));
const entry = (key) => new RegExp("(?:^|[\\\\s;])" + key + "\\\\s+([^;]+);").exec(fs.readFileSync("system/controlDict", "utf8").replace(/\\/\\/.*/g, ""))?.[1];
const start = Math.max(...fs.readdirSync(root).filter((name) => /^\\d+$/.test(name)).map(Number));
const end = Number(entry("endTime"));
const interval = Number(entry("writeInterval"));
fs.appendFileSync("starts", start + " " + end + " " + entry("startFrom") + " " + process.env.PWD + "\\n");
const print = (text) => fs.writeSync(1, text + "\\n");
const write = (time) => {
  for (const folder of roots) {
    fs.mkdirSync(folder + "/" + time, { recursive: true });
    for (const name of ["U", "p"]) fs.writeFileSync(folder + "/" + time + "/" + name, "values\\n// ***** //\\n");
  }
};
const folder = "postProcessing/coefficients/" + start;
let table = null;
if (behaviour !== "no-table") {
  fs.mkdirSync(folder, { recursive: true });
  table = fs.existsSync(folder + "/coefficient.dat") ? folder + "/coefficient_" + start + ".dat" : folder + "/coefficient.dat";
  fs.writeFileSync(table, "# Force coefficients\\n# magUInf : 3.0e+01\\n# Time \\tCd \\tCs \\tCl\\n");
}
let seed = 7;
const noise = () => { seed = (seed * 48271) % 2147483647; return seed / 2147483647 - 0.5; };
const valuesAt = (time) => {
  if (behaviour === "zeros") return [0, 0];
  if (behaviour === "nan" && time >= 30) return ["nan", "-nan"];
  if (behaviour === "huge" && time >= 30) return [4.2e5, 1];
  const wander = behaviour === "wander" ? time / 50 : 0;
  return [0.3 + Math.exp(-time / 8) + 1e-3 * noise() + wander, 0.1 - Math.exp(-time / 8) + 1e-3 * noise()];
};
const pause = (milliseconds) => Atomics.wait(new Int32Array(new SharedArrayBuffer(4)), 0, 0, milliseconds);
if (behaviour === "deaf") process.on("SIGTERM", () => {});
const step = (time) => {
  if (time > end) return finish();
  const [cd, cl] = valuesAt(time);
  print("Time = " + time + "\\nsmoothSolver:  Solving for k, Initial residual = 0.25, Final residual = 0.001, No Iterations 1");
  if (table) fs.appendFileSync(table, time + "\\t" + cd + "\\t0\\t" + cl + "\\n");
  if (time === 25 || time === start + 25) {
    if (behaviour === "trap") { print("#0  Foam::error::printStack(Foam::Ostream&) at ??:?\\n#1  Foam::sigFpe::sigHandler(int) at ??:?"); process.kill(process.pid, "SIGFPE"); pause(5000); }
    if (behaviour === "bare-trap") { process.kill(process.pid, "SIGFPE"); pause(5000); }
    if (behaviour === "killed") { process.kill(process.pid, "SIGKILL"); pause(5000); }
    if (behaviour === "fatal") { print("\\n--> FOAM FATAL IO ERROR: \\nEntry 'div(phi,k)' not found in dictionary \\"system/fvSchemes.divSchemes\\"\\n\\nfile: system/fvSchemes.divSchemes at line 9.\\n\\n    From function entry\\n\\nFOAM exiting\\n"); process.exit(1); }
    if (behaviour === "silent") process.exit(0);
    if (behaviour === "hang" || behaviour === "deaf") { setInterval(() => {}, 1000); return; }
  }
  const now = entry("stopAt") === "writeNow";
  if (time % interval === 0 || now) write(time);
  if (now) return finish();
  if (time % 5 === 0) pause(2);
  setImmediate(step, time + 1);
};
const finish = () => print("\\nEnd\\n");
step(start + 1);
`;

/** The stand-in programs in a folder of their own, gone after the test. */
export async function standIn(): Promise<StandIn> {
  const folder = await temporaryFolder();
  for (const [name, script] of Object.entries(meshPrograms)) await program(join(folder, name), `#!/bin/sh\n${script}\n`);
  await program(join(folder, "simpleFoam"), `#!${process.execPath}\n${flowProgram}`);
  await program(
    join(folder, "mpirun"),
    `#!/bin/sh\nshift 2\necho "mpirun $*" >> launches\n"$@" &\nchild=$!\ntrap 'kill $child; wait $child; exit 143' TERM\nwait $child\n`,
  );
  const solver = standInSolver(folder);
  return { solver, behave: (behaviour) => Object.assign(solver.env, behaviour) };
}

export function standInSolver(folder: string, behaviour: Record<string, string> = {}): SolverEnvironment {
  const env = { PATH: process.env.PATH ?? "", ...behaviour };
  return { path: folder, projectDir: folder, version: "v1912", lineage: "com", mpirun: join(folder, "mpirun"), env };
}

async function program(path: string, text: string): Promise<void> {
  await writeFile(path, text);
  await chmod(path, 0o755);
}

export async function temporaryFolder(): Promise<string> {
  const folder = await mkdtemp(join(tmpdir(), "run-"));
  onTestFinished(() => rm(folder, { recursive: true, force: true, maxRetries: 3 }));
  return folder;
}

export const preparedControl = `FoamFile { version 2.0; format ascii; class dictionary; object controlDict; }
application simpleFoam; // stopAt writeNow; is not set here
startFrom startTime; startTime 0; stopAt endTime; endTime 200;
deltaT 1; writeControl timeStep; writeInterval 20; purgeWrite 2;
functions { coefficients { type forceCoeffs; libs (forces); writeInterval 1; } }
`;

/** A prepared case with two parts, as the programs above expect it; returns its folder. */
export async function standInCase(card: Record<string, unknown> = {}): Promise<string> {
  const folder = join(await temporaryFolder(), "open-bed-30ms");
  for (const sub of ["0", "constant/triSurface", "system"]) await mkdir(join(folder, sub), { recursive: true });
  const files: Record<string, string> = {
    "0/U": "internalField uniform (30 0 0);\n// ***** //\n",
    "0/p": "internalField uniform 0;\n// ***** //\n",
    "constant/triSurface/body.stl": "solid nose\nendsolid nose\n",
    "system/blockMeshDict": "vertices ();\n",
    "system/snappyHexMeshDict": "castellatedMesh true;\n",
    "system/surfaceFeatureExtractDict": "body.stl {}\n",
    "system/fvSchemes": "divSchemes {}\n",
    "system/fvSolution": "SIMPLE {}\n",
    "system/controlDict": preparedControl,
    "dragledger.json": JSON.stringify({ ...standInCard, ...card }),
  };
  for (const [path, text] of Object.entries(files)) await writeFile(join(folder, path), text);
  return folder;
}

export const standInCard = {
  schema: "dragledger/run-card/1",
  tool: { name: "dragledger", version: "0.1.0" },
  study: { name: "pickup-bed", question: null, baseline: "open-bed" },
  variant: "open-bed",
  condition: {
    name: "30ms",
    speed: 30,
    yaw: 0,
    rideHeight: 0,
    ground: "moving",
    wheels: "rotating",
    air: {
      temperature: 288.15,
      pressure: 101325,
      humidity: 0,
      density: 1.225,
      dynamicViscosity: 1.79e-5,
      kinematicViscosity: 1.46e-5,
    },
  },
  reference: { area: 2, length: 2.7, centre: [0, 0, 0], speed: 30, density: 1.225, symmetryFactor: 1 },
  wheelbase: 2.7,
  parts: [
    { name: "nose", patch: "body_nose" },
    { name: "rear wing", patch: "body_wing" },
  ],
  placement: {
    orientation: { unit: "m", travel: "-x", up: "+z" },
    scale: 1,
    rotation: [
      [1, 0, 0],
      [0, 1, 0],
      [0, 0, 1],
    ],
    shift: [0, 0, 0],
  },
  body: { bounds: { min: [0, -0.9, 0], max: [4.2, 0.9, 1.4] }, frontalArea: 2 },
  mesh: {
    domain: { min: [-12, -7, 0], max: [30, 7, 9] },
    baseCell: 0.8,
    divisions: [52, 17, 11],
    surfaceLevel: 4,
    boxes: [],
    predictedCells: 1000,
  },
  stop: { drag: 0.001, lift: 0.003, confidence: 0.95 },
  mostIterations: 200,
  plan: [],
  hashes: { inputs: [], templates: "", files: {} },
};
