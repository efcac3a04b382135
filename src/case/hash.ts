import { createHash } from "node:crypto";
import { createReadStream } from "node:fs";

export const sha256 = (content: string | Uint8Array): string => createHash("sha256").update(content).digest("hex");

/** Hash of a file, read in pieces. */
export async function sha256OfFile(path: string): Promise<string> {
  const hash = createHash("sha256");
  for await (const chunk of createReadStream(path)) hash.update(chunk as Buffer);
  return hash.digest("hex");
}
