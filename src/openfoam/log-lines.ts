import { shownText, textBytes } from "./table-bytes.js";

const newline = 10;
/** No line of the solver says more; longer ones (a progress bar, a damaged file) are cut. */
const longest = 4000;
/** Colour codes of terminals, which some programs write into their logs. */
// biome-ignore lint/suspicious/noControlCharactersInRegex: the escape character is what is looked for
const colours = /\u001b\[[0-9;?]*[A-Za-z]/g;

export interface LogLine {
  /** without colour codes, carriage returns, rank prefix and trailing blanks; its first 4000 bytes */
  text: string;
  /** from 1 */
  number: number;
}

/**
 * The lines of a log. A prefix such as `[3] ` that parallel runs put in front is taken off. gzip is accepted.
 *
 * Throws a Problem (input) for empty files and for bytes that are no text.
 */
export function* logLines(log: Uint8Array | string, name: string): Generator<LogLine> {
  const bytes = textBytes(typeof log === "string" ? new TextEncoder().encode(log) : log, name);
  const buffer = Buffer.from(bytes.buffer, bytes.byteOffset, bytes.length);
  let number = 0;
  for (let at = 0; at < buffer.length; ) {
    const found = buffer.indexOf(newline, at);
    const end = found < 0 ? buffer.length : found;
    number += 1;
    let text = buffer.toString("utf8", at, Math.min(end, at + longest));
    if (text.includes("\u001b")) text = text.replace(colours, "");
    // A carriage return overwrites what stood before it on the screen.
    text = text.trimEnd();
    const back = text.lastIndexOf("\r");
    if (back >= 0) text = text.slice(back + 1);
    if (text.startsWith("[")) text = text.replace(/^\[\d+\] ?/, "");
    yield { text: shownText(text), number };
    at = end + 1;
  }
}

const fatalStart = /-->\s*FOAM FATAL(?: IO)? ERROR/;
const fatalEnd = /FOAM (?:parallel run )?(?:exiting|aborting)/;

/** The text of a fatal error, gathered line by line. */
export class FatalText {
  private lines: string[] | null = null;
  /** First error of the log: message in one line; null while there is none. */
  message: string | null = null;
  /** Line in the log, and the file of the case that the solver names; null without. */
  line: number | null = null;
  file: string | null = null;

  /** @returns true while the line belongs to an error */
  take({ text, number }: LogLine): boolean {
    if (fatalStart.test(text)) {
      if (this.message === null && this.lines === null) {
        this.lines = [];
        this.line = number;
      }
      return true;
    }
    if (this.lines === null) return false;
    if (fatalEnd.test(text) || this.lines.length >= 40) {
      this.close();
      return true;
    }
    this.lines.push(text.trim());
    return true;
  }

  /** Ends the gathering at the end of the log. */
  close(): void {
    if (this.lines === null) return;
    const file = this.lines.find((line) => line.startsWith("file: "));
    this.file = file?.slice(6).replace(/\.$/, "") ?? null;
    const stop = this.lines.findIndex((line) => /^From\s|^file: /.test(line));
    // Ranks repeat each other's lines.
    const message = [...new Set(this.lines.slice(0, stop < 0 ? undefined : stop))].filter((line) => /\w/.test(line));
    this.message = message.join(" ").slice(0, 500) || "a fatal error without a text";
    this.lines = null;
  }
}
