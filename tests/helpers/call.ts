import { Writable } from "node:stream";
import { run } from "../../cli/program.js";

export interface Called {
  code: number;
  stdout: string;
  stderr: string;
}

/** Calls the program in this process with an argument list, without a terminal. */
export async function call(...argv: string[]): Promise<Called> {
  const text = { stdout: "", stderr: "" };
  const stream = (name: "stdout" | "stderr") =>
    new Writable({
      write(chunk, _encoding, done) {
        text[name] += chunk;
        done();
      },
    });
  const code = await run(argv, {
    stdout: stream("stdout"),
    stderr: stream("stderr"),
    env: {},
    signal: new AbortController().signal,
  });
  return { code, ...text };
}
