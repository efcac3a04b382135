import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { entryOf, outermostEntries, withEntries, writeIntervalFor } from "../../src/run/control-dict.js";

const text = `FoamFile { version 2.0; object controlDict; } // stopAt writeNow;
/* endTime 1; */
application simpleFoam;
"stopAt" x;
stopAt
    endTime;
endTime 400; libs (forces "lib;x");
functions { total { stopAt never; endTime 7; nested { writeInterval 3; } } }
writeInterval 50; #include "more"
`;

describe("entries of the outermost level", () => {
  test("comments, quoted text, lists and sub-dictionaries are stepped over", () => {
    expect(entryOf(text, "stopAt")).toBe("endTime");
    expect(entryOf(text, "endTime")).toBe("400");
    expect(entryOf(text, "writeInterval")).toBe("50");
    expect(entryOf(text, "object")).toBe(null);
    expect(entryOf(text, "version")).toBe(null);
  });

  test("setting touches the values only", () => {
    const edited = withEntries(text, { stopAt: "writeNow", endTime: "1000" });
    expect(edited).toBe(text.replace("stopAt\n    endTime;", "stopAt\n    writeNow;").replace("endTime 400;", "endTime 1000;"));
    expect(withEntries(edited, { stopAt: "endTime", endTime: "400" })).toBe(text);
  });

  test("a missing entry is added at the end", () => {
    expect(withEntries("a 1;\n\n", { startFrom: "latestTime" })).toBe("a 1;\nstartFrom latestTime;\n");
  });

  test("any order of entries: what was set is read back, everything else stays (seeded)", () => {
    const word = fc.stringMatching(/^[a-zA-Z][a-zA-Z0-9]{0,6}$/);
    const value = fc.stringMatching(/^[0-9a-z.]{1,5}$/);
    fc.assert(
      fc.property(
        fc.uniqueArray(fc.tuple(word, value), { selector: ([key]) => key, minLength: 1, maxLength: 8 }),
        fc.nat(),
        value,
        (pairs, pick, set) => {
          const whole = pairs.map(([key, given], at) => `${key} ${given};${at % 2 ? "\n" : " // note; }\n"}`).join("");
          const [key] = pairs[pick % pairs.length]!;
          const edited = withEntries(whole, { [key]: set });
          for (const [other, given] of pairs) expect(entryOf(edited, other)).toBe(other === key ? set : given);
          expect(outermostEntries(edited).size).toBe(pairs.length);
        },
      ),
      { seed: 20261, numRuns: 200 },
    );
  });
});

describe("write interval that hits the last iteration", () => {
  test.each([
    { most: 3000, prepared: 100, interval: 100 },
    { most: 30, prepared: 100, interval: 30 },
    { most: 250, prepared: 100, interval: 50 },
    { most: 134, prepared: 50, interval: 67 },
    { most: 47, prepared: 20, interval: 47 },
    { most: 127, prepared: 20, interval: 127 },
  ])("$most iterations, $prepared prepared: $interval", ({ most, prepared, interval }) => {
    expect(writeIntervalFor(most, prepared)).toBe(interval);
  });

  test("it always divides, and never writes more than about twice as often as prepared (seeded)", () => {
    fc.assert(
      fc.property(fc.integer({ min: 1, max: 5000 }), fc.integer({ min: 1, max: 500 }), (most, prepared) => {
        const interval = writeIntervalFor(most, prepared);
        expect(most % interval).toBe(0);
        expect(interval).toBeGreaterThanOrEqual(Math.min(most, prepared / 2));
      }),
      { seed: 20262 },
    );
  });
});
