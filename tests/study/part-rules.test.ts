import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { matchesPattern, requireMatches, rotatingParts, ruleFor } from "../../src/study/part-rules.js";
import { thrown } from "./thrown.js";

describe("patterns", () => {
  test.each([
    ["wheel-*", "wheel-fl", true],
    ["wheel-*", "wheel-", true],
    ["wheel-*", "Wheel-fl", false],
    ["wheel-*", "spare wheel-fl", false],
    ["*wheel*", "spare wheel-fl", true],
    ["*", "", true],
    ["", "", true],
    ["", "a", false],
    ["**", "abc", true],
    ["a*b*c", "a-b-b-c", true],
    ["a*b*c", "a-c-b", false],
    ["a.c", "abc", false],
    ["(a|b)+", "(a|b)+", true],
    ["a*", "a\nb", true],
    ["*-rad", "übergroß-rad", true],
  ])("%j on %j: %s", (pattern, name, expected) => {
    expect(matchesPattern(pattern, name)).toBe(expected);
  });

  test("agree with a regular expression made of the pattern", () => {
    const text = fc.string({ unit: fc.constantFrom("a", "b", "*", ".", "-"), maxLength: 12 });
    fc.assert(
      fc.property(text, text, (pattern, name) => {
        const reference = new RegExp(`^${pattern.replace(/[.*+?^${}()|[\]\\-]/g, (c) => (c === "*" ? ".*" : `\\${c}`))}$`, "s");
        expect(matchesPattern(pattern, name)).toBe(reference.test(name));
      }),
      { seed: 7, numRuns: 2000 },
    );
  });

  test("a pattern that would take a backtracking matcher for ever is answered", () => {
    expect(matchesPattern(`${"a*".repeat(100)}b`, "a".repeat(3000))).toBe(false);
  });
});

describe("rules", () => {
  const rules = [
    { name: "spare", match: "wheel-spare", rotating: false },
    { name: "wheels", match: "wheel-*", rotating: true },
    { name: "cover", match: "bed-cover", rotating: false },
  ];
  const parts = ["body", "wheel-fl", "wheel-fr", "wheel-spare"];

  test("the first that matches holds", () => {
    expect(ruleFor(rules, "wheel-spare")?.name).toBe("spare");
    expect(ruleFor(rules, "wheel-fl")?.name).toBe("wheels");
    expect(ruleFor(rules, "body")).toBeNull();
    expect(rotatingParts(rules, parts)).toEqual(["wheel-fl", "wheel-fr"]);
  });

  test("a rule may be about a part that only one variant has", () => {
    expect(() => requireMatches(rules, [...parts, "bed-cover"], "s.yaml")).not.toThrow();
    expect(() => requireMatches([], parts, "s.yaml")).not.toThrow();
  });

  test("a rule about no part at all is refused, and the parts are named", async () => {
    expect(await thrown(() => requireMatches(rules, [...parts, ...parts], "s.yaml"))).toEqual({
      code: "rule-without-part",
      message: `The pattern "bed-cover" of the rule 'cover' matches no part of any variant; the parts are: body, wheel-fl, wheel-fr, wheel-spare.`,
      where: "s.yaml (parts.cover.match)",
      remedy: "Correct the pattern (case counts, * stands for any run of characters), or remove the rule.",
    });
    const many = Array.from({ length: 40 }, (_, k) => `part\u001b[31m-${k}`);
    expect((await thrown(() => requireMatches(rules, many, "s.yaml"))).message).toMatch(/part\?\[31m-0, .* and 30 more\.$/);
  });
});
