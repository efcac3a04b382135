import { describe, expect, test } from "vitest";
import { commands } from "../../cli/commands.js";
import { call } from "../helpers/call.js";

describe("help", () => {
  test("lists every command of the job and the exit codes", async () => {
    const { code, stdout, stderr } = await call("--help");
    expect(code).toBe(0);
    expect(stderr).toBe("");
    for (const name of [
      "inspect",
      "new",
      "prepare",
      "run",
      "history",
      "converged",
      "ledger",
      "compare",
      "report",
      "environment",
      "demo",
    ])
      expect(stdout).toMatch(new RegExp(`^  ${name}\\b`, "m"));
    expect(stdout).toContain(
      "Exit codes: 0 done; 1 a defect of the program; 2 wrong input or call; 3 done, but the answer is no; 4 a tool failed or is missing.",
    );
  });

  test("a call without arguments shows the same help", async () => {
    expect(await call()).toEqual(await call("--help"));
  });

  test.each(commands.map(({ name }) => name))(
    "'%s --help' has two examples of itself and the options every command takes",
    async (name) => {
      const { code, stdout } = await call(name, "--help");
      expect(code).toBe(0);
      expect(stdout.match(new RegExp(`^  \\$ dragledger ${name}`, "gm"))?.length).toBe(2);
      for (const option of ["--json", "--quiet", "--no-color", "--help"]) expect(stdout).toContain(option);
      expect(await call("help", name)).toEqual({ code, stdout, stderr: "" });
    },
  );
});

describe("a wrong call", () => {
  test("an unknown command is exit 2 and suggests the nearest", async () => {
    expect(await call("inspekt")).toEqual({
      code: 2,
      stdout: "",
      stderr: "error: Unknown command 'inspekt' (did you mean inspect?).\n  See 'dragledger --help'.\n",
    });
  });

  test("an unknown option is exit 2 and points at the command's help", async () => {
    expect(await call("inspect", "a.stl", "--unitt", "mm")).toEqual({
      code: 2,
      stdout: "",
      stderr: "error: Unknown option '--unitt' (did you mean --unit?).\n  See 'dragledger inspect --help'.\n",
    });
  });

  test("a missing argument is named", async () => {
    const { code, stderr } = await call("inspect");
    expect(code).toBe(2);
    expect(stderr).toBe("error: Missing required argument 'stl'.\n  See 'dragledger inspect --help'.\n");
  });

  test("with --json the error is one document on standard output", async () => {
    const { code, stdout, stderr } = await call("inspect", "nothing.stl", "--json");
    expect(code).toBe(2);
    expect(stderr).toBe("");
    expect(JSON.parse(stdout)).toMatchObject({ schema: "dragledger/error/1", code: "file-missing" });
  });
});
