import { type Finding, finding } from "../finding.js";
import { FatalText, type LogLine, logLines } from "./log-lines.js";
import { numberOf } from "./number-rows.js";
import type { Column } from "./table.js";

/** What a solver's log says of its run. Of a log with several runs one after the other it is the last. */
export interface SolverLog {
  /** From the banner; "" when it is missing. */
  version: string;
  program: string;
  processes: number | null;
  /** banners in the file: runs appended to each other */
  runs: number;
  /** ended: the program said `End`; failed: an error is named; stopped: neither, so it was killed or still runs */
  end: "ended" | "failed" | "stopped";
  /** Why, in one sentence. */
  reason: string;
  /** Text of a fatal error, with the line in the log and the file of the case that it names. */
  fatal: { message: string; line: number; file: string | null } | null;
  /** A floating-point trap ended the run: the flow became infinite or undefined. */
  trapped: boolean;
  /** Iterations after which the solver's own criterion was met; null when it was not. */
  convergedAfter: number | null;
  /** Last time or iteration begun; null when none was. */
  lastTime: number | null;
  /** Times begun. */
  steps: number;
  /** seconds; null when never printed */
  executionTime: number | null;
  clockTime: number | null;
  /** Time, then the first initial residual of each field in that step (NaN when not solved). */
  residuals: Column[];
  findings: Finding[];
}

const banner = /OpenFOAM: The Open Source CFD Toolbox/;
const solve = /^Solving for ([^,]{1,200}), Initial residual = (\S+), Final residual = (\S+), No Iterations/;
const clock = /^ExecutionTime = (\S+)(?: s)?\s+ClockTime = (\S+)/;
const trapLine = /sigFpe::sigHandler|^Floating point exception(?!.*trapping)|Signal: Floating point exception/;

/** Endings without an error text of the solver, and what they mean. */
const endings: { pattern: RegExp; reason: string }[] = [
  { pattern: /sigSegv::sigHandler|Signal: Segmentation fault|^Segmentation fault/, reason: "a segmentation fault ended the run" },
  { pattern: /std::bad_alloc|Out of memory|oom-kill/, reason: "the machine ran out of memory" },
  { pattern: /DUE TO TIME LIMIT/, reason: "the batch system ended the run at its time limit" },
  { pattern: /CANCELLED AT/, reason: "the batch system cancelled the run" },
  { pattern: /^Killed$/, reason: "the run was killed" },
  {
    pattern: /MPI_ABORT was invoked|BAD TERMINATION|mpirun noticed that process/,
    reason: "one of the parallel processes ended the run",
  },
];

/** One run inside a log. */
class Run {
  version = "";
  program = "";
  processes: number | null = null;
  ended = false;
  trapped = false;
  trapPlace = "";
  ending: string | null = null;
  convergedAfter: number | null = null;
  lastTime: number | null = null;
  executionTime: number | null = null;
  clockTime: number | null = null;
  times: number[] = [];
  fields = new Map<string, number[]>();
  notFinite = false;
  bounded = new Map<string, number>();
  unmatched = new Set<string>();
  unknownTypes = new Set<string>();
  negativeVolumes = 0;
  fatal = new FatalText();

  take(line: LogLine): void {
    const { text } = line;
    if (this.fatal.take(line)) return;
    if (text.startsWith("Time = ")) this.time(text.slice(7));
    else if (text === "End") this.ended = true;
    else if (text.includes("Solving for ")) this.solved(text);
    else if (text.startsWith("ExecutionTime")) this.clocked(text);
    else if (text.startsWith("bounding ")) {
      const field = /^bounding ([^,]+),/.exec(text)?.[1] ?? "";
      this.bounded.set(field, (this.bounded.get(field) ?? 0) + 1);
    } else this.other(text);
  }

  private time(text: string): void {
    const value = numberOf(text.replace(/s$/, "").trim());
    if (value === undefined) return;
    this.lastTime = value;
    this.ended = false;
    this.times.push(value);
  }

  private solved(text: string): void {
    const found = solve.exec(text.slice(text.indexOf("Solving for ")));
    if (found === null) return;
    const [initial, final] = [numberOf(found[2]!) ?? Number.NaN, numberOf(found[3]!) ?? Number.NaN];
    if (!Number.isFinite(initial) || !Number.isFinite(final)) this.notFinite = true;
    const step = Math.max(0, this.times.length - 1);
    let column = this.fields.get(found[1]!);
    if (column === undefined) this.fields.set(found[1]!, (column = []));
    while (column.length < step) column.push(Number.NaN);
    // A field that is solved several times in a step: the first solve shows how far the step was from the solution.
    if (column.length === step) column.push(initial);
  }

  private clocked(text: string): void {
    const found = clock.exec(text);
    if (found === null) return;
    this.executionTime = seconds(found[1]!) ?? this.executionTime;
    this.clockTime = seconds(found[2]!) ?? this.clockTime;
  }

  private other(text: string): void {
    if (this.program === "" && text.startsWith("Exec "))
      this.program = /^Exec\s*:\s*(\S+)/.exec(text)?.[1]?.split("/").at(-1) ?? "";
    else if (text.includes("Version:")) this.version ||= /Version:\s*([^\s|]+)/.exec(text)?.[1] ?? "";
    else if (text.startsWith("Build ")) this.version ||= /OPENFOAM=(\d+)/.exec(text)?.[1] ?? /:\s*(\S+)/.exec(text)?.[1] ?? "";
    else if (text.startsWith("nProcs")) this.processes ??= numberOf(text.split(":")[1]?.trim() ?? "") ?? null;
    else if (text.includes("solution converged in"))
      this.convergedAfter = Number(/converged in (\d+)/.exec(text)?.[1] ?? Number.NaN);
    else if (text.includes("Cannot find any patch or group names matching")) this.unmatched.add(text.split("matching")[1]!.trim());
    else if (text.includes("Unknown function type")) this.unknownTypes.add(/Unknown function type (\S+)/.exec(text)?.[1] ?? "?");
    else if (/negative/i.test(text) && /volume/i.test(text)) this.negativeVolumes += 1;
    else if (trapLine.test(text)) this.trapped = true;
    else if (this.trapped && this.trapPlace === "" && /^#\d+\s+Foam::/.test(text)) {
      this.trapPlace = text
        .split("(")[0]!
        .replace(/^#\d+\s+/, "")
        .slice(0, 200);
    } else if (this.ending === null) {
      this.ending = endings.find(({ pattern }) => pattern.test(text))?.reason ?? null;
    }
  }
}

/** `12.3` or `1:02:03` in seconds. */
function seconds(text: string): number | undefined {
  const parts = text.split(":").map(numberOf);
  return parts.includes(undefined) ? undefined : (parts as number[]).reduce((sum, part) => sum * 60 + part, 0);
}

/**
 * Reads a solver's log. False alarms are known: every healthy log says that floating-point trapping is on, and the letters `nan`
 * stand in `determinant`; only numbers, traces and error texts count.
 *
 * @param name file name for messages
 * @throws Problem (input) for an empty file or bytes that are no text
 */
export function readSolverLog(log: Uint8Array | string, name: string): SolverLog {
  let run = new Run();
  let runs = 0;
  for (const line of logLines(log, name)) {
    if (banner.test(line.text)) {
      runs += 1;
      if (runs > 1) run = new Run();
    }
    run.take(line);
  }
  run.fatal.close();
  const fatal = run.fatal.message === null ? null : { message: run.fatal.message, line: run.fatal.line!, file: run.fatal.file };
  const { end, reason } = ending(run);
  return {
    version: run.version,
    program: run.program,
    processes: run.processes,
    runs: Math.max(1, runs),
    end,
    reason,
    fatal,
    trapped: run.trapped,
    convergedAfter: run.convergedAfter,
    lastTime: run.lastTime,
    steps: run.times.length,
    executionTime: run.executionTime,
    clockTime: run.clockTime,
    residuals: residualColumns(run),
    findings: logFindings(run),
  };
}

function ending(run: Run): { end: SolverLog["end"]; reason: string } {
  const at = run.lastTime === null ? "before the first step" : `at time ${run.lastTime}`;
  if (run.fatal.message !== null) {
    const before = run.notFinite ? ", after residuals had become nan or inf (the run diverged)" : "";
    return { end: "failed", reason: `fatal error ${at}${before}: ${run.fatal.message}` };
  }
  if (run.trapped) {
    const place = run.trapPlace === "" ? "" : ` in ${run.trapPlace}`;
    return { end: "failed", reason: `floating-point trap ${at}${place}: the solution became infinite or undefined` };
  }
  if (run.ended && run.notFinite) {
    return { end: "ended", reason: `the program ended ${at}, but its residuals were nan or inf: the run diverged` };
  }
  if (run.ended && run.convergedAfter !== null) {
    return { end: "ended", reason: `the solver's criterion was met after ${run.convergedAfter} iterations` };
  }
  if (run.ended) return { end: "ended", reason: `the run ended ${at}, at its limit` };
  if (run.ending !== null) return { end: "failed", reason: `${run.ending} ${at}` };
  return { end: "stopped", reason: `the log stops ${at} without an error: the run was killed, or it still goes on` };
}

function residualColumns(run: Run): Column[] {
  const steps = run.times.length;
  if (steps === 0) return [];
  const columns = [...run.fields].map(([name, residuals]) => {
    const values = new Float64Array(steps).fill(Number.NaN);
    values.set(residuals.slice(0, steps));
    return { name, values };
  });
  return [{ name: "Time", values: Float64Array.from(run.times) }, ...columns];
}

function logFindings(run: Run): Finding[] {
  const findings: Finding[] = [];
  for (const names of run.unmatched) {
    findings.push(
      finding(
        "unmatched-patches",
        "error",
        `the solver found no patch or group that matches ${names}: its forces miss that part, or are exactly zero`,
        "Compare the names with constant/polyMesh/boundary.",
      ),
    );
  }
  for (const type of run.unknownTypes) {
    findings.push(
      finding(
        "unknown-function",
        "warning",
        `the function object type ${type} is not known to this version: nothing was written`,
        "Use the type of this version, or load its library.",
      ),
    );
  }
  if (run.notFinite) {
    findings.push(
      finding(
        "not-finite",
        "error",
        "residuals were nan or inf: the run diverged",
        "Look at the mesh quality and the start of the run.",
      ),
    );
  }
  if (run.negativeVolumes > 0) {
    findings.push(
      finding("negative-volume", "error", "the solver reports negative cell volumes", "Make the mesh again.", {
        count: run.negativeVolumes,
      }),
    );
  }
  for (const [field, count] of run.bounded) {
    // Clipping in the first steps is usual; through half of the run it is not.
    if (run.times.length < 20 || count < run.times.length / 2) continue;
    findings.push(
      finding(
        "bounding",
        "warning",
        `${field} had to be bounded ${count} times in ${run.times.length} steps`,
        "Look at the mesh quality and the schemes.",
        {
          count,
        },
      ),
    );
  }
  return findings;
}
