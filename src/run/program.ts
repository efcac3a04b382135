import { type ChildProcess, spawn } from "node:child_process";
import { appendFileSync, closeSync, openSync, readdirSync, readFileSync } from "node:fs";

export interface ProgramCall {
  program: string;
  args: string[];
  cwd: string;
  /** The whole environment; PWD is set to `cwd` here, because OpenFOAM compares the two. */
  env: Record<string, string>;
  /** Absolute path of the file that takes what the program prints. */
  log: string;
  /** Put before the program's output when the log is continued; without it the log is begun anew. */
  marker?: string;
  signal?: AbortSignal | undefined;
  /** Called with the process id as soon as there is one. */
  onStart?: (pid: number) => void;
  /** Time a program gets between being asked to end and being ended. */
  graceMilliseconds?: number;
}

export interface ProgramResult {
  /** null when a signal ended it */
  exitCode: number | null;
  signal: string | null;
  seconds: number;
  /** Largest memory seen, bytes, all processes of the program together; null where the system does not tell. */
  peakMemory: number | null;
  /** It was ended because the caller asked. */
  aborted: boolean;
  /** Why it could not be started at all. */
  notStarted: string | null;
}

const running = new Set<number>();
let exitWatched = false;

/**
 * Runs one program to its end. It gets a process group of its own, so that all it started ends with it: when asked (`signal`), and when
 * this process exits. Starts processes, writes the log; never throws for what the program does.
 */
export async function runProgram(call: ProgramCall): Promise<ProgramResult> {
  const started = performance.now();
  const since = () => (performance.now() - started) / 1000;
  if (call.signal?.aborted) return { exitCode: null, signal: null, seconds: 0, peakMemory: null, aborted: true, notStarted: null };
  const log = openSync(call.log, call.marker === undefined ? "w" : "a");
  if (call.marker !== undefined) appendFileSync(log, call.marker);
  try {
    // The log is the program's own file, not a pipe through this process: it stays whole whatever becomes of this process.
    const child = spawn(call.program, call.args, {
      cwd: call.cwd,
      env: { ...call.env, PWD: call.cwd },
      stdio: ["ignore", log, log],
      detached: true,
    });
    const ended = endOf(child);
    const pid = child.pid;
    if (pid === undefined) {
      const { notStarted } = await ended;
      return { exitCode: null, signal: null, seconds: since(), peakMemory: null, aborted: false, notStarted };
    }
    call.onStart?.(pid);
    const memory = sampleMemory(pid);
    const ending = endOnRequest(pid, call.signal, call.graceMilliseconds ?? 10_000);
    running.add(pid);
    endAllWithThisProcess();
    const { exitCode, signal, notStarted } = await ended;
    running.delete(pid);
    const peakMemory = memory.stop();
    const aborted = await ending.finish();
    return { exitCode, signal, seconds: since(), peakMemory, aborted, notStarted };
  } finally {
    closeSync(log);
  }
}

/** Does a process with this id run? True also for one that belongs to somebody else; false for one that has ended and was not fetched. */
export function isAlive(pid: number): boolean {
  try {
    process.kill(pid, 0);
  } catch (error) {
    return (error as NodeJS.ErrnoException).code === "EPERM";
  }
  return statWords(pid)?.[0] !== "Z";
}

/** State, parent and what follows them in /proc/<pid>/stat. The name before them may hold blanks and brackets. */
function statWords(pid: number): string[] | null {
  try {
    const text = readFileSync(`/proc/${pid}/stat`, "latin1");
    return text.slice(text.lastIndexOf(")") + 2).split(" ");
  } catch {
    return null;
  }
}

function endOf(child: ChildProcess): Promise<{ exitCode: number | null; signal: string | null; notStarted: string | null }> {
  return new Promise((resolve) => {
    child.once("error", (error: NodeJS.ErrnoException) =>
      resolve({ exitCode: null, signal: null, notStarted: error.code ?? error.message }),
    );
    child.once("exit", (exitCode, signal) => resolve({ exitCode, signal, notStarted: null }));
  });
}

function endOnRequest(pid: number, signal: AbortSignal | undefined, grace: number): { finish: () => Promise<boolean> } {
  let timer: NodeJS.Timeout | undefined;
  let family: number[] = [];
  let asked = false;
  const ask = () => {
    asked = true;
    // MPI launchers put their ranks into groups of their own: remember them while the tree is whole.
    family = descendantsOf(pid);
    send(-pid, "SIGTERM");
    timer = setTimeout(() => {
      for (const member of [-pid, ...family, ...descendantsOf(pid)]) send(member, "SIGKILL");
    }, grace);
  };
  signal?.addEventListener("abort", ask, { once: true });
  return {
    finish: async () => {
      signal?.removeEventListener("abort", ask);
      clearTimeout(timer);
      if (!asked) return false;
      for (let wait = 0; wait < grace && family.some(isAlive); wait += 50) await new Promise((resolve) => setTimeout(resolve, 50));
      for (const member of [-pid, ...family]) send(member, "SIGKILL");
      return true;
    },
  };
}

function send(target: number, signal: NodeJS.Signals): void {
  try {
    process.kill(target, signal);
  } catch {
    // It has ended already.
  }
}

function endAllWithThisProcess(): void {
  if (exitWatched) return;
  exitWatched = true;
  process.on("exit", () => {
    for (const pid of running) {
      const family = descendantsOf(pid);
      for (const member of [-pid, ...family]) send(member, "SIGTERM");
    }
  });
}

/** Each process's own peak, summed. A program that ends before the first look has none: half a second in, it would be a wrong one. */
function sampleMemory(pid: number): { stop: () => number | null } {
  let peak: number | null = null;
  const timer = setInterval(() => {
    const sum = [pid, ...descendantsOf(pid)].reduce((bytes, member) => bytes + peakOf(member), 0);
    if (sum > 0) peak = Math.max(peak ?? 0, sum);
  }, 500);
  timer.unref();
  return {
    stop: () => {
      clearInterval(timer);
      return peak;
    },
  };
}

function peakOf(pid: number): number {
  try {
    const kilobytes = /^VmHWM:\s*(\d+) kB/m.exec(readFileSync(`/proc/${pid}/status`, "latin1"))?.[1];
    return Number(kilobytes ?? 0) * 1024;
  } catch {
    return 0;
  }
}

/** All processes below one, read from /proc; empty where there is none. */
function descendantsOf(pid: number): number[] {
  const children = new Map<number, number[]>();
  let entries: string[];
  try {
    entries = readdirSync("/proc");
  } catch {
    return [];
  }
  for (const entry of entries) {
    if (!/^\d+$/.test(entry)) continue;
    const parent = statWords(Number(entry))?.[1];
    if (parent !== undefined) children.set(Number(parent), [...(children.get(Number(parent)) ?? []), Number(entry)]);
  }
  const found: number[] = [];
  const open = [pid];
  while (open.length > 0) {
    for (const child of children.get(open.pop()!) ?? []) {
      found.push(child);
      open.push(child);
    }
  }
  return found;
}
