import { existsSync } from "node:fs";
import { mkdtemp, rm } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join, resolve } from "node:path";
import { execa } from "execa";

export const root = resolve(import.meta.dirname, "../..");

export interface Ended {
  code: number | undefined;
  stdout: string;
  stderr: string;
}

/** Runs the built program as a process of its own, as a user does. */
export async function dragledger(
  args: string[],
  options: { cwd: string; env?: Record<string, string>; timeout?: number },
): Promise<Ended> {
  const { exitCode, stdout, stderr } = await execa(process.execPath, [join(root, "dist/cli/main.js"), ...args], {
    cwd: options.cwd,
    env: { NO_COLOR: "1", ...options.env },
    timeout: options.timeout ?? 60_000,
    reject: false,
    maxBuffer: 64 * 1024 * 1024,
  });
  return { code: exitCode, stdout, stderr };
}

/** A folder that is gone after `work`. */
export async function inScratch<T>(work: (folder: string) => Promise<T>): Promise<T> {
  const folder = await mkdtemp(join(tmpdir(), "dragledger-test-"));
  try {
    return await work(folder);
  } finally {
    await rm(folder, { recursive: true, force: true });
  }
}

/** Why the solver tests cannot run here; null where they can. */
export const solverMissing: string | null =
  existsSync("/usr/bin/simpleFoam") || process.env.WM_PROJECT_DIR ? null : "OpenFOAM is not installed";
