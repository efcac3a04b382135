import { readFile, writeFile } from "node:fs/promises";
import { join } from "node:path";
import { describe, expect, test } from "vitest";
import { runCases } from "../../src/run/run-cases.js";
import { exists, listener, quick } from "./listening.js";
import { preparedControl, standIn, standInCase } from "./stand-in.js";

describe("how a case can fail", () => {
  const failing: { solver: string; state: string; reason: RegExp }[] = [
    {
      solver: "nan",
      state: "diverged",
      reason: /^coefficients are not numbers from iteration 30; last solved k, initial residual 0\.25; log: log\.simpleFoam$/,
    },
    {
      solver: "huge",
      state: "diverged",
      reason: /^drag coefficient 4\.2e\+5 at iteration 30; last solved k, initial residual 0\.25; log: log\.simpleFoam$/,
    },
    {
      solver: "trap",
      state: "diverged",
      reason: /^floating point trap after iteration 25; last solved k, initial residual 0\.25; log: log\.simpleFoam$/,
    },
    {
      solver: "bare-trap",
      state: "diverged",
      reason: /^floating point trap after iteration 25; last solved k, initial residual 0\.25; log: log\.simpleFoam$/,
    },
    {
      solver: "fatal",
      state: "failed",
      reason:
        /^simpleFoam ended with code 1; log: log\.simpleFoam; FOAM FATAL ERROR: Entry 'div\(phi,k\)' not found in dictionary "system\/fvSchemes\.divSchemes" \(system\/fvSchemes\.divSchemes at line 9\)$/,
    },
    {
      solver: "killed",
      state: "failed",
      reason: /^simpleFoam was ended by SIGKILL; log: log\.simpleFoam; ended from outside; the machine may have run out of memory$/,
    },
    {
      solver: "silent",
      state: "failed",
      reason: /^simpleFoam stopped without saying why \(its log has no line End\); log: log\.simpleFoam$/,
    },
    {
      solver: "zeros",
      state: "failed",
      reason:
        /^all coefficients are exactly 0: no patch of the mesh matches the names in the function object; log: log\.simpleFoam$/,
    },
    {
      solver: "no-table",
      state: "failed",
      reason: /^simpleFoam ended but wrote no history of coefficients; log: log\.simpleFoam$/,
    },
  ];
  test.each(failing)("solver: $solver", async ({ solver, state, reason }) => {
    const made = await standIn();
    const path = await standInCase();
    made.behave({ STAND_IN_SOLVER: solver });
    const told = listener();
    const [outcome] = await runCases([path], quick(made), told.tell);
    expect(outcome!.state).toBe(state);
    expect(outcome!.reason).toMatch(reason);
    expect(outcome!.settled).toBe(false);
    expect(told.events.at(-1)).toMatchObject({ event: "case-end", state, reason: outcome!.reason });
    expect(await readFile(join(path, "system/controlDict"), "utf8")).toBe(preparedControl);
  });

  const meshes: { title: string; behaviour: Record<string, string>; reason: string }[] = [
    {
      title: "fatal error",
      behaviour: { STAND_IN_MESHER: "fatal" },
      reason:
        "snappyHexMesh ended with code 1; log: log.snappyHexMesh; FOAM FATAL ERROR: Point (9 0 0) is not inside the mesh or on a face or edge. Bounding box of the mesh:(-1 -1 0) (3 1 2); the keep-point (locationInMesh) lies outside the domain",
    },
    {
      title: "keep-point inside the body",
      behaviour: { STAND_IN_PATCHES: "inside" },
      reason:
        "after snappyHexMesh the mesh has no faces on inlet, outlet, ground: it is the inside of the body, because the keep-point (locationInMesh) lies inside a part; check `body.unit`, travel and up, then prepare again; log: log.snappyHexMesh",
    },
    {
      title: "millimetres taken as metres",
      behaviour: { STAND_IN_PATCHES: "no-body" },
      reason:
        "after snappyHexMesh no part of the body is in the mesh: the body is outside the domain or too small for its cells (body 4.20 x 1.80 x 1.40 m, cells of 0.8 m before refinement); a wrong unit does this, check `body.unit` in the study; log: log.snappyHexMesh",
    },
    {
      title: "a lost part",
      behaviour: { STAND_IN_PATCHES: "lost" },
      reason:
        "after snappyHexMesh no faces in the mesh for part rear wing: smaller than the cells there, hidden inside another part, or outside the domain; use a finer mesh or leave it out; log: log.snappyHexMesh",
    },
  ];
  test.each(meshes)("mesh: $title", async ({ behaviour, reason }) => {
    const made = await standIn();
    const path = await standInCase();
    made.behave(behaviour);
    const [outcome] = await runCases([path], quick(made), () => undefined);
    expect(outcome).toMatchObject({ state: "failed", reason });
    expect(await exists(join(path, "starts"))).toBe(false);
    made.behave({ STAND_IN_MESHER: "", STAND_IN_PATCHES: "", STAND_IN_SOLVER: "wander" });
    const [again] = await runCases([path], quick(made), () => undefined);
    // A mesh with trouble is judged again, not taken for finished; only the mesher's own failure makes it anew.
    expect(again!.state).toBe(behaviour.STAND_IN_MESHER ? "stopped-at-limit" : "failed");
  });

  test("failed mesh checks, the cell limit and an odd cell count are remarks, not ends", async () => {
    const made = await standIn();
    const path = await standInCase();
    made.behave({ STAND_IN_CHECKS: "2", STAND_IN_MESHER: "limit", STAND_IN_CELLS: "1900", STAND_IN_SOLVER: "wander" });
    const told = listener();
    const [outcome] = await runCases([path], quick(made), told.tell);
    expect(outcome!.state).toBe("stopped-at-limit");
    expect(told.remarks()).toEqual([
      "The mesh has 1900 cells where 1000 were predicted: the inside of the body may be meshed too (a hole in a part), or thin parts take more cells.",
      "Refinement stopped at the limit of cells: the mesh is coarser than planned (log.snappyHexMesh). Raise maxGlobalCells.",
      "checkMesh: 2 checks of the mesh failed (log.checkMesh, lines with ***). The run goes on; look at the places before trusting small differences.",
    ]);
  });

  test("one failing case does not take the others with it", async () => {
    const made = await standIn();
    const good = await standInCase();
    const bad = await standInCase();
    await writeFile(
      join(bad, "dragledger.json"),
      JSON.stringify({
        ...JSON.parse(await readFile(join(bad, "dragledger.json"), "utf8")),
        parts: [{ name: "mirror", patch: "body_mirror" }],
      }),
    );
    made.behave({ STAND_IN_SOLVER: "wander" });
    const outcomes = await runCases([bad, good], quick(made), () => undefined);
    expect(outcomes.map(({ path, state }) => [path, state])).toEqual([
      [bad, "failed"],
      [good, "stopped-at-limit"],
    ]);
  });

  test("a defect in the caller's listener ends the solver before it is thrown on", async () => {
    const made = await standIn();
    const path = await standInCase();
    made.behave({ STAND_IN_SOLVER: "hang" });
    const call = runCases([path], quick(made), (event) => {
      if (event.event === "iteration") throw new Error("listener broke");
    });
    await expect(call).rejects.toThrow("listener broke");
    const state = JSON.parse(await readFile(join(path, "run-state.json"), "utf8"));
    expect(state.running).toBe(null);
    expect(state.steps.at(-1)).toMatchObject({ name: "simpleFoam", state: "interrupted", signal: "SIGTERM" });
    expect(await readFile(join(path, "system/controlDict"), "utf8")).toBe(preparedControl);
    expect(await exists(join(path, "run.lock"))).toBe(false);
  });
});
