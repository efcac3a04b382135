import { describe, expect, test } from "vitest";
import type { RunCard } from "../../src/case/run-card.js";
import { comparability } from "../../src/compare/comparability.js";
import type { Reference } from "../../src/ledger/ledger.js";
import { constant, record, reference, runCard, series } from "../ledger/records.js";

const whole = series("whole", constant(0.3), constant(0.1));
const of = (card: RunCard | null, more: Partial<Reference> = {}) =>
  record(whole, [], { card, reference: { ...reference, ...more } });
const plain = runCard();
const other = (more: Partial<RunCard>) => of(runCard({ variant: "other", ...more }));

describe("whether two cases can be compared", () => {
  test("two variants of one study: nothing to say", () => {
    expect(comparability(of(plain), other({}))).toEqual({ comparable: true, checked: true, findings: [] });
  });

  const { mesh, condition, study, hashes } = plain;
  test.each<[string, Partial<RunCard>, string]>([
    ["study", { study: { ...study, name: "lorry" } }, "the study: domain, grid and reference are anchored per study"],
    ["baseline", { study: { ...study, baseline: "tall" } }, "the baseline: domain, grid and reference are anchored to it"],
    ["domain", { mesh: { ...mesh, domain: { min: [-10, -5, 0], max: [20, 5, 9] } } }, "the domain: blockage and inlet differ"],
    ["base cell", { mesh: { ...mesh, baseCell: 1.01 } }, "the base cell: the grids differ everywhere"],
    ["divisions", { mesh: { ...mesh, divisions: [30, 10, 9] } }, "the divisions of the base grid: the grids differ everywhere"],
    ["level", { mesh: { ...mesh, surfaceLevel: 5 } }, "the surface level: the cells on the body differ"],
    ["boxes", { mesh: { ...mesh, boxes: [] } }, "the refinement boxes: the wake is resolved differently"],
    ["yaw", { condition: { ...condition, yaw: 3 } }, "the yaw angle: the flow differs"],
    [
      "ground",
      { condition: { ...condition, ground: "fixed" } },
      "the ground: a moving and a fixed ground differ by 3 to 4 % in drag",
    ],
    ["templates", { hashes: { ...hashes, templates: "bb" } }, "the templates: numerics or models may differ"],
  ])("another %s", (_, more, text) => {
    for (const [a, b] of [
      [of(plain), other(more)],
      [other(more), of(plain)],
    ]) {
      const { comparable, findings } = comparability(a, b);
      expect(comparable).toBe(false);
      expect(findings).toMatchObject([
        {
          code: "not-shared",
          severity: "error",
          message: `A and B do not share ${text}.`,
          remedy: "Prepare and run both as variants of one study.",
        },
      ]);
    }
  });

  test("plans that differ in what makes the mesh or the air are named; what follows from the shape is not", () => {
    const row = (key: string, value: number, unit = "") => ({ key, value, unit, reason: "", source: "" });
    const plan = (layers: number, level: number, blockage: number, cells: number) => [
      row("air.kinematicViscosity", 1.46e-5, "m2/s"),
      row("mesh.layers", layers),
      row("mesh.predictedCells", cells),
      row("domain.blockage", blockage),
      row("parts.hood.level", level),
      row("iterations.most", cells),
    ];
    expect(comparability(of(runCard({ plan: plan(3, 4, 0.01, 1) })), other({ plan: plan(3, 4, 0.02, 2) })).comparable).toBe(true);
    const { findings } = comparability(of(runCard({ plan: plan(3, 4, 0.01, 1) })), other({ plan: plan(0, 5, 0.01, 1) }));
    expect(findings.map(({ message }) => message)).toEqual([
      "A and B do not share mesh.layers (3 and 0), parts.hood.level (4 and 5): mesh, air or numerics differ.",
    ]);
    const warmer = plan(3, 4, 0.01, 1).map((each) => (each.key.startsWith("air") ? row(each.key, 1.55e-5, each.unit) : each));
    expect(comparability(of(runCard({ plan: plan(3, 4, 0.01, 1) })), other({ plan: warmer })).findings[0].message).toBe(
      "A and B do not share air.kinematicViscosity (0.0000146 m2/s and 0.0000155 m2/s): mesh, air or numerics differ.",
    );
    // A part of one variant only has no counterpart.
    expect(comparability(of(runCard({ plan: [] })), other({ plan: plan(3, 4, 0.01, 1) })).comparable).toBe(true);
    const modelled = (turbulence: string, relaxation: number) => ({
      plan: [
        row("flow.turbulence", turbulence, ""),
        row("iterations.relaxation", relaxation, ""),
        row("flow.k", 1 / relaxation, ""),
      ],
    });
    expect(comparability(of(runCard(modelled("k-omega-SST", 0.9))), other(modelled("k-omega-SST", 0.9))).comparable).toBe(true);
    expect(
      comparability(of(runCard(modelled("k-omega-SST", 0.9))), other(modelled("realizable-k-epsilon", 0.7))).findings[0].message,
    ).toBe(
      "A and B do not share flow.turbulence (k-omega-SST and realizable-k-epsilon), iterations.relaxation (0.9 and 0.7): mesh, air or numerics differ.",
    );
  });

  test.each<[Partial<Reference>, string, string]>([
    [
      { area: 2.2 },
      "warning",
      "The reference area of A is 2.1, of B 2.2: differences of coefficients mix shape and reference: compare CdA first.",
    ],
    [{ length: 3 }, "warning", "The reference length of A is 2.7, of B 3: moment coefficients stand on different lengths."],
    [{ wheelbase: 3 }, "warning", "The reference wheelbase of A is 2.7, of B 3: axle lifts stand on different wheelbases."],
    [
      { centre: [1, 0, 0] },
      "warning",
      "The reference centre of A is 0,0,0, of B 1,0,0: moments and axle lifts are about different points.",
    ],
    [{ speed: 40 }, "error", "The reference speed of A is 30, of B 40: forces and Reynolds number differ."],
    [{ density: 1.2 }, "error", "The reference density of A is 1.225, of B 1.2: forces in newtons are not of one air."],
    [
      { symmetryFactor: 2 },
      "error",
      "The reference symmetry factor of A is 1, of B 2: half and whole models differ by several counts on the same grid.",
    ],
  ])("another reference %j", (more, severity, message) => {
    const { comparable, findings } = comparability(of(plain), of(plain, more));
    expect(comparable).toBe(false);
    expect(findings).toMatchObject([{ code: "reference-differs", severity, message }]);
  });

  test("what one of them does not know cannot differ; rounding is no difference", () => {
    expect(comparability(of(plain), of(plain, { density: null, wheelbase: null })).comparable).toBe(true);
    expect(comparability(of(plain), of(plain, { area: 2.1 * (1 + 1e-12), centre: [1e-15, 0, 0] })).comparable).toBe(true);
  });

  test("without run cards it is said that grid and settings cannot be checked", () => {
    for (const [a, b, text] of [
      [null, null, "Neither case has a run card"],
      [plain, null, "B has no run card"],
      [null, plain, "A has no run card"],
    ] as const) {
      const { comparable, checked, findings } = comparability(of(a), of(b));
      expect([comparable, checked]).toEqual([true, false]);
      expect(findings).toMatchObject([{ code: "no-run-card", severity: "warning" }]);
      expect(findings[0].message).toBe(`${text}: whether domain, grid and settings are the same cannot be checked.`);
    }
  });
});
