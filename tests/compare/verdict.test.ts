import { describe, expect, test } from "vitest";
import { type Evidence, verdictOf } from "../../src/compare/verdict.js";

const evidence: Evidence = { delta: 0.005, halfWidth: 0.001, floor: 0.002, comparable: true, checked: true, settled: true };

describe("verdict of a difference", () => {
  test.each<[Partial<Evidence>, string, string]>([
    [{}, "resolved", "larger than half-width and floor together"],
    [{ delta: -0.005 }, "resolved", "larger than half-width and floor together"],
    [{ floor: null }, "direction-only", "larger than its half-width, but the spread caused by the mesh alone was not measured"],
    [{ floor: 0.0049 }, "direction-only", "larger than its half-width, but not than that and the floor together"],
    [{ comparable: false }, "direction-only", "A and B are not set up alike"],
    [{ checked: false }, "direction-only", "whether A and B are set up alike is not known"],
    [{ settled: false }, "not-resolved", "a history has not settled"],
    [{ halfWidth: 0.005 }, "not-resolved", "smaller than its half-width"],
    [{ delta: 0, halfWidth: 0 }, "not-resolved", "smaller than its half-width"],
    [{ halfWidth: null }, "not-resolved", "no interval can be given"],
    [{ delta: Number.NaN }, "not-resolved", "no interval can be given"],
  ])("%j: %s, %s", (more, verdict, reason) => {
    expect(verdictOf({ ...evidence, ...more })).toEqual({ verdict, reason });
  });

  test("resolved asks for everything at once: without any one of them it is not given", () => {
    for (const delta of [0.0005, 0.005, -0.005])
      for (const halfWidth of [null, 0.001])
        for (const floor of [null, 0.002])
          for (const comparable of [true, false])
            for (const checked of [true, false])
              for (const settled of [true, false]) {
                const { verdict } = verdictOf({ delta, halfWidth, floor, comparable, checked, settled });
                const all = Math.abs(delta) > 0.0023 && halfWidth !== null && floor !== null && comparable && checked && settled;
                expect(verdict === "resolved").toBe(all);
              }
  });
});
