import { createHash } from "node:crypto";
import { createReadStream } from "node:fs";
import { open, readdir, stat } from "node:fs/promises";
import { join, relative, sep } from "node:path";

export async function hashOfFile(path: string): Promise<string> {
  const hash = createHash("sha256");
  for await (const chunk of createReadStream(path, { highWaterMark: 1 << 20 })) hash.update(chunk as Uint8Array);
  return hash.digest("hex");
}

export const exists = async (path: string): Promise<boolean> => (await stat(path).catch(() => null)) !== null;

/** Names of the numeric folders of a case (its written times) below `folder`, increasing by value; 0 included. */
export async function timeFolders(folder: string): Promise<string[]> {
  const entries = await readdir(folder, { withFileTypes: true }).catch(() => []);
  const names = entries.filter((entry) => entry.isDirectory() && /^\d+(\.\d+)?([eE][-+]?\d+)?$/.test(entry.name));
  return names.map((entry) => entry.name).sort((a, b) => Number(a) - Number(b));
}

/** Names of the folders of a divided case (processor0, processor1, ...), by number. */
export async function processorFolders(casePath: string): Promise<string[]> {
  const entries = await readdir(casePath, { withFileTypes: true }).catch(() => []);
  const names = entries.filter((entry) => entry.isDirectory() && /^processor\d+$/.test(entry.name)).map((entry) => entry.name);
  return names.sort((a, b) => Number(a.slice(9)) - Number(b.slice(9)));
}

const lastLine = "// ****";

/**
 * Why the fields of one written time cannot be continued from, or null when they can. A field file is whole when it ends with the line
 * that OpenFOAM writes last; a compressed one is only checked for being there.
 */
export async function flawOfTime(folder: string, fields: string[]): Promise<string | null> {
  for (const field of fields) {
    const plain = join(folder, field);
    const size = (await stat(plain).catch(() => null))?.size;
    if (size === undefined) {
      const compressed = (await stat(`${plain}.gz`).catch(() => null))?.size;
      if (compressed === undefined) return `${field} is missing`;
      if (compressed === 0) return `${field}.gz is empty`;
      continue;
    }
    if (size === 0) return `${field} is empty`;
    if (!(await tailOf(plain, 200)).includes(lastLine)) return `${field} is cut off`;
  }
  return null;
}

/** The last bytes of a file as text (bytes as Latin letters). */
export async function tailOf(path: string, bytes: number): Promise<string> {
  const file = await open(path, "r");
  try {
    const { size } = await file.stat();
    const length = Math.min(size, bytes);
    const buffer = Buffer.alloc(length);
    await file.read(buffer, 0, length, size - length);
    return buffer.toString("latin1");
  } finally {
    await file.close();
  }
}

/** Files below a folder as paths relative to `casePath`, sorted, without hidden files and editors' copies; empty when it is missing. */
export async function filesBelow(casePath: string, folder: string): Promise<string[]> {
  const entries = await readdir(join(casePath, folder), { withFileTypes: true, recursive: true }).catch(() => []);
  return entries
    .filter((entry) => entry.isFile() && !entry.name.startsWith(".") && !/(~|\.part|\.orig|\.bak)$/.test(entry.name))
    .map((entry) =>
      relative(casePath, join(entry.parentPath ?? entry.path, entry.name))
        .split(sep)
        .join("/"),
    )
    .sort();
}
