import { tailOf } from "./case-files.js";
import type { ProgramResult } from "./program.js";

/** Bytes at the end of a log in which a cause is looked for. */
const lookedAt = 262_144;
const longest = 400;

/** What the known failure texts of programs mean to somebody who shapes bodies. */
const explanations: { text: RegExp; meaning: string }[] = [
  { text: /is not inside the mesh or on a face or edge/, meaning: "the keep-point (locationInMesh) lies outside the domain" },
  {
    text: /Could not find mandatory etc entry/,
    meaning: "the solver does not find its own settings; set WM_PROJECT_DIR to the folder that holds its etc/controlDict",
  },
  { text: /dummy scotchDecomp stub/, meaning: "this build has no scotch library; use the method hierarchical" },
  { text: /There are not enough slots available/, meaning: "MPI sees fewer cores than ranks; use fewer cores" },
  {
    text: /attempt to run as root/,
    meaning: "MPI does not start as root without OMPI_ALLOW_RUN_AS_ROOT=1 and OMPI_ALLOW_RUN_AS_ROOT_CONFIRM=1",
  },
  { text: /Cannot find patchField entry for/, meaning: "a patch of the mesh has no boundary condition in the fields in 0/" },
  { text: /error while loading shared libraries/, meaning: "the installation of the solver is not complete" },
  { text: /expected 'vertex' or 'endloop'/, meaning: "a surface file cannot be read as text STL" },
  { text: /exited on signal 9|\bKilled\b/, meaning: "ended from outside; the machine may have run out of memory" },
  { text: /^Invalid option: /m, meaning: "this version of the solver's programs does not know an option that is used here" },
  { text: /No space left on device/i, meaning: "the disk is full" },
];

/** Is there a trace of the floating point trap? The banner of a healthy log names it too, the handler's frames do not stand there. */
export const trapped = (log: string): boolean => /sigFpe::sigHandler/.test(log) || /exited on signal 8/.test(log);

/** The last field that was solved and its initial residual, as the solver printed it; null when none was. */
export function lastSolved(log: string): { field: string; residual: string } | null {
  const lines = [...log.matchAll(/Solving for (\S+), Initial residual = (\S+),/g)];
  const last = lines.at(-1);
  return last ? { field: last[1]!, residual: last[2]! } : null;
}

/** The lines of a log that say why a program failed: at most three of the first fatal error's text; null when nothing says it. */
export function causeLines(log: string): string | null {
  const lines = plain(log).split("\n");
  const at = lines.findIndex((line) => /--> FOAM FATAL (IO )?ERROR/.test(line));
  if (at >= 0) {
    const body = lines.slice(at, at + 14).map((line) => line.replace(/^\[\d+\]\s?/, "").trim());
    const end = body.findIndex((line, index) => index > 1 && /^(From function|FOAM (exiting|aborting|parallel run))/.test(line));
    const said = body.slice(1, end < 0 ? body.length : end).filter((line) => line !== "");
    return shortened([body[0]!.replace(/^-->\s*/, "").replace(/\s*:\s*$/, ":"), ...said.slice(0, 3)].join(" "));
  }
  const other = lines.find((line) => explanations.some(({ text }) => text.test(line)));
  return other === undefined ? null : shortened(other.trim());
}

/** One sentence for a program that did not do its work: step, how it ended, log, cause and what the cause means. */
export async function explainFailure(step: string, result: ProgramResult, logName: string, logPath: string): Promise<string> {
  if (result.notStarted !== null) return `${step} could not be started (${result.notStarted})`;
  const log = await tailOf(logPath, lookedAt).catch(() => "");
  const how = result.signal !== null ? `was ended by ${result.signal}` : `ended with code ${result.exitCode}`;
  const cause = trapped(log) ? "floating point trap" : causeLines(log);
  const meaning =
    explanations.find(({ text }) => text.test(log))?.meaning ??
    (result.signal === "SIGKILL" ? explanations.find(({ text }) => text.test("Killed"))!.meaning : null);
  const parts = [`${step} ${how}`, `log: ${logName}`, ...(cause ? [cause] : []), ...(meaning ? [meaning] : [])];
  return parts.join("; ");
}

/** Log text without colour codes and control characters: it is shown in terminals and reports. */
function plain(text: string): string {
  // biome-ignore lint/suspicious/noControlCharactersInRegex: a colour code begins with one
  return text.replace(/\u001b\[[0-9;]*[A-Za-z]/g, "").replace(/[^\P{Cc}\n]/gu, " ");
}

const shortened = (text: string): string => (text.length > longest ? `${text.slice(0, longest - 3)}...` : text);
