import fc from "fast-check";
import { describe, expect, it } from "vitest";
import { cleanPatchNames, partName, reservedPatchNames } from "../../../src/geometry/files/part-names.js";

describe("cleanPatchNames", () => {
  it.each([
    ["hood", "hood"],
    ["front bumper", "front-bumper"],
    ["  tailgate  ", "tailgate"],
    ["Tür_links", "Tur_links"],
    ["große Klappe", "grosse-Klappe"],
    ["42", "part-42"],
    ["_hidden", "part-hidden"],
    ["", "part"],
    ["车身", "part"],
    ["a/../../etc", "a-etc"],
    ['x;#calc "1"', "x-calc-1"],
    ["$HOME", "HOME"],
    ["inlet", "inlet-part"],
    ["GROUND", "GROUND-part"],
    ["defaultfaces", "defaultfaces-part"],
    ["procBoundary0to1", "part-procBoundary0to1"],
  ])("%j becomes %s", (name, patch) => {
    expect(cleanPatchNames([name])).toEqual([patch]);
  });

  it("keeps clean names and numbers the others, in whatever order they come", () => {
    expect(cleanPatchNames(["left door", "left-door", "left/door", "Left-Door"])).toEqual([
      "left-door-2",
      "left-door",
      "left-door-3",
      "Left-Door-4",
    ]);
  });

  it("cuts long names and still tells them apart", () => {
    const [a, b] = cleanPatchNames(["x".repeat(300), `${"x".repeat(300)}y`]);
    expect(a).toHaveLength(60);
    expect(b).toBe(`${"x".repeat(58)}-2`);
  });

  it("is safe, free of collisions and reserved words, and the same every time, for any names", () => {
    const name = fc.oneof(
      fc.string({ unit: "grapheme" }),
      fc.string({ unit: "binary", maxLength: 200 }),
      fc.constantFrom(...reservedPatchNames, "a", "a ", "a-2", "A"),
    );
    fc.assert(
      fc.property(fc.array(name, { maxLength: 30 }), (names) => {
        const patches = cleanPatchNames(names);
        expect(patches).toHaveLength(names.length);
        for (const patch of patches) {
          expect(patch).toMatch(/^[A-Za-z][A-Za-z0-9_-]{0,59}$/);
          expect(reservedPatchNames.map((word) => word.toLowerCase())).not.toContain(patch.toLowerCase());
        }
        expect(new Set(patches.map((patch) => patch.toLowerCase())).size).toBe(names.length);
        expect(cleanPatchNames(names)).toEqual(patches);
      }),
      { seed: 5, numRuns: 200 },
    );
  });
});

describe("partName", () => {
  it("reads UTF-8, else Latin-1", () => {
    expect(partName(Buffer.from(" Tür ", "utf8"))).toBe("Tür");
    expect(partName(Buffer.from("Tür", "latin1"))).toBe("Tür");
  });

  it("takes control characters and marks that turn the writing out", () => {
    expect(partName(Buffer.from("door\u001b[31m\u202egpj\u0007", "utf8"))).toBe("door [31m gpj");
  });
});
