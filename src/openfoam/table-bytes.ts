import { gunzipSync } from "node:zlib";
import { inputProblem } from "../errors.js";

/** A table or log of a day-long run has some hundred megabytes; more than this is a mistake or an attack. */
const mostBytes = 2 ** 31 - 1;

/**
 * The bytes of a text file of the solver, unpacked when they are gzip (found from their first two bytes, not from the name).
 *
 * Throws a Problem (input) for what cannot be a text of the solver: no bytes, NUL bytes, the pointer text of large-file storage,
 * damaged gzip.
 */
export function textBytes(bytes: Uint8Array, name: string): Uint8Array {
  let text = bytes;
  if (bytes[0] === 0x1f && bytes[1] === 0x8b) {
    try {
      text = gunzipSync(bytes, { maxOutputLength: mostBytes });
    } catch (cause) {
      throw inputProblem({
        code: "damaged-gzip",
        message: `the gzip data cannot be unpacked (${cause instanceof Error ? cause.message : String(cause)})`,
        where: name,
        remedy: "Copy the file again from where the solver ran.",
        cause,
      });
    }
  }
  if (text.length === 0) {
    throw inputProblem({
      code: "empty-file",
      message: "the file has no bytes: the run was stopped before its first row, or the disk was full",
      where: name,
      remedy: "Read the suffixed file beside it if there is one, or run the case again.",
    });
  }
  // Of a Buffer, because its search is many times quicker than that of a plain byte array.
  const nul = Buffer.from(text.buffer, text.byteOffset, text.length).indexOf(0);
  if (nul >= 0) {
    throw inputProblem({
      code: "nul-bytes",
      message: "the file holds NUL bytes where text is expected: a crash or a full disk damaged it, or it is no table",
      where: `${name}, byte ${nul}`,
      remedy: "Copy the file again from where the solver ran, or remove the damaged rows.",
    });
  }
  if (textLine(text, 0, Math.min(text.length, 48)).startsWith("version https://git-lfs.")) {
    throw inputProblem({
      code: "storage-pointer",
      message: "the file is a pointer of large-file storage, not the table itself",
      where: name,
      remedy: "Fetch the real file (git lfs pull) and read it again.",
    });
  }
  const marked = text[0] === 0xef && text[1] === 0xbb && text[2] === 0xbf;
  return marked ? text.subarray(3) : text;
}

/** Control characters other than tab and line ends: on a terminal they could move the cursor or change what was printed before. */
// biome-ignore lint/suspicious/noControlCharactersInRegex: they are what is looked for
const controls = /[\u0000-\u0008\u000b\u000c\u000e-\u001f\u007f-\u009f]/g;

/** Text from outside that is going to be shown: every control character is replaced by a question mark in a box. */
export const shownText = (text: string): string => text.replace(controls, "\ufffd");

/** The text of `bytes[from..to)`, fit to be shown. */
export const textLine = (bytes: Uint8Array, from: number, to: number): string =>
  shownText(Buffer.from(bytes.buffer, bytes.byteOffset + from, to - from).toString("utf8"));
