import { fileURLToPath } from "node:url";
import { describe, expect, it } from "vitest";
import type { Finding } from "../../../src/finding.js";
import { cellFitOf } from "../../../src/geometry/checks/cell-fit.js";
import { findOverlaps } from "../../../src/geometry/checks/coincident.js";
import { cutPlaneDeviation } from "../../../src/geometry/checks/cut-plane.js";
import { areaWords, firstOf, lengthWords, placesInTurn, shareWords } from "../../../src/geometry/checks/finding-words.js";
import {
  coincidentFindings,
  cutFindings,
  gapFindings,
  inwardFindings,
  overlapFindings,
  sheetFindings,
  sliverFindings,
  thicknessFindings,
} from "../../../src/geometry/checks/fit-findings.js";
import { findSlivers } from "../../../src/geometry/checks/slivers.js";
import { readSurfaces } from "../../../src/geometry/files/read.js";
import { surfaceMesh } from "../../../src/geometry/surface-mesh.js";
import { topologyOf } from "../../../src/geometry/topology.js";
import { car } from "../car.js";
import { bodyOf, box, joined, shifted, type Triangles, turnedOver } from "../shapes.js";

/** All findings of these checks on a body in millimetres. */
function findings(parts: Record<string, Triangles>, cell: number): Finding[] {
  const set = bodyOf(parts);
  return ofSet(set, cell, 0.001);
}

function ofSet(set: ReturnType<typeof bodyOf>, cell: number, scale: number): Finding[] {
  const mesh = surfaceMesh(set);
  const topology = topologyOf(mesh, set.parts.length);
  const { crossings, coincident } = findOverlaps(mesh, topology.shells.shellOf, set.parts.length);
  const fit = cellFitOf(mesh, topology.open.perPart, new Float64Array(set.parts.length).fill(cell));
  return [
    ...sliverFindings(findSlivers(mesh, set.parts.length, 1000), set.parts, scale),
    ...overlapFindings(crossings, set.parts, scale),
    ...coincidentFindings(coincident, set.parts, scale),
    ...sheetFindings(fit.open.sheets, set.parts, scale),
    ...inwardFindings(fit.open.inward, set.parts, scale),
    ...thicknessFindings(fit.thickness, set.parts, scale),
    ...gapFindings(fit.gaps, set.parts, scale),
  ];
}

const brief = (found: Finding[]) => found.map(({ code, severity, part, count }) => [code, severity, part, count]);
const block = box([0, 0, 0], [1000, 1000, 1000]);

describe("findings on fitness", () => {
  it("has none on a block, and no warning on a closed car", () => {
    expect(findings({ block }, 20)).toEqual([]);
    const found = ofSet(car(20_000).set, 0.02, 1);
    expect(found.filter(({ severity }) => severity !== "note")).toEqual([]);
    expect(found.find(({ code }) => code === "parts-overlap")?.message).toMatch(
      /^\d+ pairs of parts reach into each other \(pairs of triangles that cross\): body-floor and wheel-/,
    );
  });

  it("has no warning on the sample pickup at a two-hundredth of its length", async () => {
    const names = ["bed-cover", "bed", "cab", "hood", "mirror-left", "mirror-right", "tailgate", "underbody"];
    const wheels = ["front-left", "front-right", "rear-left", "rear-right"].map((name) => `wheel-${name}`);
    const folder = fileURLToPath(new URL("../../../sample-geometry/geometry/", import.meta.url));
    const set = await readSurfaces([...names, ...wheels].map((name) => `${folder}${name}.stl`));
    const found = ofSet(set, 5.2 / 200, 1);
    expect(found.filter(({ severity }) => severity !== "note")).toEqual([]);
    expect(found.map(({ code }) => code)).toEqual(["parts-overlap", "thin-part", "narrow-gap"]);
    expect(found[0].message).toContain("bed-cover and bed 400");
    expect(found[1].message).toContain("bed-cover");
    expect(found[2].message).toMatch(/cab and mirror-left .*, cab and mirror-right/);
  });

  it("names parts that reach into each other", () => {
    const found = findings({ fender: block, wheel: box([500, 200, 100], [1300, 800, 900]) }, 20);
    expect(brief(found)).toEqual([["parts-overlap", "note", null, found[0].count]]);
    expect(found[0].message).toBe(
      `1 pair of parts reaches into each other (pairs of triangles that cross): fender and wheel ${found[0].count}. The mesh keeps what is outside of both, so wetted area is less than the sum of the parts.`,
    );
    for (const [x] of found[0].places) expect(x).toBeCloseTo(1, 9);
    expect(brief(findings({ both: joined(block, box([500, 200, 100], [1300, 800, 900])) }, 20))).toEqual([
      ["shells-overlap", "note", "both", found[0].count],
    ]);
  });

  it("warns of a skin that is there twice, notes faces that touch", () => {
    const skin: Triangles = [0, 0, 1000, 800, 0, 1000, 0, 800, 1000];
    const [twice] = findings({ block, skin }, 20).filter(({ code }) => code === "coincident-faces");
    expect(twice).toMatchObject({
      severity: "warning",
      message:
        "0.32 m² of surface is there twice: triangles lie on others within 0.001 mm and face the same way (block and skin 0.32 m²). The mesh takes either part at random, so force moves between their entries in the ledger, and areas count twice.",
      remedy: "Remove one of the two skins, or set one back by more than a cell.",
    });
    const found = findings({ block, next: shifted(block, [1000, 500, 0]) }, 20);
    expect(brief(found)).toEqual([["touching-faces", "note", null, found[0].count]]);
    expect(found[0].message).toContain(
      "0.5 m² of surface lies on surface that faces the other way, within 0.002 mm (block and next 0.5 m²).",
    );
  });

  it("warns of a plate thinner than two cells, notes a little of it", () => {
    const plate = box([0, 0, 0], [1000, 1000, 30]);
    const [found, ...others] = findings({ plate, block: shifted(block, [0, 0, 500]) }, 20);
    expect(others).toEqual([]);
    expect(found).toMatchObject({ code: "thin-part", severity: "warning", part: "plate", count: 1 });
    expect(found.message).toMatch(
      /^1 part is thinner than 2 surface cells: plate \(94 % of its area, mostly 30 mm, least 30 mm, cell 20 mm\)\. The mesh can lose such a wall or tear holes into it\.$/,
    );
    // Between the diagonal of a cell and two cells.
    const [thick] = findings({ plate: box([0, 0, 0], [1000, 1000, 37]) }, 20);
    expect(thick).toMatchObject({ code: "thin-part", severity: "note", part: "plate" });
    expect(thick.message).toContain("The mesh rounds such a wall off, and can tear it below one cell.");
    const lug = box([1100, 400, 400], [1300, 600, 430]);
    expect(brief(findings({ block: joined(block, lug) }, 20))).toEqual([["thin-part", "note", "block", 1]]);
  });

  it("notes a narrow gap, and warns where it is much of a part", () => {
    const apart = findings({ block, door: box([0, 1030, 0], [1000, 2000, 1000]) }, 20);
    expect(apart).toHaveLength(1);
    expect(apart[0]).toMatchObject({ code: "narrow-gap", severity: "note", part: null });
    expect(apart[0].message).toMatch(
      /^1 gap is narrower than 2 surface cells: between block and door \(2 m², mostly 30 mm, least 30 mm, cell 20 mm\)\. The mesh closes/,
    );
    const cover = findings({ block, cover: box([0, 0, 1030], [1000, 1000, 1100]) }, 20);
    expect(brief(cover)).toEqual([["narrow-gap", "warning", null, 1]]);
  });

  it("notes sheets and slivers", () => {
    const sheet: Triangles = [0, 0, 3000, 1000, 0, 3000, 0, 1000, 3000];
    const [found] = findings({ block, sheet }, 20);
    expect(found).toMatchObject({ code: "sheet-part", severity: "note", part: "sheet" });
    expect(found.message).toBe(
      "1 part is a sheet, open and with air on both sides: sheet (3 open edges). The mesh closes around both sides, and forces of both go into the part's one entry; the thickness is lost.",
    );
    const bucket = turnedOver(shifted(block.slice(18), [0, 3000, 0]));
    const [inward] = findings({ block, bucket }, 20);
    expect(inward).toMatchObject({ code: "inward-part", severity: "warning", part: "bucket" });
    expect(inward.message).toBe(
      "1 open part faces inwards: bucket (4 open edges). The mesh does not mind, but volume is wrong, and thickness cannot be judged there.",
    );
    const needle: Triangles = [0, 0, 3000, 1000, 0, 3000, 500, 0.5, 3000];
    const [sliver] = findings({ block, needle }, 20);
    expect(sliver).toMatchObject({ code: "sliver-triangles", severity: "note", part: "needle", count: 1 });
    expect(sliver.message).toBe(
      "1 triangle is more than 1000 times as long as high (the worst 2000 times): such normals hang on the last digits of their corners, and the mesher snaps to and finds edges by normals. Parts: needle 1.",
    );
  });

  it("says how a cut strays from its plane, and what is beyond it", () => {
    const open = block.filter((_, k) => {
      const t = 9 * Math.floor(k / 9);
      return ![1, 4, 7].every((at) => block[t + at] === 0);
    });
    const bent = open.map((value, k) => (k % 3 === 1 && value === 0 && open[k - 1] === 0 && open[k + 1] === 0 ? -2.5 : value));
    const cut = cutPlaneDeviation(surfaceMesh(bodyOf({ bent })), 1, 0, 0.1);
    const found = cutFindings(cut, 0.001);
    expect(found.map(({ code, severity, message, places }) => ({ code, severity, message, places }))).toEqual([
      {
        code: "cut-not-planar",
        severity: "warning",
        message:
          "1 of the 4 vertices of the half body's open cut lies more than 0.1 mm off the symmetry plane, the farthest 2.5 mm. The mesh leaves a sliver of air or a step there.",
        places: [[0, -0.0025, 0]],
      },
      {
        code: "crosses-symmetry-plane",
        severity: "warning",
        message:
          "1 vertex of the half body lies beyond the symmetry plane, by up to 2.5 mm. What is beyond it is left out of the mesh, and areas and forces of these parts are not half of the whole.",
        places: [[0, -0.0025, 0]],
      },
    ]);
    expect(cutFindings(cutPlaneDeviation(surfaceMesh(bodyOf({ open })), 1, 0, 0.1), 0.001)).toEqual([]);
  });
});

describe("words", () => {
  it("gives lengths, areas and shares as people say them", () => {
    expect([0, 0.0000042, 0.0312, 0.1, 4.4712].map(lengthWords)).toEqual(["0 mm", "0.0042 mm", "31 mm", "0.1 m", "4.47 m"]);
    expect([2e-6, 3.21e-4, 0.5, 22.4].map(areaWords)).toEqual(["2 mm²", "3.2 cm²", "0.5 m²", "22 m²"]);
    expect([0, 0.004, 0.013, 0.996].map(shareWords)).toEqual(["0 %", "under 1 %", "1 %", "100 %"]);
    expect(firstOf(["a", "b", "c"], 2, "more parts")).toBe("a, b and 1 more parts");
  });

  it("takes places of several lists in turn", () => {
    expect(
      placesInTurn(
        [
          [
            [1, 0, 0],
            [2, 0, 0],
          ],
          [],
          [[3, 0, 0]],
        ],
        2,
      ),
    ).toEqual([
      [1, 0, 0],
      [3, 0, 0],
    ]);
    expect(placesInTurn([])).toEqual([]);
  });
});
