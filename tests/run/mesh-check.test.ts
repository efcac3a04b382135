import { describe, expect, test } from "vitest";
import { judgeMesh } from "../../src/run/mesh-check.js";

const card = {
  parts: ["nose", "wing", "door", "glass", "sill", "skirt", "mirror"].map((name) => ({ name, patch: `body_${name}` })),
  body: {
    bounds: { min: [0, -0.9, 0] as [number, number, number], max: [4.2, 0.9, 1.4] as [number, number, number] },
    frontalArea: 2,
  },
  mesh: {
    domain: { min: [-12, -7, 0] as [number, number, number], max: [30, 7, 9] as [number, number, number] },
    baseCell: 0.8,
    divisions: [52, 17, 11] as [number, number, number],
    surfaceLevel: 4,
    boxes: [],
    predictedCells: 1000,
  },
};
const bounds = ["inlet", "outlet", "ground"].map((name) => ({ name, faces: 10 }));
const parts = card.parts.map(({ patch }) => ({ name: patch, faces: 5 }));

describe("judging a mesh by its patches", () => {
  test("all there: nothing to say", () => {
    expect(judgeMesh([...bounds, ...parts], 1000, card)).toEqual({ cells: 1000, trouble: null, remarks: [] });
  });

  test("a patch without faces is missing, whatever else is there", () => {
    const patches = [...bounds, ...parts.map((patch) => (patch.name === "body_wing" ? { ...patch, faces: 0 } : patch))];
    expect(judgeMesh(patches, 1000, card).trouble).toBe(
      "no faces in the mesh for part wing: smaller than the cells there, hidden inside another part, or outside the domain; use a finer mesh or leave it out",
    );
  });

  test("a part's name cannot write to the terminal", () => {
    const hostile = { ...card, parts: [...card.parts, { name: "wing\u001b[2J\n", patch: "body_other" }] };
    expect(judgeMesh([...bounds, ...parts], 1000, hostile).trouble).toMatch(/^no faces in the mesh for part wing\?\[2J\?: /);
  });

  test("many lost parts: five are named", () => {
    expect(judgeMesh([...bounds, parts[0]!], 1000, card).trouble).toBe(
      "no faces in the mesh for 6 parts wing, door, glass, sill, skirt and 1 more: smaller than the cells there, hidden inside another part, or outside the domain; use a finer mesh or leave them out",
    );
  });

  test("one bound missing is enough; neither bounds nor body is another cause", () => {
    expect(judgeMesh([...bounds.slice(1), ...parts], 1000, card).trouble).toMatch(
      /^the mesh has no faces on inlet: it is the inside of the body/,
    );
    expect(judgeMesh([], 0, card).trouble).toBe(
      "the mesh has no faces on inlet, outlet, ground and on no part of the body; prepare the case again",
    );
  });

  test.each([
    { cells: 1400, said: 0 },
    { cells: 1401, said: 1 },
    { cells: 600, said: 0 },
    { cells: 599, said: 1 },
    { cells: 0, said: 0 },
  ])("$cells cells of 1000 predicted: $said remarks", ({ cells, said }) => {
    expect(judgeMesh([...bounds, ...parts], cells, card).remarks).toHaveLength(said);
  });
});
