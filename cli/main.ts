#!/usr/bin/env node
import { exitCode } from "./context.js";
import { run } from "./program.js";

const stop = new AbortController();
let asked = 0;
for (const name of ["SIGINT", "SIGTERM"] as const) {
  process.on(name, () => {
    asked += 1;
    stop.abort(name);
    // A second request does not wait for anybody.
    if (asked > 1) process.exit(exitCode.interrupted);
  });
}

// `dragledger ledger ... | head` closes the pipe early: that is no error.
for (const stream of [process.stdout, process.stderr])
  stream.on("error", (error: NodeJS.ErrnoException) => {
    if (error.code === "EPIPE") process.exit(exitCode.done);
    throw error;
  });

process.exitCode = await run(process.argv.slice(2), {
  stdout: process.stdout,
  stderr: process.stderr,
  env: process.env,
  signal: stop.signal,
});
