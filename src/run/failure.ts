import { Problem } from "../errors.js";
import { FatalText, logLines } from "../openfoam/log-lines.js";
import { printable } from "../study/message-text.js";
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

/** The last field that was solved and its initial residual, as the solver printed it; null when none was. */
export function lastSolved(log: string): { field: string; residual: string } | null {
  const lines = [...log.matchAll(/Solving for (\S+), Initial residual = (\S+),/g)];
  const last = lines.at(-1);
  return last ? { field: last[1]!, residual: last[2]! } : null;
}

/** What a log says of why a program failed, in one line: its first fatal error, or a line that is known to tell; null when nothing does. */
export function causeOf(log: Uint8Array | string): string | null {
  const fatal = new FatalText();
  let known: string | null = null;
  try {
    for (const line of logLines(log, "log")) {
      if (fatal.take(line) || known !== null) continue;
      if (explanations.some(({ text }) => text.test(line.text))) known = line.text.trim();
    }
  } catch (error) {
    // An empty log, or one that is no text, says nothing.
    if (!(error instanceof Problem)) throw error;
  }
  fatal.close();
  const said =
    fatal.message === null ? known : `FOAM FATAL ERROR: ${fatal.message}${fatal.file === null ? "" : ` (${fatal.file})`}`;
  return said === null ? null : shortened(printable(said));
}

/** One sentence for a program that did not do its work: step, how it ended, log, cause and what the cause means. */
export async function explainFailure(step: string, result: ProgramResult, logName: string, logPath: string): Promise<string> {
  if (result.notStarted !== null) return `${step} could not be started (${result.notStarted})`;
  const log = await tailOf(logPath, lookedAt).catch(() => "");
  const how = result.signal !== null ? `was ended by ${result.signal}` : `ended with code ${result.exitCode}`;
  const cause = causeOf(log);
  const meaning =
    explanations.find(({ text }) => text.test(log))?.meaning ??
    (result.signal === "SIGKILL" ? explanations.find(({ text }) => text.test("Killed"))!.meaning : null);
  const parts = [`${step} ${how}`, `log: ${logName}`, ...(cause ? [cause] : []), ...(meaning ? [meaning] : [])];
  return parts.join("; ");
}

const shortened = (text: string): string => (text.length > longest ? `${text.slice(0, longest - 3)}...` : text);
