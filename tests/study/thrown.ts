import { Problem } from "../../src/errors.js";

/** What a call throws, as one object to compare; fails when it throws nothing or anything but a problem of the input. */
export async function thrown(
  call: () => unknown,
): Promise<{ code: string; message: string; where: string | null; remedy: string }> {
  try {
    await call();
  } catch (error) {
    if (!(error instanceof Problem) || error.kind !== "input") throw error;
    const { code, message, where, remedy } = error;
    return { code, message, where, remedy };
  }
  throw new Error("nothing was thrown");
}
