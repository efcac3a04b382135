import { readFile, stat, statfs } from "node:fs/promises";
import { availableParallelism, totalmem } from "node:os";
import { execa } from "execa";
import { Problem } from "../errors.js";
import { findProgram, type SolverSearch, searchSolver } from "./find-solver.js";

export { findSolver, type Lineage, type SolverEnvironment, type SolverSearch } from "./find-solver.js";

export interface EnvironmentReport {
  node: string;
  cores: number;
  /** bytes that this process may use */
  memory: number;
  /** bytes free in the current folder */
  disk: number;
  solver: { found: boolean; version: string | null; lineage: "com" | "org" | "unknown" | null; path: string | null };
  mpi: { found: boolean; version: string | null; path: string | null };
  slurm: { found: boolean; version: string | null };
  browser: { found: boolean; path: string | null };
  missing: { what: string; how: string }[];
}

const browsers = ["chromium", "chromium-browser", "google-chrome", "google-chrome-stable", "microsoft-edge"];
const browserBundles = [
  "/Applications/Google Chrome.app/Contents/MacOS/Google Chrome",
  "/Applications/Chromium.app/Contents/MacOS/Chromium",
];

/**
 * What is installed on this machine, and for what is missing how to get it. Starts processes, reads files; SI (bytes).
 * Never throws for what is missing: an unusable DRAGLEDGER_OPENFOAM is reported as missing too.
 */
export async function surveyEnvironment(search: SolverSearch = {}): Promise<EnvironmentReport> {
  const env = search.env ?? process.env;
  const packages = await packageManager(search.root ?? "");
  const missing: EnvironmentReport["missing"] = [];
  const [searched, disk, browser, sbatch] = await Promise.all([
    searchSolver(search).catch((error: unknown) => {
      if (error instanceof Problem) return { solver: null, unusable: [`${error.message} ${error.remedy}`] };
      throw error;
    }),
    statfs(process.cwd()),
    findBrowser(env),
    findProgram("sbatch", env.PATH),
  ]);
  const { solver, unusable } = searched;
  const launcher = solver?.mpirun ?? (await findProgram("mpirun", env.PATH));
  const mpiVersion = launcher ? await versionSaid(launcher, /(\d+\.\d+(?:\.\d+)?)/, solver?.env) : null;
  const slurmVersion = sbatch ? await versionSaid(sbatch, /slurm\S*\s+(\S+)/i) : null;
  if (!solver) {
    const rejected = unusable.length > 0 ? ` (found, but not usable: ${unusable.join("; ")})` : "";
    missing.push({ what: "OpenFOAM (meshes and solves)", how: `${packages.openfoam}${rejected}` });
  }
  if (!launcher) missing.push({ what: "mpirun (more than one core for one case)", how: packages.mpi });
  if (!browser) missing.push({ what: "a browser (pictures of geometry and report)", how: packages.browser });
  return {
    node: process.version,
    cores: availableParallelism(),
    memory: usableMemory(),
    disk: disk.bavail * disk.bsize,
    solver: {
      found: solver !== null,
      version: solver?.version ?? null,
      lineage: solver?.lineage ?? null,
      path: solver?.path ?? null,
    },
    mpi: { found: launcher !== null, version: mpiVersion, path: launcher },
    slurm: { found: sbatch !== null, version: slurmVersion },
    browser: { found: browser !== null, path: browser },
    missing,
  };
}

/** How to get OpenFOAM here, one sentence without a full stop at its end. */
export async function howToGetSolver(): Promise<string> {
  return (await packageManager("")).openfoam;
}

/** Bytes that this process may use: the machine's, or less inside a container with a limit. */
export function usableMemory(): number {
  const limit = process.constrainedMemory?.() ?? 0;
  const machine = totalmem();
  return limit > 0 && limit < machine ? limit : machine;
}

async function findBrowser(env: NodeJS.ProcessEnv): Promise<string | null> {
  for (const name of browsers) {
    const found = await findProgram(name, env.PATH);
    if (found) return found;
  }
  if (process.platform !== "darwin") return null;
  for (const path of browserBundles) if (await stat(path).catch(() => null)) return path;
  return null;
}

async function versionSaid(program: string, pattern: RegExp, env?: Record<string, string>): Promise<string | null> {
  const options = { reject: false, stdin: "ignore", timeout: 10_000, ...(env ? { env, extendEnv: false } : {}) } as const;
  const { stdout } = await execa(program, ["--version"], options);
  return pattern.exec(typeof stdout === "string" ? stdout : "")?.[1] ?? null;
}

async function packageManager(root: string): Promise<{ openfoam: string; mpi: string; browser: string }> {
  const release = await readFile(`${root}/etc/os-release`, "utf8").catch(() => "");
  const family = [...release.matchAll(/^ID(?:_LIKE)?="?([^"\n]*)"?/gm)].map((match) => match[1]).join(" ");
  if (/debian|ubuntu/.test(family)) {
    return { openfoam: "apt-get install openfoam", mpi: "apt-get install openmpi-bin", browser: "apt-get install chromium" };
  }
  const point = "and set DRAGLEDGER_OPENFOAM to the folder that holds its etc/bashrc";
  if (/fedora|rhel|centos/.test(family)) {
    const openfoam = `install OpenFOAM (version v1912 or later, packages at www.openfoam.com) ${point}`;
    return { openfoam, mpi: "dnf install openmpi", browser: "dnf install chromium" };
  }
  return {
    openfoam: `install OpenFOAM (version v1912 or later, www.openfoam.com) ${point}`,
    mpi: "install Open MPI so that mpirun is on the PATH",
    browser: "install Chromium or Chrome so that it is on the PATH",
  };
}
