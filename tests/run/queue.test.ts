import { join } from "node:path";
import { describe, expect, test } from "vitest";
import { runCases } from "../../src/run/run-cases.js";
import { exists, listener, quick, starts } from "./listening.js";
import { standIn, standInCard, standInCase } from "./stand-in.js";

describe("the queue", () => {
  test("cases run side by side, no more at once than asked, outcomes in the order of the paths", async () => {
    const made = await standIn();
    made.behave({ STAND_IN_SOLVER: "wander" });
    const paths = await Promise.all([standInCase(), standInCase(), standInCase()]);
    let now = 0;
    let most = 0;
    const told = listener((event) => {
      if (event.event === "case-start") most = Math.max(most, ++now);
      if (event.event === "case-end") now -= 1;
    });
    const outcomes = await runCases([...paths, paths[0]!], quick(made, { cores: 2, atOnce: 2 }), told.tell);
    expect(outcomes.map(({ path }) => path)).toEqual([...paths, paths[0]]);
    expect(outcomes.every(({ state }) => state === "stopped-at-limit")).toBe(true);
    expect(most).toBe(2);
    expect(await starts(paths[0]!)).toHaveLength(1);
  });

  test("Ctrl-C leaves the cases that were not begun as they are", async () => {
    const made = await standIn();
    made.behave({ STAND_IN_SOLVER: "hang" });
    const paths = await Promise.all([standInCase(), standInCase()]);
    const abort = new AbortController();
    const told = listener((event) => event.event === "iteration" && event.iteration === 25 && abort.abort());
    const outcomes = await runCases(paths, quick(made, { signal: abort.signal }), told.tell);
    expect(outcomes.map(({ state, reason }) => [state, reason])).toEqual([
      ["interrupted", "interrupted at iteration 25; the next run goes on from 20"],
      ["interrupted", "interrupted before it was begun"],
    ]);
    expect(await exists(join(paths[1]!, "log.blockMesh"))).toBe(false);
  });

  test("cases whose meshers would not fit into memory together run one after another, with a remark", async () => {
    const made = await standIn();
    const big = { mesh: { ...standInCard.mesh, predictedCells: 1e12 } };
    made.behave({ STAND_IN_SOLVER: "wander" });
    const paths = await Promise.all([standInCase(big), standInCase(big)]);
    const told = listener();
    await runCases(paths, quick(made, { cores: 2 }), told.tell);
    expect(told.remarks()[0]).toMatch(/^1 instead of 2 cases run side by side: 2 would not fit into \d+\.\d GB of memory\.$/);
    expect(told.remarks()[1]).toMatch(
      /^The largest case will need about 1920000\.1 GB of memory, and there are \d+\.\d GB: it may be ended by the system\.$/,
    );
  });
});
