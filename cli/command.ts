import type { Command } from "commander";
import type { ExitCode } from "./context.js";
import type { Printer } from "./print/printer.js";

/** One command: how it is called, two examples that work, and what it does. Each file in commands/ exports one as `command`. */
export interface CommandModule<Options = Record<string, unknown>> {
  /** Arguments as commander writes them, such as `<study.yaml> <stl...>`. */
  arguments: string;
  /** A paragraph below the usage line. */
  description: string;
  /** Adds the command's own options. */
  options(command: Command): void;
  examples: { call: string; does: string }[];
  run(call: Call<Options>): Promise<ExitCode>;
}

export interface Call<Options> {
  /** Positional arguments in order; a variadic one is an array. */
  args: unknown[];
  options: Options;
  print: Printer;
  signal: AbortSignal;
}
