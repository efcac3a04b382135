import { describe, expect, it } from "vitest";
import type { Cavity } from "../../../src/geometry/air/cavities.js";
import { cavityFindings, keepPointFindings, leakFindings } from "../../../src/geometry/air/leak-findings.js";

describe("leakFindings", () => {
  it("says where, how wide and at which cell, in metres of a body in millimetres", () => {
    const [only, ...others] = leakFindings(
      {
        cell: 20,
        reached: true,
        holes: [
          { centre: [1200, -300, 650], width: 30.2, doubt: 1.25 },
          { centre: [0, 0, 0], width: 22 },
        ],
      },
      0.001,
    );
    expect(others).toEqual([]);
    expect(only).toMatchObject({
      code: "leak",
      severity: "warning",
      count: 2,
      places: [
        [1.2, -0.3, 0.65],
        [0, 0, 0],
      ],
    });
    expect(only.message).toBe(
      "Air gets into the inside at cells of 20 mm: the widest way in is 30 mm wide, to 1.3 mm, at (1.2, -0.3, 0.65) m; 2 ways in were found. The mesh would fill the inside, and its walls would count as the body's.",
    );
  });

  it("nothing of a closed body, something of rubble, of enlarged cells and of a way that was not found", () => {
    expect(leakFindings({ cell: 0.02, reached: false, holes: [] }, 1)).toEqual([]);
    expect(leakFindings(undefined, 1)).toEqual([]);
    expect(leakFindings(null, 1).map(({ code }) => code)).toEqual(["leak-not-tested"]);
    const enlarged = leakFindings({ cell: 0.0125, asked: 0.004, reached: false, holes: [] }, 1);
    expect(enlarged.map(({ code, severity }) => [code, severity])).toEqual([["leak-cell-enlarged", "note"]]);
    expect(enlarged[0].message).toContain("12.5 mm, not for 4 mm");
    expect(leakFindings({ cell: 0.02, reached: true, holes: [] }, 1)[0].message).toContain("could not be traced");
  });
});

describe("cavityFindings", () => {
  it("notes enclosed air, not the inside", () => {
    const pocket: Cavity = {
      kind: "air",
      volume: 0.004,
      doubt: 0.0001,
      place: [1, 2, 3],
      clearance: 0.1,
      bounds: { min: [0, 0, 0], max: [1, 1, 1] },
    };
    const inside = { count: 1, volume: 3 };
    const { kind, ...rest } = pocket;
    expect(cavityFindings({ cell: 0.02, inside, air: { count: 0, volume: 0 }, largest: [{ kind: "inside", ...rest }] }, 1)).toEqual(
      [],
    );
    const [note] = cavityFindings({ cell: 0.02, inside, air: { count: 1, volume: 0.004 }, largest: [pocket] }, 1);
    expect(note).toMatchObject({ code: "enclosed-air", severity: "note", count: 1, places: [[1, 2, 3]] });
    expect(note.message).toContain("1 space between the parts holds 4 litres of air that cells of 20 mm do not reach");
    expect(kind).toBe("air");
  });
});

describe("keepPointFindings", () => {
  it("names the first thing that is wrong", () => {
    const good = { outside: true, clearance: 1, cells: 50, offFaces: 0.3, proven: true };
    const codes = (proof: Partial<typeof good>): string[] =>
      keepPointFindings([1, 2, 3], { ...good, proven: false, ...proof }, 1).map(({ code, severity }) => `${severity} ${code}`);
    expect(keepPointFindings([1, 2, 3], good, 1)).toEqual([]);
    expect(codes({ outside: false })).toEqual(["error keep-point-not-outside"]);
    expect(codes({ cells: 1.2 })).toEqual(["error keep-point-near-surface"]);
    expect(codes({ offFaces: 0.01 })).toEqual(["error keep-point-on-face"]);
  });
});
