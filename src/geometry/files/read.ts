import { createReadStream } from "node:fs";
import { type FileHandle, open, stat } from "node:fs/promises";
import { basename, resolve } from "node:path";
import { createGunzip } from "node:zlib";
import { inputProblem, Problem } from "../../errors.js";
import type { SurfaceFile, TriangleSet } from "../triangle-set.js";
import { ObjReader } from "./obj.js";
import { AsciiStlReader } from "./stl-ascii.js";
import { announcedTriangles, BinaryStlReader, binarySize, HEADER_BYTES, truncatedBinary } from "./stl-binary.js";
import { TextFault } from "./text.js";
import { TriangleBuilder } from "./triangle-builder.js";

/** Bytes dealt with at a time. */
const PIECE = 8 << 20;
/** Bytes looked at to tell the formats apart. */
const HEAD = 1024;
const GZIP_REMEDY = "Copy the file again, or unpack it with gzip -d to see what is wrong.";

/** Takes the bytes of one file piece by piece; `read` returns how many it has dealt with. */
interface PieceReader {
  read(bytes: Uint8Array, length: number, last: boolean): number;
  finish(size: number): void;
}

interface Opened {
  path: string;
  packed: boolean;
  /** Bytes of the unpacked file. For a packed one what its last four bytes say, which is a hint only. */
  size: number;
  head: Uint8Array;
}

/**
 * Reads a body from one or more files: binary STL, text STL with any number of named solids, OBJ with groups; each plain or
 * packed with gzip. Which of them a file is follows from its content, first of all from the size that a binary header implies,
 * so that a binary file whose header begins with "solid" is read as what it is.
 *
 * A part is a solid (text STL), a group (OBJ), or the file (binary STL and solids without a name, named by the file without its
 * ending). Parts of one name within a file are joined, with a finding; across files they are an error, because two variants of a
 * part in one body are almost always a mistake. Normals in the files are ignored: the order of the corners counts.
 *
 * Files are read in pieces of 8 MB (`piece`; any size that holds two lines gives the same result) into typed arrays. A count in a header is compared with the size of the file before room is
 * made for it.
 *
 * @throws Problem(input): `file-missing`, `file-unreadable`, `not-a-file`, `file-empty`, `not-a-surface`, `stl-truncated`,
 * `stl-syntax`, `stl-facet-corners`, `stl-number`, `coordinate-not-finite`, `obj-*`, `gzip-damaged`, `duplicate-part-name`,
 * `too-many-parts`, `surface-too-large`.
 */
export async function readSurfaces(paths: string[], { piece = PIECE }: { piece?: number } = {}): Promise<TriangleSet> {
  if (paths.length === 0)
    throw inputProblem({ code: "no-files", message: "No surface file was given.", remedy: "Name at least one STL or OBJ file." });
  const into = new TriangleBuilder();
  for (const path of paths) await readSurface(path, into, piece);
  return into.finish();
}

/**
 * The same for one file whose bytes are at hand, not packed. `name` is what the file is called: it tells OBJ from other text and names a
 * part without a name of its own.
 *
 * @throws Problem(input) as `readSurfaces`.
 */
export function parseSurface(name: string, bytes: Uint8Array): TriangleSet {
  if (bytes.length === 0) throw emptyFile(name, "The file is empty (0 bytes).");
  const opened: Opened = { path: name, packed: false, size: bytes.length, head: bytes.subarray(0, HEAD) };
  const format = formatOf(opened);
  const into = new TriangleBuilder();
  const file: SurfaceFile = { path: name, format, triangles: 0 };
  into.files.push(file);
  const reader = readerFor(opened, format, into);
  // The text readers want white space after the last word.
  const buffer = new Uint8Array(bytes.length + 1);
  buffer.set(bytes);
  buffer[bytes.length] = 10;
  try {
    reader.read(buffer, bytes.length, true);
    reader.finish(bytes.length);
  } catch (cause) {
    if (!(cause instanceof TextFault)) throw cause;
    const lines = new LineCount(cause.byte);
    lines.add(bytes);
    throw lines.problem(name, cause);
  }
  file.triangles = into.triangles;
  return into.finish();
}

const emptyFile = (path: string, message: string): Problem =>
  inputProblem({ code: "file-empty", message, where: path, remedy: "Export the surface again." });

async function readSurface(path: string, into: TriangleBuilder, piece: number): Promise<void> {
  if (into.files.some((file) => resolve(file.path) === resolve(path)))
    throw inputProblem({
      code: "file-twice",
      message: `${path} was given twice; its parts would lie upon each other.`,
      where: path,
      remedy: "Name each file once.",
    });
  const opened = await look(path);
  const format = formatOf(opened);
  const file: SurfaceFile = { path, format, triangles: 0 };
  into.files.push(file);
  const before = into.triangles;
  const reader = readerFor(opened, format, into);
  try {
    reader.finish(await feed(opened, reader, piece));
  } catch (cause) {
    throw cause instanceof TextFault ? await located(opened, cause) : cause;
  }
  file.triangles = into.triangles - before;
}

function readerFor(opened: Opened, format: SurfaceFile["format"], into: TriangleBuilder): PieceReader {
  const file = into.files.length - 1;
  const stem = stemOf(opened.path);
  if (format === "stl-binary") {
    if (!opened.packed) into.reserve(announcedTriangles(opened.head), true);
    return new BinaryStlReader(into, file, into.part(stem, file), opened.head);
  }
  return format === "stl-ascii"
    ? new AsciiStlReader(into, file, stem, opened.packed ? 0 : opened.size)
    : new ObjReader(into, file, stem);
}

const stemOf = (path: string): string =>
  basename(path)
    .replace(/\.gz$/i, "")
    .replace(/\.(stl|stla|stlb|ast|obj)$/i, "") || "part";

async function look(path: string): Promise<Opened> {
  const handle = await opening(path);
  try {
    const { size } = await handle.stat();
    if (size === 0) throw emptyFile(path, "The file is empty (0 bytes).");
    const raw = await bytesAt(handle, 0, HEAD);
    if (raw[0] !== 0x1f || raw[1] !== 0x8b) return { path, packed: false, size, head: raw };
    const tail = await bytesAt(handle, Math.max(0, size - 4), 4);
    const head = await unpackedHead(path);
    if (head.length === 0) throw emptyFile(path, "The packed file holds nothing (0 bytes).");
    return { path, packed: true, size: tail.length < 4 ? 0 : new DataView(tail.buffer, tail.byteOffset).getUint32(0, true), head };
  } finally {
    await handle.close();
  }
}

async function opening(path: string): Promise<FileHandle> {
  try {
    const status = await stat(path);
    if (!status.isFile())
      throw inputProblem({
        code: "not-a-file",
        message: status.isDirectory()
          ? "This is a folder; a surface file was expected."
          : "This is no plain file; a surface file was expected.",
        where: path,
        remedy: "Name the STL or OBJ files themselves.",
      });
    return await open(path, "r");
  } catch (cause) {
    if (cause instanceof Problem) throw cause;
    const { code } = cause as NodeJS.ErrnoException;
    if (code === "ENOENT" || code === "ENOTDIR")
      throw inputProblem({
        code: "file-missing",
        message: "There is no such file.",
        where: path,
        remedy: "Check the spelling and the folder.",
        cause,
      });
    throw inputProblem({
      code: "file-unreadable",
      message: `The file cannot be opened (${code ?? String(cause)}).`,
      where: path,
      remedy: "Check its permissions and its name.",
      cause,
    });
  }
}

async function bytesAt(handle: FileHandle, position: number, most: number): Promise<Uint8Array> {
  const bytes = new Uint8Array(most);
  const { bytesRead } = await handle.read(bytes, 0, most, position);
  return bytes.subarray(0, bytesRead);
}

async function unpackedHead(path: string): Promise<Uint8Array> {
  const head = new Uint8Array(HEAD);
  let filled = 0;
  for await (const piece of unpacked(path, 1 << 14)) {
    const part = piece.subarray(0, HEAD - filled);
    head.set(part, filled);
    filled += part.length;
    if (filled === HEAD) break;
  }
  return head.subarray(0, filled);
}

/** The unpacked bytes of a gzip file, piece by piece. */
async function* unpacked(path: string, chunkSize: number): AsyncGenerator<Uint8Array> {
  const source = createReadStream(path, { highWaterMark: chunkSize });
  const gunzip = source.pipe(createGunzip({ chunkSize }));
  source.on("error", (error) => gunzip.destroy(error));
  try {
    for await (const piece of gunzip) yield piece as Uint8Array;
  } catch (cause) {
    throw inputProblem({
      code: "gzip-damaged",
      message: `The file begins like a gzip file but cannot be unpacked (${(cause as Error).message}).`,
      where: path,
      remedy: GZIP_REMEDY,
      cause,
    });
  } finally {
    source.destroy();
    gunzip.destroy();
  }
}

function formatOf({ path, packed, size, head }: Opened): SurfaceFile["format"] {
  const text = looksLikeText(head);
  const start = Buffer.from(head).toString("latin1").replace(/^ï»¿/, "").trimStart();
  const announced = head.length >= HEADER_BYTES ? announcedTriangles(head) : 0;
  const sizeFits = head.length >= HEADER_BYTES && (packed ? binarySize(announced) % 2 ** 32 : binarySize(announced)) === size;
  if (sizeFits && !(text && packed)) return "stl-binary";
  if (text && /^solid(\s|$)/i.test(start)) return "stl-ascii";
  if (text && (/\.obj(\.gz)?$/i.test(path) || /^(#.*\s+)*(mtllib|v|vn|vt|o|g|f|s|usemtl)\s/.test(start))) return "obj";
  if (text)
    throw inputProblem({
      code: "not-a-surface",
      message: 'The file is text, but neither STL (which begins with "solid") nor OBJ.',
      where: path,
      remedy: "Export the surface as STL or OBJ.",
    });
  if (head.length < HEADER_BYTES)
    throw inputProblem({
      code: "not-a-surface",
      message: `The file has ${head.length} bytes; a binary STL has ${HEADER_BYTES} at least.`,
      where: path,
      remedy: "Export the surface again as STL or OBJ.",
    });
  if (announced === 0)
    throw inputProblem({
      code: "not-a-surface",
      message: `The header announces 0 triangles, yet the file has ${size} bytes; it is no binary STL.`,
      where: path,
      remedy: "Export the surface as STL or OBJ.",
    });
  if (!packed && size < binarySize(announced)) throw truncatedBinary(path, announced, size);
  return "stl-binary";
}

/** Whether no byte is a control character that text does not have, and most are ASCII: names may be in any of the old alphabets. */
function looksLikeText(head: Uint8Array): boolean {
  let foreign = 0;
  for (const byte of head) {
    if (byte < 9 || (byte > 13 && byte < 32 && byte !== 27) || byte === 127) return false;
    if (byte > 127) foreign++;
  }
  return foreign <= 0.3 * head.length;
}

/** Gives the whole file to `reader`; returns its unpacked size. */
async function feed(opened: Opened, reader: PieceReader, piece: number): Promise<number> {
  // One byte more than is ever filled: the text readers want white space after the last word.
  let buffer = new Uint8Array(Math.min(piece, opened.packed ? 1 << 16 : opened.size) + 1);
  let kept = 0;
  let total = 0;
  const deal = (length: number, last: boolean): void => {
    if (last) buffer[length] = 10;
    const used = reader.read(buffer, length, last);
    kept = length - used;
    if (kept > 0 && used > 0) buffer.copyWithin(0, used, length);
    // Nothing but a file without any line or blank for megabytes keeps a whole buffer waiting.
    if (!last && kept > piece / 2)
      throw new TextFault(
        "not-a-surface",
        "The file has megabytes without a line end or a facet; it is neither STL nor OBJ.",
        "Export the surface again as STL or OBJ.",
        total,
      );
  };
  if (opened.packed) {
    for await (const bytes of unpacked(opened.path, Math.min(Math.max(64, piece >> 3), 1 << 18))) {
      if (kept + bytes.length >= buffer.length) {
        const larger = new Uint8Array(Math.max(2 * buffer.length, kept + bytes.length + 1));
        larger.set(buffer.subarray(0, kept));
        buffer = larger;
      }
      buffer.set(bytes, kept);
      total += bytes.length;
      deal(kept + bytes.length, false);
    }
    deal(kept, true);
    return total;
  }
  const handle = await opening(opened.path);
  try {
    for (;;) {
      const { bytesRead } = await handle.read(buffer, kept, buffer.length - 1 - kept, total);
      total += bytesRead;
      deal(kept + bytesRead, bytesRead === 0);
      if (bytesRead === 0) return total;
    }
  } finally {
    await handle.close();
  }
}

/** The problem of a text fault: adds the file and the line, which is counted only now. */
async function located(opened: Opened, fault: TextFault): Promise<Problem> {
  const lines = new LineCount(fault.byte);
  const source = opened.packed ? unpacked(opened.path, 1 << 20) : createReadStream(opened.path, { highWaterMark: 1 << 20 });
  for await (const piece of source as AsyncIterable<Uint8Array>) if (lines.add(piece)) break;
  return lines.problem(opened.path, fault);
}

/** Counts the lines up to a byte. Line ends are line feeds, or carriage returns in old files that have nothing else. */
class LineCount {
  private line = 1;
  private returns = 1;

  constructor(private left: number) {}

  /** True when the byte has been reached. */
  add(piece: Uint8Array): boolean {
    const part = this.left < piece.length ? piece.subarray(0, this.left) : piece;
    for (let at = part.indexOf(10); at >= 0; at = part.indexOf(10, at + 1)) this.line++;
    for (let at = part.indexOf(13); this.line === 1 && at >= 0; at = part.indexOf(13, at + 1)) this.returns++;
    this.left -= part.length;
    return this.left <= 0;
  }

  problem(path: string, fault: TextFault): Problem {
    return inputProblem({
      code: fault.code,
      message: fault.message,
      where: `${path}, line ${this.line === 1 ? this.returns : this.line}, byte ${fault.byte}`,
      remedy: fault.remedy,
      cause: fault,
    });
  }
}
