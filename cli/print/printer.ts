import pc from "picocolors";
import type { CommonOptions, Streams } from "../context.js";

/** Where a command's words go: results to standard output, remarks and progress to standard error, or one JSON document. */
export class Printer {
  readonly json: boolean;
  readonly quiet: boolean;
  /** Colours for standard output and standard error: off in pipes, with --no-color and with NO_COLOR. */
  readonly colours: ReturnType<typeof pc.createColors>;
  readonly errorColours: ReturnType<typeof pc.createColors>;
  /** Columns of standard output; 100 when it is no terminal. */
  readonly width: number;
  /** Whether a line on standard error may be drawn over. */
  readonly live: boolean;

  constructor(
    private readonly streams: Streams,
    options: CommonOptions,
  ) {
    this.json = options.json === true;
    this.quiet = options.quiet === true;
    const wanted = options.color && !streams.env.NO_COLOR;
    this.colours = pc.createColors(wanted && streams.stdout.isTTY === true);
    this.errorColours = pc.createColors(wanted && streams.stderr.isTTY === true);
    this.width = streams.stdout.isTTY ? (streams.stdout.columns ?? 100) : 100;
    this.live = streams.stderr.isTTY === true && !this.quiet;
  }

  get errorStream(): Streams["stderr"] {
    return this.streams.stderr;
  }

  /** A result for people. Silent when JSON is asked for. */
  line(text = ""): void {
    if (!this.json) this.streams.stdout.write(`${text}\n`);
  }

  /** Text that is itself the result (CSV, a study file), written as it is. */
  raw(text: string): void {
    if (!this.json) this.streams.stdout.write(text);
  }

  /** A heading of a block of results. */
  heading(text: string): void {
    this.line();
    this.line(this.colours.bold(text));
  }

  /** The one JSON document of the call. Non-finite numbers become null, since JSON has no others. */
  document(schema: string, content: Record<string, unknown>): void {
    if (this.json) this.streams.stdout.write(`${JSON.stringify({ schema: `dragledger/${schema}/1`, ...content }, jsonValue, 2)}\n`);
  }

  /** A remark for people, on standard error. */
  note(text: string): void {
    if (!this.quiet) this.streams.stderr.write(`${text}\n`);
  }

  /** Lets buffered output out before the process may end. */
  async end(): Promise<void> {
    await new Promise<void>((resolve) => this.streams.stdout.write("", () => resolve()));
  }
}

function jsonValue(_key: string, value: unknown): unknown {
  if (typeof value === "number") return Number.isFinite(value) ? value : null;
  if (value instanceof Float64Array || value instanceof Float32Array)
    return Array.from(value, (x) => (Number.isFinite(x) ? x : null));
  return value;
}
