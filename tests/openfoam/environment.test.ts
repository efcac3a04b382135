import { chmod, mkdir, mkdtemp, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { dirname, join } from "node:path";
import { describe, expect, onTestFinished, test } from "vitest";
import { Problem } from "../../src/errors.js";
import { findSolver, surveyEnvironment } from "../../src/openfoam/environment.js";
import { readBanner, searchSolver } from "../../src/openfoam/find-solver.js";

// A made-up machine: every place is below `root`, the PATH has bash and env of this one and nothing of its solver.
interface Machine {
  root: string;
  env: NodeJS.ProcessEnv;
  put: (path: string, text: string, mode?: number) => Promise<string>;
}

async function machine(): Promise<Machine> {
  const root = await mkdtemp(join(tmpdir(), "machine-"));
  onTestFinished(() => rm(root, { recursive: true, force: true }));
  const put = async (path: string, text: string, mode = 0o644) => {
    const file = join(root, path);
    await mkdir(dirname(file), { recursive: true });
    await writeFile(file, text);
    await chmod(file, mode);
    return file;
  };
  for (const name of ["bash", "env"]) await put(`base/${name}`, `#!/bin/sh\nexec /usr/bin/${name} "$@"\n`, 0o755);
  return { root, env: { PATH: join(root, "base"), HOME: join(root, "home") }, put };
}

const banner = (using: string) => `#!/bin/sh
[ -f "$WM_PROJECT_DIR/etc/controlDict" ] || { echo "no settings"; exit 1; }
echo 'Steady-state solver for incompressible, turbulent flows.'
echo
echo 'Using: ${using}'
`;

/** An installation as its makers lay it out: bin below a platform folder, put on the PATH by etc/bashrc, which prints and returns 1. */
async function installation(made: Machine, folder: string, using: string): Promise<string> {
  const project = join(made.root, folder);
  await made.put(`${folder}/etc/controlDict`, "OptimisationSwitches {}\n");
  await made.put(`${folder}/platforms/bin/simpleFoam`, banner(using), 0o755);
  await made.put(
    `${folder}/etc/bashrc`,
    `echo "foamEtcFile: No such file or directory" >&2; echo noise
[ $# -eq 0 ] || exit 3
export WM_PROJECT_DIR="${project}" WM_PROJECT_VERSION=v9999 PATH="${project}/platforms/bin:$PATH" WM_LINES='two
lines'
false
`,
  );
  return project;
}

describe("findSolver", () => {
  test("programs on the PATH with their settings in the shared folder need only WM_PROJECT_DIR", async () => {
    const made = await machine();
    await made.put("usr/share/openfoam/etc/controlDict", "OptimisationSwitches {}\n");
    await made.put("base/simpleFoam", banner("OpenFOAM- (1912) - visit www.openfoam.com"), 0o755);
    const launcher = await made.put("base/mpirun", "#!/bin/sh\n", 0o755);
    const solver = await findSolver({ env: made.env, root: made.root });
    expect(solver).toMatchObject({
      path: join(made.root, "base"),
      projectDir: join(made.root, "usr/share/openfoam"),
      version: "v1912",
      lineage: "com",
      mpirun: launcher,
      env: { WM_PROJECT_DIR: join(made.root, "usr/share/openfoam"), OMPI_MCA_rmaps_base_oversubscribe: "1" },
    });
    const asRoot = process.getuid?.() === 0 ? "1" : undefined;
    expect(solver!.env.OMPI_ALLOW_RUN_AS_ROOT).toBe(asRoot);
    expect(solver!.env.OMPI_ALLOW_RUN_AS_ROOT_CONFIRM).toBe(asRoot);
  });

  test("what the shell has sourced goes before the usual places, and what the user has set stays", async () => {
    const made = await machine();
    await made.put("usr/share/openfoam/etc/controlDict", "");
    await made.put("sourced/etc/controlDict", "");
    await made.put("base/simpleFoam", banner("OpenFOAM-v2306 (2306) (see www.OpenFOAM.com)"), 0o755);
    const env = { ...made.env, WM_PROJECT_DIR: join(made.root, "sourced"), OMPI_MCA_rmaps_base_oversubscribe: "0" };
    const solver = await findSolver({ env, root: made.root });
    expect(solver).toMatchObject({ projectDir: join(made.root, "sourced"), version: "v2306", lineage: "com", mpirun: null });
    expect(solver!.env.OMPI_MCA_rmaps_base_oversubscribe).toBe("0");
  });

  test("a WM_PROJECT_DIR that leads nowhere does not hide a good installation", async () => {
    const made = await machine();
    const project = await installation(made, "opt/openfoam11", "OpenFOAM-11 (see https://openfoam.org)");
    const solver = await findSolver({ env: { ...made.env, WM_PROJECT_DIR: "/nowhere" }, root: made.root });
    expect(solver).toMatchObject({ path: join(project, "platforms/bin"), projectDir: project, version: "11", lineage: "org" });
  });

  test("installations that were not sourced: their environment is taken over, noise, return code and line breaks notwithstanding", async () => {
    const made = await machine();
    const project = await installation(made, "usr/lib/openfoam/openfoam2312", "OpenFOAM-v2312 (2312) - visit www.openfoam.com");
    const solver = await findSolver({ env: made.env, root: made.root });
    expect(solver).toMatchObject({ path: join(project, "platforms/bin"), projectDir: project, version: "v2312", lineage: "com" });
    expect(solver!.env.WM_LINES).toBe("two\nlines");
    expect(Object.keys(solver!.env).filter((key) => key.startsWith("DRAGLEDGER"))).toEqual([]);
  });

  test("of several in one place the newest is taken; also below the home folder", async () => {
    const made = await machine();
    for (const name of ["OpenFOAM-v1912", "OpenFOAM-v2412", "OpenFOAM-v2006"]) {
      await installation(made, `home/OpenFOAM/${name}`, `${name} (0) - visit www.openfoam.com`);
    }
    expect((await findSolver({ env: made.env, root: made.root }))!.version).toBe("v2412");
  });

  test("the folder named by DRAGLEDGER_OPENFOAM goes first", async () => {
    const made = await machine();
    await installation(made, "opt/openfoam2412", "OpenFOAM-v2412 (2412) - visit www.openfoam.com");
    const named = await installation(made, "my build", "OpenFOAM-v1912 (1912) - visit www.openfoam.com");
    const solver = await findSolver({ env: { ...made.env, DRAGLEDGER_OPENFOAM: named }, root: made.root });
    expect(solver).toMatchObject({ projectDir: named, version: "v1912" });
  });

  test("a DRAGLEDGER_OPENFOAM that does not serve is told, not passed over", async () => {
    const made = await machine();
    await installation(made, "opt/openfoam2412", "OpenFOAM-v2412 (2412) - visit www.openfoam.com");
    const error = await findSolver({ env: { ...made.env, DRAGLEDGER_OPENFOAM: made.root }, root: made.root }).catch(
      (thrown: unknown) => thrown,
    );
    expect(error).toBeInstanceOf(Problem);
    expect(error).toMatchObject({
      kind: "input",
      code: "solver-folder-unusable",
      message: `DRAGLEDGER_OPENFOAM names ${made.root}, which cannot be used: it has no etc/bashrc.`,
      where: made.root,
      remedy:
        "Set it to the folder of an OpenFOAM installation (the one that holds etc/bashrc), or unset it to search the usual places.",
    });
  });

  test("an installation whose programs do not start is passed over, with the reason", async () => {
    const made = await machine();
    const project = await installation(made, "opt/openfoam2412", "");
    const text = "error while loading shared libraries: libOpenFOAM.so";
    await made.put("opt/openfoam2412/platforms/bin/simpleFoam", `#!/bin/sh\necho "${text}" >&2\nexit 127\n`, 0o755);
    const result = await searchSolver({ env: made.env, root: made.root });
    expect(result.solver).toBe(null);
    expect(result.unusable).toEqual([`${project}: ${project}/platforms/bin/simpleFoam does not start (${text})`]);
  });

  test("nothing installed", async () => {
    const made = await machine();
    expect(await searchSolver({ env: made.env, root: made.root })).toEqual({ solver: null, unusable: [] });
  });
});

test("banners of both lines", () => {
  // Texts of v1912 as packaged (seen here) and, from memory, of a v2306 and a version 8 build.
  expect(readBanner("Using: OpenFOAM- (1912) - visit www.openfoam.com\nBuild:  (patch=200626)\n")).toEqual({
    version: "v1912",
    lineage: "com",
  });
  expect(readBanner("\nUsing: OpenFOAM-v2306 (2306) - visit www.openfoam.com")).toEqual({ version: "v2306", lineage: "com" });
  expect(readBanner("Using: OpenFOAM-8 (see https://openfoam.org)")).toEqual({ version: "8", lineage: "org" });
  expect(readBanner("Using: OpenFOAM-dev")).toEqual({ version: "dev", lineage: "org" });
  expect(readBanner("usage: something else")).toEqual({ version: null, lineage: "unknown" });
});

describe("surveyEnvironment", () => {
  test("says what is there", async () => {
    const made = await machine();
    await made.put("usr/share/openfoam/etc/controlDict", "");
    await made.put("base/simpleFoam", banner("OpenFOAM- (1912) - visit www.openfoam.com"), 0o755);
    await made.put("base/mpirun", "#!/bin/sh\necho 'mpirun (Open MPI) 4.1.4'\n", 0o755);
    await made.put("base/sbatch", "#!/bin/sh\necho 'slurm 22.05.8'\n", 0o755);
    await made.put("base/chromium", "#!/bin/sh\n", 0o755);
    const report = await surveyEnvironment({ env: made.env, root: made.root });
    expect(report).toMatchObject({
      node: process.version,
      solver: { found: true, version: "v1912", lineage: "com", path: join(made.root, "base") },
      mpi: { found: true, version: "4.1.4", path: join(made.root, "base/mpirun") },
      slurm: { found: true, version: "22.05.8" },
      browser: { found: true, path: join(made.root, "base/chromium") },
      missing: [],
    });
    expect(report.cores).toBeGreaterThan(0);
    expect(report.memory).toBeGreaterThan(1e8);
    expect(report.disk).toBeGreaterThan(0);
  });

  test("says what is missing and how to get it on this kind of system", async () => {
    const made = await machine();
    await made.put("etc/os-release", 'NAME="Some Linux"\nID=mint\nID_LIKE="ubuntu debian"\n');
    const report = await surveyEnvironment({ env: made.env, root: made.root });
    expect(report.solver).toEqual({ found: false, version: null, lineage: null, path: null });
    expect(report.mpi).toEqual({ found: false, version: null, path: null });
    expect(report.missing).toEqual([
      { what: "OpenFOAM (meshes and solves)", how: "apt-get install openfoam" },
      { what: "mpirun (more than one core for one case)", how: "apt-get install openmpi-bin" },
      { what: "a browser (pictures of geometry and report)", how: "apt-get install chromium" },
    ]);
  });

  test("an unusable DRAGLEDGER_OPENFOAM is part of the answer, not an error", async () => {
    const made = await machine();
    const report = await surveyEnvironment({ env: { ...made.env, DRAGLEDGER_OPENFOAM: "/nowhere" }, root: made.root });
    expect(report.missing[0]!.how).toBe(
      "install OpenFOAM (version v1912 or later, www.openfoam.com) and set DRAGLEDGER_OPENFOAM to the folder that holds its etc/bashrc (found, but not usable: DRAGLEDGER_OPENFOAM names /nowhere, which cannot be used: it has no etc/bashrc. Set it to the folder of an OpenFOAM installation (the one that holds etc/bashrc), or unset it to search the usual places.)",
    );
  });
});
