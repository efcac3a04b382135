import { describe, expect, test } from "vitest";
import { listPlan } from "../../src/case/list-plan.js";
import type { CasePlan } from "../../src/case/plan.js";
import { planStudy } from "../../src/case/prepare.js";
import { box, moved, shifted, type Triangles, turnedOver } from "../geometry/shapes.js";
import { thrown } from "../study/thrown.js";
import { cart, cartParts, cartStudy, lid } from "./cart.js";

type Body = Record<string, Triangles>;
const mapped = (parts: Body, map: (shape: Triangles) => Triangles): Body =>
  Object.fromEntries(Object.entries(parts).map(([name, shape]) => [name, map(shape)]));
const plans = async (given: Parameters<typeof cartStudy>[0] = {}): Promise<CasePlan[]> =>
  (await planStudy(await cartStudy(given))).map(({ plan }) => plan);

/** What all cases of a study must have alike. */
const shared = ({ placement, half, reference, domain, mesh, boxes }: CasePlan) => ({
  placement,
  half,
  reference,
  domain: { ...domain, blockage: null },
  boxes,
  mesh: { ...mesh, predictedCells: null, predictedMemory: null, predictedMeshSeconds: null, predictedIterationSeconds: null },
});

describe("the plan of a study", () => {
  test("variants share placement, domain, grid, boxes, layers and reference; only their bodies differ", async () => {
    const [plain, lidded] = await plans();
    expect(plain!.variant).toBe("plain");
    expect(shared(lidded!)).toEqual(shared(plain!));
    expect(lidded!.mesh.predictedCells.value).not.toBe(plain!.mesh.predictedCells.value);
    const levels = (plan: CasePlan) => plan.parts.filter(({ name }) => name !== "lid").map(({ patch, level }) => [patch, level]);
    expect(levels(lidded!)).toEqual(levels(plain!));
  });

  test("a variant that is added changes nothing for those there were", async () => {
    const [before] = await plans({ variants: { plain: cartParts } });
    const [after] = await plans();
    expect(after).toEqual(before);
  });

  test("origin on the ground between the axles; reference is the baseline's frontal area and wheelbase", async () => {
    const [plan] = await plans();
    const [front, rear] = plan!.parts.filter(({ wheel }) => wheel !== null);
    expect(front!.wheel!.centre).toEqual([expect.closeTo(-cart.wheelbase / 2, 6), expect.closeTo(0.55, 6), expect.closeTo(0.3, 6)]);
    expect(rear!.wheel!.centre[0]).toBeCloseTo(cart.wheelbase / 2, 6);
    expect(front!.wheel!.omega).toBeCloseTo(-30 / cart.axleHeight, 5);
    expect(plan!.reference.length.value).toBeCloseTo(cart.wheelbase, 6);
    expect(plan!.reference.area.value).toBeCloseTo(cart.frontalArea, 4);
    expect(plan!.domain.min.value[2]).toBe(0);
  });

  test("the count predicted for the baseline is the study's budget", async () => {
    for (const cells of [5_000, 40_000, 300_000]) {
      const [plan] = await plans({ keys: { mesh: `{ cells: ${cells}, y-plus: 100 }` } });
      expect(Math.abs(plan!.mesh.predictedCells.value / cells - 1)).toBeLessThan(0.1);
    }
  });

  test("the domain's faces are multiples of the base cell, cells are cubes, the keep point is in free air off every face", async () => {
    for (const plan of await plans()) {
      const { min, max, baseCell, divisions, keepPoint } = plan.domain;
      for (const axis of [0, 1, 2]) {
        const edge = (max.value[axis]! - min.value[axis]!) / divisions.value[axis]!;
        expect(edge).toBeCloseTo(baseCell.value, 9);
        expect(min.value[axis]! / baseCell.value).toBeCloseTo(Math.round(min.value[axis]! / baseCell.value), 6);
        const finest = baseCell.value / 2 ** (plan.mesh.surfaceLevel.value + 1);
        const off = (keepPoint.value[axis]! / finest) % 1;
        expect(Math.min(Math.abs(off), 1 - Math.abs(off))).toBeGreaterThan(0.05);
        expect(keepPoint.value[axis]!).toBeGreaterThan(min.value[axis]!);
        expect(keepPoint.value[axis]!).toBeLessThan(max.value[axis]!);
      }
      expect(keepPoint.value[0]).toBeLessThan(-2);
      expect(plan.domain.blockage.value).toBeLessThanOrEqual(0.015);
    }
  });

  test("half a model has the parts of its side; a whole one all, twice the area in the domain, about twice the cells", async () => {
    const [half] = await plans();
    const [whole] = await plans({ keys: { mesh: "{ cells: 40 thousand, half: false, y-plus: 200, layers: 2 }" } });
    expect(half!.half.value).toBe(true);
    expect(half!.parts.map(({ name }) => name)).toEqual(["hull", "cab", "wheel-front-right", "wheel-rear-right"]);
    expect(half!.domain.min.value[1]).toBe(0);
    expect(whole!.parts).toHaveLength(6);
    expect(whole!.domain.min.value[1]).toBeCloseTo(-whole!.domain.max.value[1], 9);
    expect(whole!.reference.area.value).toBe(half!.reference.area.value);
    expect(Math.abs(whole!.domain.baseCell.value / half!.domain.baseCell.value - 1)).toBeLessThan(0.05);
  });

  test.each([
    ["right", 1],
    ["left", -1],
  ])("a body given as its %s half is computed on that side, with the area of the whole", async (_name, side) => {
    // One side of the cart, its cut open.
    const cut = (shape: Triangles): Triangles => {
      const kept: Triangles = [];
      for (let at = 0; at < shape.length; at += 9)
        if ([1, 4, 7].some((k) => side * shape[at + k]! > 1e-9))
          kept.push(...moved(shape.slice(at, at + 9), ([x, y, z]) => [x, side * Math.max(0, side * y), z]));
      return kept;
    };
    const parts = Object.fromEntries(Object.entries(mapped(cartParts, cut)).filter(([, shape]) => shape.length > 0));
    const [plan] = await plans({ variants: { half: parts } });
    expect(plan!.half.value).toBe(true);
    expect(plan!.domain[side === 1 ? "min" : "max"].value[1]).toBe(0);
    expect(plan!.reference.area.value).toBeCloseTo(cart.frontalArea, 3);
    expect(side * plan!.domain.keepPoint.value[1]).toBeGreaterThan(0);
  });

  test("one crooked variant makes all cases whole", async () => {
    const crooked = { ...cartParts, tank: box([2.2, 0.1, 0.95], [2.8, 0.5, 1.2]) };
    const [plain, other] = await plans({ variants: { plain: cartParts, crooked } });
    expect(plain!.half).toMatchObject({
      value: false,
      reason: expect.stringContaining("variant 'crooked' is not mirror symmetric"),
    });
    expect(other!.half.value).toBe(false);
  });

  test("file axes and unit do not matter", async () => {
    const [plan] = await plans();
    // Drives to +y, z down to up becomes x up, in millimetres.
    const turned = mapped(cartParts, (shape) => moved(shape, ([x, y, z]) => [1000 * z, -1000 * x, -1000 * y]));
    const [same] = await plans({
      variants: { plain: turned },
      keys: { body: "{ unit: mm, travel: +y, up: +x, wheelbase: auto, reference-area: auto }" },
    });
    expect(same!.domain.divisions.value).toEqual(plan!.domain.divisions.value);
    expect(same!.domain.baseCell.value).toBe(plan!.domain.baseCell.value);
    expect(same!.reference.area.value).toBeCloseTo(plan!.reference.area.value, 4);
    expect(same!.parts.map(({ patch }) => patch)).toEqual(plan!.parts.map(({ patch }) => patch));
    for (const [k, { wheel }] of same!.parts.entries()) if (wheel) expect(wheel.omega).toBeCloseTo(plan!.parts[k]!.wheel!.omega, 3);
  });

  test("a body whose triangles face inwards has the same grid", async () => {
    const [plan] = await plans({ variants: { plain: cartParts } });
    const [turnedIn] = await plans({ variants: { plain: mapped(cartParts, turnedOver) } });
    expect(Math.abs(turnedIn!.domain.baseCell.value / plan!.domain.baseCell.value - 1)).toBeLessThan(0.05);
  });

  test("layers follow the speed, the grid does not", async () => {
    const [slow, , fast] = await plans({ keys: { speed: "[20 m/s, 40 m/s]" } });
    expect(slow!.condition.name).toBe("20ms");
    expect(fast!.condition.name).toBe("40ms");
    expect(fast!.mesh.firstCell.value).toBeLessThan(slow!.mesh.firstCell.value);
    expect(fast!.domain.baseCell).toEqual(slow!.domain.baseCell);
    expect(fast!.parts[2]!.wheel!.omega).toBeCloseTo(2 * slow!.parts[2]!.wheel!.omega, 9);
  });

  test("given numbers stand, and every number has a reason and a source", async () => {
    const [plan] = await plans({ keys: { body: "{ wheelbase: 1.75 m, reference-area: 1.5 m2 }" } });
    expect(plan!.reference.area).toMatchObject({ value: 1.5, source: "study file" });
    expect(plan!.reference.length.value).toBe(1.75);
    const rows = listPlan(plan!);
    expect(rows.length).toBeGreaterThan(40);
    expect(new Set(rows.map(({ key }) => key)).size).toBe(rows.length);
    for (const { key, reason, source, value } of rows) {
      expect([key, reason.length > 3, source.length > 3]).toEqual([key, true, true]);
      for (const number of [value].flat())
        if (typeof number === "number") expect([key, Number.isFinite(number)]).toEqual([key, true]);
    }
  });

  test("a body without axles refers to its length", async () => {
    const { hull, cab } = cartParts;
    const [plan] = await plans({
      variants: { plain: { hull: hull!, cab: cab! } },
      keys: { body: "{ wheelbase: none }", parts: "{}" },
    });
    expect(plan!.reference.wheelbase).toBeNull();
    expect(plan!.reference.length.value).toBeCloseTo(3, 6);
    expect(plan!.domain.min.value[2]).toBe(0);
    expect(plan!.placement.shift).toEqual([expect.closeTo(-1.5, 6), expect.closeTo(0, 6), expect.closeTo(-0.2, 6)]);
  });
});

describe("what a study cannot be planned for", () => {
  const refused = async (given: Parameters<typeof cartStudy>[0]) => thrown(async () => planStudy(await cartStudy(given)));

  test("no axles to be found", async () => {
    const { hull } = cartParts;
    expect(await refused({ variants: { plain: { hull: hull! } }, keys: { parts: "{}" } })).toMatchObject({
      code: "no-wheelbase",
      message: "body.wheelbase is auto, but the baseline 'plain' has no front and rear axle that could be found.",
      remedy: "Name the wheels in a rule with rotating: true, give the wheelbase as a length, or write wheelbase: none.",
    });
  });

  test("a variant that would touch the walls of the domain", async () => {
    const long = mapped(cartParts, (shape) => moved(shape, ([x, y, z]) => [4.5 * x, y, z]));
    const found = await refused({ variants: { plain: cartParts, long } });
    expect(found.code).toBe("variant-too-large");
    expect(found.message).toMatch(
      /^Variant 'long' leaves [\d.]+ m behind it in the domain of the baseline, which has [\d.]+ m there: the walls would act on one and not on the other\.$/,
    );
  });

  test("a variant below the ground of the baseline", async () => {
    const low = mapped(cartParts, (shape) => shifted(shape, [0, 0, -0.4]));
    const found = await refused({ variants: { plain: cartParts, low } });
    expect(found).toMatchObject({
      code: "variant-below-ground",
      remedy: "Raise the body, or make the variant that reaches lowest the baseline.",
    });
    expect(found.message).toContain("Variant 'low' reaches 400 mm below the ground");
  });

  test("a variant whose mid-plane lies elsewhere", async () => {
    const beside = mapped(cartParts, (shape) => shifted(shape, [0, 0.1, 0]));
    expect(await refused({ variants: { plain: cartParts, beside } })).toMatchObject({
      code: "variant-off-centre",
      message: "The mid-plane of variant 'beside' lies 100 mm beside the baseline's: half models would be cut at different places.",
    });
  });

  test("half a model of a crooked body", async () => {
    const crooked = { ...cartParts, tank: box([2.2, 0.1, 0.95], [2.8, 0.5, 1.2]) };
    expect(
      await refused({ variants: { crooked }, keys: { mesh: "{ cells: 20 thousand, half: true, y-plus: 200, layers: 2 }" } }),
    ).toMatchObject({ code: "not-symmetric" });
  });

  test("a rule that matches nothing", async () => {
    expect(await refused({ keys: { parts: '{ wheels: { match: "tyre-*", rotating: true } }' } })).toMatchObject({
      code: "rule-without-part",
    });
  });

  test("findings: a variant that hovers, a part hidden in another, wheels that do not turn", async () => {
    const planned = await planStudy(
      await cartStudy({
        variants: {
          plain: cartParts,
          raised: mapped(cartParts, (shape) => shifted(shape, [0, 0, 0.01])),
          stuffed: { ...cartParts, engine: box([0.3, -0.2, 0.4], [0.9, 0.2, 0.8]), lid },
        },
        keys: { parts: "{}" },
      }),
    );
    const codes = planned.map(({ findings }) => findings.map(({ code, part }) => [code, part]));
    const locked = ["wheels-locked-on-moving-ground", null];
    expect(codes).toEqual([[locked], [["variant-hovers", null], locked], [["part-hidden", "engine"], locked]]);
  });
});
