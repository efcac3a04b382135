import { constants } from "node:fs";
import { access, readdir, stat } from "node:fs/promises";
import { delimiter, dirname, join } from "node:path";
import { execa } from "execa";
import { inputProblem } from "../errors.js";

export type Lineage = "com" | "org" | "unknown";

/** All that is needed to start a program of the solver, whatever the shell that started this process had sourced. */
export interface SolverEnvironment {
  /** Folder that holds the solver's programs. */
  path: string;
  /** Folder whose etc/controlDict the programs need. */
  projectDir: string;
  /** As the programs say it, "v1912" for instance. */
  version: string;
  lineage: Lineage;
  /** The MPI launcher; null when there is none. */
  mpirun: string | null;
  /** The whole environment to run with; nothing is inherited beside it. */
  env: Record<string, string>;
}

export interface SolverSearch {
  /** Environment to search in. */
  env?: NodeJS.ProcessEnv;
  /** Put before the absolute places below, so that a search can be tried on a made-up tree. */
  root?: string;
}

export interface SolverSearchResult {
  solver: SolverEnvironment | null;
  /** Installations that were found but cannot be used, with the reason. */
  unusable: string[];
}

const probe = "simpleFoam";
const bannerMilliseconds = 30_000;

/**
 * Finds a usable OpenFOAM: the folder named by DRAGLEDGER_OPENFOAM; what the environment already offers; programs on the PATH with
 * their settings in /usr/share/openfoam; installations with an etc/bashrc in the usual places, newest first.
 *
 * Starts processes. Null when nothing usable is found. Throws Problem (input) when DRAGLEDGER_OPENFOAM names a folder that does not serve.
 */
export async function findSolver(search: SolverSearch = {}): Promise<SolverEnvironment | null> {
  return (await searchSolver(search)).solver;
}

/** As `findSolver`, and says what was found but rejected. */
export async function searchSolver(search: SolverSearch = {}): Promise<SolverSearchResult> {
  const env = search.env ?? process.env;
  const root = search.root ?? "";
  const unusable: string[] = [];
  const explicit = env.DRAGLEDGER_OPENFOAM;
  if (explicit) {
    const result = await usableProject(explicit, env);
    if (typeof result !== "string") return { solver: result, unusable };
    throw inputProblem({
      code: "solver-folder-unusable",
      message: `DRAGLEDGER_OPENFOAM names ${explicit}, which cannot be used: ${result}.`,
      where: explicit,
      remedy:
        "Set it to the folder of an OpenFOAM installation (the one that holds etc/bashrc), or unset it to search the usual places.",
    });
  }
  const onPath = await findProgram(probe, env.PATH);
  if (onPath) {
    for (const projectDir of [env.WM_PROJECT_DIR, `${root}/usr/share/openfoam`]) {
      if (!projectDir || !(await isFile(join(projectDir, "etc", "controlDict")))) continue;
      const result = await describe(onPath, projectDir, stringsOf({ ...env, WM_PROJECT_DIR: projectDir }));
      if (typeof result !== "string") return { solver: result, unusable };
      unusable.push(`${projectDir}: ${result}`);
    }
  }
  for (const projectDir of await usualProjects(root, env.HOME)) {
    const result = await usableProject(projectDir, env);
    if (typeof result !== "string") return { solver: result, unusable };
    unusable.push(`${projectDir}: ${result}`);
  }
  return { solver: null, unusable };
}

/** Absolute path of a program on a PATH, or null. Reads folders, starts nothing. */
export async function findProgram(name: string, path: string | undefined): Promise<string | null> {
  for (const folder of (path ?? "").split(delimiter)) {
    if (folder === "") continue;
    const file = join(folder, name);
    try {
      await access(file, constants.X_OK);
      if ((await stat(file)).isFile()) return file;
    } catch {
      // Not in this folder.
    }
  }
  return null;
}

/** Version and lineage from what a program prints for `-help`; null where it does not say. */
export function readBanner(text: string): { version: string | null; lineage: Lineage } {
  const using = /^Using:\s*OpenFOAM-?(\S*)(?:\s+\((\d+)\))?/m.exec(text);
  const tag = using?.[1] ?? "";
  const version = tag !== "" && !tag.startsWith("(") ? tag : using?.[2] ? `v${using[2]}` : null;
  const lineage = /openfoam\.com/i.test(text) ? "com" : /openfoam\.org/i.test(text) ? "org" : lineageOfVersion(version);
  return { version, lineage };
}

function lineageOfVersion(version: string | null): Lineage {
  if (version === null) return "unknown";
  if (/^v?\d{4}\b/.test(version)) return "com";
  return /^(\d{1,2}|dev)$/.test(version) ? "org" : "unknown";
}

/** The environment in which an installation's programs run, or why it cannot be used. */
async function usableProject(projectDir: string, env: NodeJS.ProcessEnv): Promise<SolverEnvironment | string> {
  const bashrc = join(projectDir, "etc", "bashrc");
  if (!(await isFile(bashrc))) return "it has no etc/bashrc";
  const captured = await captureEnvironment(bashrc, env);
  if (typeof captured === "string") return captured;
  const program = await findProgram(probe, captured.PATH);
  if (!program) return `its environment has no ${probe} on the PATH`;
  const given = captured.WM_PROJECT_DIR;
  const project = given && (await isFile(join(given, "etc", "controlDict"))) ? given : projectDir;
  if (!(await isFile(join(project, "etc", "controlDict")))) return "it has no etc/controlDict";
  return describe(program, project, { ...captured, WM_PROJECT_DIR: project });
}

/**
 * Sources a file in bash and reads the environment back. The file may print and may return any code (Debian's prints about programs it
 * does not ship and still works); it fails under `set -u`, so that is not set. The name travels in a variable because a sourced file
 * sees the positional parameters and OpenFOAM's would take them for settings.
 */
async function captureEnvironment(bashrc: string, env: NodeJS.ProcessEnv): Promise<Record<string, string> | string> {
  const result = await execa("bash", ["--noprofile", "--norc", "-c", 'source "$DRAGLEDGER_SOURCED" >/dev/null 2>&1; env -0'], {
    env: { ...env, DRAGLEDGER_SOURCED: bashrc },
    extendEnv: false,
    reject: false,
    stdin: "ignore",
    stderr: "ignore",
    timeout: bannerMilliseconds,
  });
  if (result.exitCode !== 0)
    return `sourcing ${bashrc} failed (${result.timedOut ? "no answer" : (result.code ?? `code ${result.exitCode}`)})`;
  const captured: Record<string, string> = {};
  for (const entry of result.stdout.split("\0")) {
    const at = entry.indexOf("=");
    if (at > 0) captured[entry.slice(0, at)] = entry.slice(at + 1);
  }
  for (const own of ["DRAGLEDGER_SOURCED", "_", "SHLVL", "OLDPWD"]) delete captured[own];
  return captured;
}

async function describe(program: string, projectDir: string, env: Record<string, string>): Promise<SolverEnvironment | string> {
  const help = await execa(program, ["-help"], {
    env,
    extendEnv: false,
    reject: false,
    stdin: "ignore",
    all: true,
    timeout: bannerMilliseconds,
  });
  const said = help.all ?? "";
  if (help.exitCode !== 0) {
    const line = said.split("\n").find((text) => text.trim() !== "");
    return `${program} does not start (${line?.trim() ?? help.code ?? `code ${help.exitCode}`})`;
  }
  const banner = readBanner(said);
  const version = banner.version ?? env.WM_PROJECT_VERSION ?? "unknown";
  return {
    path: dirname(program),
    projectDir,
    version,
    lineage: banner.lineage === "unknown" ? lineageOfVersion(version) : banner.lineage,
    mpirun: await findProgram("mpirun", env.PATH),
    env: withLauncherSettings(env),
  };
}

/**
 * Open MPI refuses to start as root, and counts physical cores as places: on few cores or with hardware threads it refuses ranks that
 * the machine can well run. Waiting ranks give their core away: measured on two busy cores, 60 iterations took 10 to 17 s instead of 21 to
 * 27. What the user has set stays.
 */
function withLauncherSettings(env: Record<string, string>): Record<string, string> {
  const asRoot: Record<string, string> =
    process.getuid?.() === 0 ? { OMPI_ALLOW_RUN_AS_ROOT: "1", OMPI_ALLOW_RUN_AS_ROOT_CONFIRM: "1" } : {};
  return { ...asRoot, OMPI_MCA_rmaps_base_oversubscribe: "1", OMPI_MCA_mpi_yield_when_idle: "1", ...env };
}

/** Installations in the usual places, newest version first. */
async function usualProjects(root: string, home: string | undefined): Promise<string[]> {
  const places = [
    { folder: `${root}/usr/lib/openfoam`, name: /^openfoam/i },
    { folder: `${root}/opt`, name: /^openfoam\S*\d/i },
    { folder: `${root}/opt/OpenFOAM`, name: /^OpenFOAM-/ },
    ...(home ? [{ folder: join(home, "OpenFOAM"), name: /^OpenFOAM-/ }] : []),
  ];
  const found: string[] = [];
  for (const { folder, name } of places) {
    const names = await readdir(folder).catch(() => [] as string[]);
    const newestFirst = names.filter((entry) => name.test(entry)).sort((a, b) => b.localeCompare(a, "en", { numeric: true }));
    for (const entry of newestFirst) if (await isFile(join(folder, entry, "etc", "bashrc"))) found.push(join(folder, entry));
  }
  return found;
}

const isFile = async (path: string): Promise<boolean> => (await stat(path).catch(() => null))?.isFile() ?? false;

function stringsOf(env: NodeJS.ProcessEnv): Record<string, string> {
  const strings: Record<string, string> = {};
  for (const [key, value] of Object.entries(env)) if (value !== undefined) strings[key] = value;
  return strings;
}
