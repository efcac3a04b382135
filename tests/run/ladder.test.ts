import { cp, mkdir, readdir, readFile, rename, rm, stat, writeFile } from "node:fs/promises";
import { join } from "node:path";
import { describe, expect, test } from "vitest";
import { runCases } from "../../src/run/run-cases.js";
import { exists, listener, quick, starts } from "./listening.js";
import { preparedControl, standIn, standInCard, standInCase } from "./stand-in.js";

const startVelocity = "internalField   uniform (30 0 0);\n// ***** //\n";

/** The case of the stand-in programs with a ladder of two rungs, as `prepare` writes it. */
async function ladderCase(folders = ["ladder/1", "ladder/2"]): Promise<string> {
  const ladder = folders.map((folder) => ({ folder, mesh: standInCard.mesh, mostIterations: 200 }));
  const path = await standInCase(folders.length > 0 ? { ladder } : {});
  await writeFile(join(path, "0", "U"), startVelocity);
  for (const folder of folders) {
    for (const part of ["0", "system"]) await cp(join(path, part), join(path, folder, part), { recursive: true });
  }
  const first = join(path, folders[0] ?? "", "first-order", "system");
  await mkdir(first, { recursive: true });
  await writeFile(join(first, "controlDict"), preparedControl.replace("endTime 200", "endTime 60"));
  return path;
}

const text = (...path: string[]): Promise<string> => readFile(join(...path), "utf8");

describe("a case with a ladder", () => {
  test("solves the rungs from the coarsest on, each from the one before, and starts from the last as its iteration 1", async () => {
    const made = await standIn();
    const path = await ladderCase();
    const told = listener();
    const [outcome] = await runCases([path], quick(made), told.tell);
    expect(outcome).toMatchObject({ path, state: "settled" });
    expect(await starts(join(path, "ladder/1/first-order"))).toEqual([`0 60 startTime ${join(path, "ladder/1/first-order")}`]);
    const one = join(path, "ladder/1");
    const two = join(path, "ladder/2");
    expect(await starts(one)).toEqual([`60 200 latestTime ${one}`]);
    expect(await starts(two)).toEqual([`1 200 latestTime ${two}`]);
    expect(await starts(path)).toEqual([`1 200 latestTime ${path}`]);
    const ended = told.events.flatMap((event) => (event.event === "step-end" ? [event.step] : []));
    const meshing = ["blockMesh", "surfaceFeatureExtract", "snappyHexMesh", "renumberMesh", "checkMesh"];
    const on = (rung: string, start: string) => [...meshing, start, "simpleFoam"].map((step) => `${rung} ${step}`);
    const expected = [
      ...meshing,
      ...on("ladder/1", "simpleFoam first order"),
      ...on("ladder/2", "mapFields"),
      "mapFields",
      "simpleFoam",
    ];
    expect(ended).toEqual(expected);
    expect(told.events[0]).toEqual({ event: "case-start", case: path, steps: expected });
    expect(told.events.every((event) => event.case === path)).toBe(true);
    const rungs = told.events.flatMap((event) => (event.event === "iteration" ? [event.rung ?? "own"] : []));
    expect([...new Set(rungs)]).toEqual(["ladder/1", "ladder/2", "own"]);
    // The rungs share the surface, and leave nothing of the mapping behind.
    expect((await stat(join(one, "constant/triSurface/body.stl"))).ino).toBe(
      (await stat(join(path, "constant/triSurface/body.stl"))).ino,
    );
    expect((await readdir(join(path, "ladder"))).sort()).toEqual(["1", "2"]);
    expect(await readdir(join(one, "first-order"))).toEqual(["starts", "system"]);
  });

  test("fields are mapped onto air at rest, and the start fields stay as they were prepared", async () => {
    const made = await standIn();
    const path = await ladderCase();
    // Stopped at once, so that iteration 1 is still there.
    made.behave({ STAND_IN_SOLVER: "calm" });
    await runCases([path], quick(made, { mostIterations: 15 }), () => undefined);
    const mapped = await text(path, "1", "U");
    expect(mapped).toMatch(/^mapped from .*ladder\/2 at \d+\ninternalField {3}uniform \(0 0 0\);\n/);
    expect(await exists(join(path, "1", "yPlus"))).toBe(false);
    expect(await text(path, "0", "U")).toBe(startVelocity);
  });

  test("what is done is not done again: not after the end, not after an interruption on a rung", async () => {
    const made = await standIn();
    const path = await ladderCase();
    made.behave({ STAND_IN_LADDER_2: "hang" });
    const abort = new AbortController();
    const told = listener((event) => event.event === "iteration" && event.iteration === 25 && abort.abort());
    const [stopped] = await runCases([path], quick(made, { signal: abort.signal }), told.tell);
    expect(stopped).toMatchObject({
      state: "interrupted",
      reason: "ladder/2: interrupted at iteration 25; the next run goes on from 20",
    });
    made.behave({ STAND_IN_LADDER_2: "" });
    const again = listener();
    const [ended] = await runCases([path], quick(made), again.tell);
    expect(ended!.state).toBe("settled");
    expect(await starts(join(path, "ladder/1"))).toHaveLength(1);
    expect((await starts(join(path, "ladder/2"))).map((line) => line.split(" ")[0])).toEqual(["1", "20"]);
    const started = again.events.flatMap((event) => (event.event === "step-start" ? [event.step] : []));
    expect(started).toEqual(["ladder/2 simpleFoam", "mapFields", "simpleFoam"]);
    const third = listener();
    expect(await runCases([path], quick(made), third.tell)).toEqual([ended]);
    expect(third.events.some((event) => event.event === "step-start")).toBe(false);
  });

  test("a set-up that changed is started on its ladder again, whose rungs are still good", async () => {
    const made = await standIn();
    const path = await ladderCase();
    await runCases([path], quick(made), () => undefined);
    await writeFile(join(path, "system/fvSchemes"), "divSchemes { other; }\n");
    const again = listener();
    await runCases([path], quick(made), again.tell);
    const started = again.events.flatMap((event) => (event.event === "step-start" ? [event.step] : []));
    expect(started).toEqual(["mapFields", "simpleFoam"]);
  });

  test("a new surface reaches the rungs, also when it came by renaming", async () => {
    const made = await standIn();
    const path = await ladderCase();
    await runCases([path], quick(made), () => undefined);
    const body = join(path, "constant/triSurface/body.stl");
    await writeFile(`${body}.part`, "solid nose of another shape\nendsolid nose\n");
    await rename(`${body}.part`, body);
    await runCases([path], quick(made), () => undefined);
    expect(await text(path, "ladder/1/constant/triSurface/body.stl")).toContain("another shape");
    expect((await text(path, "ladder/2/constant/polyMesh/made")).trim().split("\n")).toHaveLength(2);
  });
});

describe("a rung that fails", () => {
  test.each([
    [
      "LADDER_1",
      "ladder/1 diverged and is left out \\(floating point trap after iteration 85; .*\\); the next rung starts from uniform flow\\.",
      "0 200",
      "1 200",
    ],
    [
      "LADDER_2",
      "ladder/2 diverged and is left out \\(floating point trap after iteration \\d+; .*\\); the case starts from ladder/1\\.",
      "1 200",
      "1 200",
    ],
  ])(
    "%s diverges: it is left out, and the next starts from the one before it, or from uniform flow",
    async (rung, said, two, own) => {
      const made = await standIn();
      const path = await ladderCase();
      made.behave({ [`STAND_IN_${rung}`]: "trap" });
      const told = listener();
      const [outcome] = await runCases([path], quick(made), told.tell);
      expect(outcome!.state).toBe("settled");
      expect(told.remarks().join("\n")).toMatch(new RegExp(said));
      expect((await starts(join(path, "ladder/2")))[0]).toMatch(new RegExp(`^${two} `));
      expect((await starts(path))[0]).toMatch(new RegExp(`^${own} `));
    },
  );

  test("all rungs diverge: the case is started from uniform flow all the same", async () => {
    const made = await standIn();
    const path = await ladderCase();
    made.behave({ STAND_IN_LADDER_1: "trap", STAND_IN_LADDER_2: "trap" });
    const [outcome] = await runCases([path], quick(made), () => undefined);
    expect(outcome!.state).toBe("settled");
    expect((await starts(path))[0]).toMatch(/^0 200 /);
  });

  test("a mapping that fails is told, and the start is from uniform flow", async () => {
    const made = await standIn();
    const path = await ladderCase(["ladder/1"]);
    made.behave({ STAND_IN_MAPPER: "fatal" });
    const told = listener();
    const [outcome] = await runCases([path], quick(made), told.tell);
    expect(outcome!.state).toBe("settled");
    expect(told.remarks()).toContain(
      "mapFields ended with code 1; log: log.mapFields; FOAM FATAL ERROR: Incompatible meshes: different number of patches. The start is from uniform flow.",
    );
    expect((await starts(path))[0]).toMatch(/^0 200 /);
  });

  test("a first order that fails is told, and its rung starts in second order", async () => {
    const made = await standIn();
    const path = await ladderCase(["ladder/1"]);
    made.behave({ STAND_IN_FIRST: "trap" });
    const told = listener();
    const [outcome] = await runCases([path], quick(made), told.tell);
    expect(outcome!.state).toBe("settled");
    expect(told.remarks().join("\n")).toMatch(
      /ladder\/1: simpleFoam first order was ended by SIGFPE; .*\. The start is from uniform flow in second order\./,
    );
    expect((await starts(join(path, "ladder/1")))[0]).toMatch(/^0 200 /);
  });

  test("a rung without dictionaries is left out with the way to get them", async () => {
    const made = await standIn();
    const path = await ladderCase();
    await rm(join(path, "ladder/1"), { recursive: true });
    const told = listener();
    await runCases([path], quick(made), told.tell);
    expect(told.remarks()).toContain(
      "ladder/1 failed and is left out (its dictionaries are missing: prepare the study again); the next rung starts from uniform flow.",
    );
  });
});

describe("a cold start", () => {
  test("is in second order from the beginning, and with care in first order", async () => {
    const made = await standIn();
    const [plain, careful] = [await ladderCase([]), await ladderCase([])];

    await runCases([plain], quick(made), () => undefined);
    expect((await starts(plain))[0]).toMatch(/^0 200 /);
    expect(await exists(join(plain, "first-order/starts"))).toBe(false);
    await runCases([careful], quick(made, { careful: true }), () => undefined);
    expect((await starts(careful))[0]).toMatch(/^60 200 /);
  });

  test("that diverged is tried again with care, once", async () => {
    const made = await standIn();
    const path = await ladderCase([]);
    made.behave({ STAND_IN_SOLVER: "trap" });
    expect((await runCases([path], quick(made), () => undefined))[0]!.state).toBe("diverged");
    const told = listener();
    made.behave({ STAND_IN_SOLVER: "calm" });
    const [outcome] = await runCases([path], quick(made, { careful: true }), told.tell);
    expect(outcome!.state).toBe("settled");
    expect(told.remarks()).toContain(
      "The case diverged before; it is solved again from the beginning, the first iterations in first order.",
    );
    expect((await starts(path)).at(-1)).toMatch(/^60 200 /);
    const other = await ladderCase([]);
    made.behave({ STAND_IN_SOLVER: "trap", STAND_IN_FIRST: "calm" });
    const sent: string[] = [];
    for (const careful of [true, true]) {
      const [each] = await runCases([other], quick(made, { careful }), (event) => {
        if (event.event === "remark") sent.push(event.message);
      });
      expect(each!.state).toBe("diverged");
    }
    expect(sent.join(" ")).toMatch(/Nothing has changed since this case diverged/);
  });
});
