import { access, readFile } from "node:fs/promises";
import { join } from "node:path";
import { expect } from "vitest";
import { Problem } from "../../src/errors.js";
import type { RunEvent } from "../../src/run/events.js";
import type { RunOptions } from "../../src/run/run-cases.js";
import type { StandIn } from "./stand-in.js";

/** One core, looked at often, so that a test takes tenths of a second. */
export const quick = (made: StandIn, more: RunOptions = {}): RunOptions => ({
  solver: made.solver,
  cores: 1,
  pollMilliseconds: 10,
  testEvery: 10,
  minimumWindow: 40,
  graceMilliseconds: 300,
  ...more,
});

export interface Told {
  events: RunEvent[];
  tell: (event: RunEvent) => void;
  remarks: () => string[];
}

export function listener(on?: (event: RunEvent) => void): Told {
  const events: RunEvent[] = [];
  return {
    events,
    tell: (event) => {
      events.push(event);
      on?.(event);
    },
    remarks: () => events.flatMap((event) => (event.event === "remark" ? [event.message] : [])),
  };
}

export const exists = (path: string) =>
  access(path).then(
    () => true,
    () => false,
  );
export const starts = async (path: string) => (await readFile(join(path, "starts"), "utf8")).trim().split("\n");
export const problemOf = async (call: Promise<unknown>): Promise<Problem> => {
  const error = await call.then(
    () => null,
    (thrown: unknown) => thrown,
  );
  expect(error).toBeInstanceOf(Problem);
  return error as Problem;
};
