import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { finalOnLevel, type LayerWish, layersFor, leastFinal, mostFinal } from "../../src/case/layers.js";
import { wallSpacing } from "../../src/flow/wall.js";

const wish: LayerWish = { yPlus: 150, layers: 3, speed: 30, length: 5.19, kinematicViscosity: 1.46e-5, surfaceCell: 0.051 };
const wallOf = ({ yPlus, speed, length, kinematicViscosity }: LayerWish) =>
  wallSpacing({ yPlus, speed, length, kinematicViscosity });

/** Height of the first layer as the mesher makes it from what it is told. */
const asMeshed = (plan: ReturnType<typeof layersFor>, surfaceCell: number) =>
  (plan.finalLayer.value * surfaceCell) / plan.layerExpansion.value ** (plan.layers.value - 1);

describe("layers", () => {
  test("the first cell is twice as high as the distance of its centre, and what the mesher is told gives that height", () => {
    const plan = layersFor(wish);
    expect(plan.firstCell.value).toBe(wallOf(wish).firstCell);
    expect(plan.firstCell.value).toBe(2 * wallOf(wish).centreDistance);
    expect(asMeshed(plan, wish.surfaceCell) / plan.firstCell.value).toBeCloseTo(1, 5);
    expect(plan.firstCell.reason).toContain("y+ 150");
  });

  test("whatever is asked (seed 12): the mesher's numbers agree, the last layer stays within its cell", () => {
    fc.assert(
      fc.property(
        fc.record({
          yPlus: fc.double({ min: 1, max: 500, noNaN: true }),
          layers: fc.integer({ min: 1, max: 12 }),
          speed: fc.double({ min: 5, max: 100, noNaN: true }),
          length: fc.double({ min: 0.3, max: 20, noNaN: true }),
          kinematicViscosity: fc.double({ min: 1.2e-5, max: 2e-5, noNaN: true }),
          surfaceCell: fc.double({ min: 1e-3, max: 0.2, noNaN: true }),
        }),
        (asked) => {
          const plan = layersFor(asked);
          expect(asMeshed(plan, asked.surfaceCell) / plan.firstCell.value).toBeCloseTo(1, 4);
          expect(plan.finalLayer.value).toBeGreaterThanOrEqual(leastFinal - 1e-9);
          expect(plan.finalLayer.value).toBeLessThanOrEqual(mostFinal + 1e-9);
          const free = plan.finalLayer.value > leastFinal * 1.0001 && plan.finalLayer.value < mostFinal * 0.9999;
          if (free) expect(plan.firstCell.value / wallOf(asked).firstCell).toBeCloseTo(1, 9);
        },
      ),
      { seed: 12, numRuns: 500 },
    );
  });

  test("says which y+ comes out where layers cannot reach the asked one", () => {
    const plan = layersFor({ ...wish, yPlus: 5 });
    expect(plan.firstCell.value).toBeGreaterThan(wallOf({ ...wish, yPlus: 5 }).firstCell);
    expect(plan.firstCell.reason).toMatch(/^y\+ 5 would need 0\.136 mm; 3 layers on cells of 51 mm allow y\+ \d+ \(/);
  });

  test("without layers the wall cell is a surface cell", () => {
    const plan = layersFor({ ...wish, layers: 0 });
    expect(plan.firstCell.value).toBe(wish.surfaceCell);
    expect(plan.firstCell.reason).toContain("without layers");
  });

  test("a part with smaller cells keeps the height of the wall cell", () => {
    expect(finalOnLevel(0.2, 1)).toBe(0.4);
    expect(finalOnLevel(0.2, 0)).toBe(0.2);
    expect(finalOnLevel(0.5, 1)).toBe(mostFinal);
  });
});
