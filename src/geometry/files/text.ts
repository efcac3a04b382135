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
