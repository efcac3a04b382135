import writeFileAtomic from "write-file-atomic";
import { inputProblem } from "./errors.js";

const reasons: Record<string, string> = {
  ENOENT: "its folder does not exist",
  ENOTDIR: "its folder is a file",
  EISDIR: "there is a folder of that name",
  EACCES: "it may not be written there",
  EPERM: "it may not be written there",
  EROFS: "the disk can only be read",
  ENOSPC: "the disk is full",
  EDQUOT: "the disk quota is used up",
  ENAMETOOLONG: "the name is too long",
};

/**
 * Writes a result to a file of the user's choice; it appears under its name when it is whole, and what was there stays until then.
 *
 * @throws Problem(input) `cannot-write`, with the reason.
 */
export async function writeWhole(path: string, content: string | Uint8Array): Promise<void> {
  try {
    await writeFileAtomic(
      path,
      typeof content === "string" ? content : Buffer.from(content.buffer, content.byteOffset, content.length),
    );
  } catch (error) {
    const reason = reasons[(error as NodeJS.ErrnoException).code ?? ""];
    if (reason === undefined) throw error;
    throw inputProblem({
      code: "cannot-write",
      message: `${path} cannot be written: ${reason}.`,
      where: path,
      remedy: "Give another place, or make room and let it be written.",
    });
  }
}
