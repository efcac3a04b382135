import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { finding } from "../../src/finding.js";
import type { Survey, Wheel } from "../../src/geometry/survey.js";
import { draftStudy } from "../../src/study/draft.js";
import { rotatingParts } from "../../src/study/part-rules.js";
import { parseStudy } from "../../src/study/read.js";

const wheel = (part: string): Wheel => ({ part, centre: [0, 0, 0.3], axis: [0, 1, 0], radius: 0.3, width: 0.2, fitError: 0 });

function survey(parts: string[], wheels: string[], more: Partial<Survey> = {}): Survey {
  const bounds = { min: [0, 0, 0] as [number, number, number], max: [4.512345, 1.8, 1.5] as [number, number, number] };
  return {
    files: [],
    parts: parts.map((name) => ({ name, patch: "p", triangles: 6, area: 1, bounds, frontalVisible: 1 })),
    triangles: 12,
    vertices: 8,
    bounds,
    extents: { length: 4.512345, width: 1.8, height: 1.5 },
    wettedArea: 1,
    volume: 1,
    centroid: [0, 0, 0],
    frontalArea: { value: 2.1, error: 0.001 },
    unit: { value: "mm", basis: "4512 long", certain: true },
    axes: { travel: "-x", up: "+z", basis: "wheels", certain: true },
    topology: { openEdges: 0, nonManifoldEdges: 0, flippedEdges: 0, degenerate: 0, duplicate: 0, shells: 1 },
    wheels: wheels.map(wheel),
    wheelbase: wheels.length > 1 ? 2.7 : null,
    symmetry: { kind: "whole", plane: 0, deviation: 0 },
    findings: [],
    verdict: "fit",
    ...more,
  };
}

const guesses = (text: string): string[] => text.split("\n").filter((line) => line.includes("# GUESS: "));

describe("a drafted study", () => {
  test("of a body with wheels, word for word", () => {
    const parts = ["body", "glass", "wheel-fl", "wheel-fr", "wheel-rl", "wheel-rr"];
    const text = draftStudy({
      name: "roadster",
      files: ["stl/body.stl", "stl/wheels 4.stl"],
      survey: survey(parts, parts.slice(2)),
    });
    expect(text).toBe(`# Written by dragledger from 2 files: 6 parts, 12 triangles,
# 4.512 x 1.8 x 1.5 m (length x width x height), frontal area 2.1 m2.
# What is marked GUESS was not given: confirm or correct it.

study: roadster
question: "Does the change pay in drag or lift, and where?"   # GUESS: say what this study is to answer
air: { temperature: 15 degC, pressure: 1013.25 hPa, humidity: 0 % }   # GUESS: standard air at sea level
speed: 108 km/h   # GUESS: a usual road speed; one or a list
ground: moving   # GUESS: as on the road; fixed for a tunnel with a standing floor
baseline: baseline
variants:
  baseline:
    files:
      - stl/body.stl
      - stl/wheels 4.stl
  # Add the changed body as a second variant, with the files that it is made of.
body:
  unit: mm
  travel: "-x"
  up: "+z"
  wheelbase: auto   # 2.7 m, from 4 wheels that were found
  reference-area: auto   # frontal area of the baseline, held for all variants
parts:
  wheels: { match: "wheel-*", rotating: true }   # GUESS: round parts at the ground: wheel-fl, wheel-fr, wheel-rl, wheel-rr
mesh:
  cells: 300 thousand   # GUESS: a first look on a laptop; raise it for the answer
  half: auto   # the body is symmetric: auto computes one half
  # From here on: what is taken when nothing is said.
  y-plus: 50
  layers: 3
solver: { turbulence: k-omega-SST, mode: steady, start: ladder, most-iterations: 3000 }
stop: { drag: 1 count, lift: 3 counts, confidence: 95 % }   # half-widths; 1 count = 0.001
`);
    expect(parseStudy(text, "/s/roadster.yaml")).toMatchObject({
      name: "roadster",
      variants: [{ name: "baseline", files: ["/s/stl/body.stl", "/s/stl/wheels 4.stl"] }],
      body: { unit: "mm", travel: "-x", up: "+z", wheelbase: "auto", referenceArea: "auto" },
      parts: [{ name: "wheels", match: "wheel-*", rotating: true }],
    });
  });

  test("of a body without wheels says so, and nothing turns", () => {
    const text = draftStudy({ name: "bluff", files: ["bluff.stl"], survey: survey(["bluff"], []) });
    expect(text).toContain(
      "  wheelbase: none   # GUESS: no wheels were found, so moments use the overall length; give a length if there are axles\n",
    );
    expect(text).toContain("# No wheel parts were found: no part turns with the road.\n");
    expect(text).not.toContain("rotating");
    expect(text).toContain("# Written by dragledger from 1 file: 1 part, 12 triangles,\n");
    const study = parseStudy(text, "/s/bluff.yaml");
    expect(study.body.wheelbase).toBe("none");
    expect(study.parts).toEqual([]);
  });

  test("of wheels on one axle has no wheelbase, but turns them", () => {
    const text = draftStudy({ name: "a", files: ["a.stl"], survey: survey(["body", "wheel"], ["wheel"]) });
    expect(text).toContain(
      "# GUESS: 1 wheel part makes no two axles, so moments use the overall length; give a length if there are axles\n",
    );
    expect(parseStudy(text, "/s/a.yaml").parts).toEqual([{ name: "wheels", match: "wheel", rotating: true }]);
  });

  test("marks unit and axes that are not certain, with the reason on one line", () => {
    const more = {
      unit: { value: "m" as const, basis: "no unit\nfits: # \u001b[31m", certain: false },
      axes: { travel: "+y" as const, up: "-z" as const, basis: "longest", certain: false },
    };
    const sure = draftStudy({ name: "a", files: ["a.stl"], survey: survey(["body"], []) });
    const unsure = draftStudy({ name: "a", files: ["a.stl"], survey: survey(["body"], [], more) });
    expect(guesses(unsure).length).toBe(guesses(sure).length + 3);
    expect(unsure).toContain("  unit: m   # GUESS: no unit fits: #  [31m\n");
    expect(unsure).toContain('  travel: "+y"   # GUESS: longest\n');
    expect(parseStudy(unsure, "/s/a.yaml").body).toMatchObject({ unit: "m", travel: "+y", up: "-z" });
  });

  test("of a half body names the area of the whole, of a lopsided one asks for more cells, of an unfit one says so", () => {
    const half = draftStudy({
      name: "a",
      files: ["a.stl"],
      survey: survey(["body"], [], { symmetry: { kind: "half", plane: 0, deviation: 0 } }),
    });
    expect(half).toContain("frontal area 4.2 m2 (twice that of the half body).");
    const lopsided = draftStudy({
      name: "a",
      files: ["a.stl"],
      survey: survey(["body"], [], { symmetry: { kind: "none", plane: 0, deviation: 0.1 } }),
    });
    expect(parseStudy(lopsided, "/s/a.yaml").mesh.cells).toBe(600_000);
    expect(parseStudy(half, "/s/a.yaml").mesh.cells).toBe(300_000);
    const holes = draftStudy({
      name: "a",
      files: ["a.stl"],
      survey: survey(["body"], [], {
        verdict: "not-fit",
        findings: [finding("open-edges", "error", "x", "y"), finding("b", "note", "x", "y")],
      }),
    });
    expect(holes).toContain("# The body is not-fit: 1 error, 0 warnings; dragledger inspect says which.\n");
  });

  test("has a pattern for the wheels only where it takes no other part along", () => {
    const wheels = ["wheel-l", "wheel-r"];
    const text = draftStudy({ name: "a", files: ["a.stl"], survey: survey(["wheel-arch", ...wheels], wheels) });
    expect(text).toContain("  wheels: { match: [wheel-l, wheel-r], rotating: true }");
    expect(rotatingParts(parseStudy(text, "/s/a.yaml").parts, ["wheel-arch", ...wheels])).toEqual(wheels);
  });

  test("lists the wheels by name where what they share does not speak of wheels", () => {
    const wheels = ["front-wheel", "front-spare"];
    const text = draftStudy({ name: "a", files: ["a.stl"], survey: survey(["body", ...wheels], wheels) });
    expect(text).toContain("  wheels: { match: [front-wheel, front-spare], rotating: true }");
  });

  test("reads back whatever the names: files as given, and just the wheels turn", () => {
    const name = fc.oneof(
      fc.string({ unit: fc.constantFrom(..."wheel-rodyab*.:#'\"\\{}[],&!|>%@`~? \n\té字\u2028"), minLength: 1, maxLength: 12 }),
      fc.constantFrom(
        "wheel-1",
        "wheel-2",
        "wheel-arch",
        "true",
        "null",
        "~",
        "- a",
        "a: b",
        "a #b",
        "1e3",
        "*",
        "wheel*",
        "yes",
        "{}",
      ),
    );
    fc.assert(
      fc.property(
        fc.string({ maxLength: 80 }),
        fc.uniqueArray(name, { minLength: 1, maxLength: 4 }),
        fc.uniqueArray(name, { minLength: 1, maxLength: 8 }),
        fc.nat(8),
        (title, files, parts, count) => {
          const wheels = parts.slice(0, count);
          const text = draftStudy({ name: title, files: files.map((file) => `f/${file}`), survey: survey(parts, wheels) });
          const study = parseStudy(text, "/s/a.yaml");
          const turning = rotatingParts(study.parts, parts);
          expect(turning.filter((part) => !wheels.includes(part))).toEqual([]);
          for (const part of wheels) if (!part.includes("*")) expect(turning).toContain(part);
          expect(study.variants[0]!.files.length).toBe(files.length);
        },
      ),
      { seed: 71, numRuns: 60 },
    );
  });
});
