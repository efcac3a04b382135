/** What is wrong in a text file, and at which byte; the reader of the file adds its name and the line. */
export class TextFault extends Error {
  constructor(
    readonly code: string,
    message: string,
    readonly remedy: string,
    /** Offset in the (unpacked) text. */
    readonly byte: number,
  ) {
    super(message);
  }
}

/** Longest run without white space that a text file may hold; nothing in a surface file comes near. */
const LONGEST_WORD = 1 << 16;

/**
 * How much of `bytes[0, length)` holds only complete lines; complete words where there is not a single line end. Zero: more is
 * needed.
 */
export function completeUntil(bytes: Uint8Array, length: number): number {
  for (let at = length - 1; at >= 0; at--) if (bytes[at] === 10 || bytes[at] === 13) return at + 1;
  for (let at = length - 1; at >= 0 && length - at < LONGEST_WORD; at--) if (bytes[at] <= 32) return at + 1;
  return 0;
}

/** Index after the word at `at`. */
export function wordEnd(bytes: Uint8Array, at: number, limit: number): number {
  let end = at;
  while (end < limit && bytes[end] > 32) end++;
  return end;
}

/** The word at `at` for a message: printable, at most 40 characters. */
export function shown(bytes: Uint8Array, at: number, limit: number): string {
  const end = wordEnd(bytes, at, Math.min(limit, at + 41));
  const text = Buffer.from(bytes.buffer, bytes.byteOffset + at, Math.min(end - at, 40))
    .toString("latin1")
    .replace(/[^\x21-\x7e]/g, "?");
  return end - at > 40 ? `${text}...` : text;
}
