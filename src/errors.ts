/**
 * Errors that a user can act on. Everything else that is thrown is a defect of the program.
 *
 * `input`: a file, a study or a call is wrong (exit 2). `tool`: a program that is needed is missing or failed (exit 4).
 */
export type ProblemKind = "input" | "tool";

export interface ProblemDetails {
  /** Stable kebab-case name of the cause, for programs. */
  code: string;
  /** What is wrong, one sentence, with the value found and the value expected. */
  message: string;
  /** File, line, byte, part or key. */
  where?: string;
  /** What to do about it, one sentence. */
  remedy: string;
  cause?: unknown;
}

export class Problem extends Error {
  readonly code: string;
  readonly where: string | null;
  readonly remedy: string;

  constructor(
    readonly kind: ProblemKind,
    details: ProblemDetails,
  ) {
    super(details.message, details.cause === undefined ? undefined : { cause: details.cause });
    this.name = "Problem";
    this.code = details.code;
    this.where = details.where ?? null;
    this.remedy = details.remedy;
  }
}

export const inputProblem = (details: ProblemDetails): Problem => new Problem("input", details);
export const toolProblem = (details: ProblemDetails): Problem => new Problem("tool", details);
