import type { Problem } from "../src/errors.js";

/** What a command may touch of the outside: two streams, what they are, and the wish to stop. Tests give their own. */
export interface Streams {
  stdout: NodeJS.WritableStream & { isTTY?: boolean; columns?: number };
  stderr: NodeJS.WritableStream & { isTTY?: boolean; columns?: number };
  env: NodeJS.ProcessEnv;
  /** Aborted on Ctrl-C or a polite request to end. */
  signal: AbortSignal;
}

/** done; a defect; wrong input or call; done but the answer is no; a tool failed or is missing; stopped by the user. */
export const exitCode = { done: 0, defect: 1, input: 2, no: 3, tool: 4, interrupted: 130 } as const;
export type ExitCode = (typeof exitCode)[keyof typeof exitCode];

export const exitCodeOf = (problem: Problem): ExitCode => (problem.kind === "tool" ? exitCode.tool : exitCode.input);

/** Options that every command takes. */
export interface CommonOptions {
  json?: boolean;
  quiet?: boolean;
  color: boolean;
  debug?: boolean;
}
