import { readFileSync } from "node:fs";
import { join } from "node:path";
import { expect, test } from "vitest";
import { commands } from "../cli/commands.js";
import { studyKeys } from "../src/study/keys.js";
import { keyTable } from "./helpers/key-table.js";

const readme = readFileSync(join(import.meta.dirname, "../README.md"), "utf8");

test("the README's table of study keys is the program's own", () => {
  expect(readme).toContain(keyTable(studyKeys));
});

test("the README lists every command", () => {
  for (const { name } of commands) expect(readme).toMatch(new RegExp("^\\| `" + name + "\\b", "m"));
});
