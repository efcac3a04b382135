import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { turningWheels, wheelFindings } from "../../src/case/wheels.js";
import { placementOf } from "../../src/geometry/place.js";
import type { SignedAxis, Survey, Wheel } from "../../src/geometry/survey.js";
import type { Vector3 } from "../../src/geometry/vector.js";
import type { Condition, Study } from "../../src/study/study.js";
import { thrown } from "../study/thrown.js";

const rolling: Condition = { name: "30ms", speed: 30, yaw: 0, ground: "moving" };
const study = (rules: Study["parts"] = [{ name: "wheels", match: "wheel-*", rotating: true }]) =>
  ({ path: "cart.yaml", parts: rules }) as Study;
const survey = (wheels: Wheel[], parts = [...new Set(wheels.map(({ part }) => part))]) =>
  ({ wheels, parts: parts.map((name) => ({ name, patch: name })) }) as Survey;
const wheel = (part: string, centre: Vector3, more: Partial<Wheel> = {}): Wheel => ({
  part,
  centre,
  axis: [0, 1, 0],
  radius: 0.3,
  width: 0.2,
  fitError: 0,
  ...more,
});
const asIs = placementOf({ unit: "m", travel: "-x", up: "+z" }, [0, 0, 0]);

const cross = (a: Vector3, b: Vector3): Vector3 => [
  a[1] * b[2] - a[2] * b[1],
  a[2] * b[0] - a[0] * b[2],
  a[0] * b[1] - a[1] * b[0],
];
/** Velocity of the wall as the solver computes it: omega times axis × (point - centre). */
const surfaceVelocity = ({ centre, axis, omega }: { centre: Vector3; axis: Vector3; omega: number }, point: Vector3): Vector3 =>
  cross(axis, [point[0] - centre[0], point[1] - centre[1], point[2] - centre[2]]).map((value) => omega * value) as Vector3;

describe("turning wheels", () => {
  test("the tread meets the road at the road's speed, the crown moves forwards against the air", () => {
    const turning = turningWheels(study(), "plain", survey([wheel("wheel-fr", [-1.6, 0.8, 0.375])]), asIs, rolling).get(
      "wheel-fr",
    )!;
    expect(turning.omega).toBeCloseTo(-80, 12);
    expect(surfaceVelocity(turning, [-1.6, 0.8, 0])).toEqual([30, expect.closeTo(0, 12), expect.closeTo(0, 12)]);
    expect(surfaceVelocity(turning, [-1.6, 0.8, 0.75])[0]).toBeCloseTo(-30, 12);
    // The front of the tread goes down.
    expect(surfaceVelocity(turning, [-1.975, 0.8, 0.375])[2]).toBeLessThan(0);
  });

  test("for every way a file may be turned and every camber and toe (seed 5)", () => {
    const directions: SignedAxis[] = ["+x", "-x", "+y", "-y", "+z", "-z"];
    const frames = directions.flatMap((travel) =>
      directions.filter((up) => up[1] !== travel[1]).map((up) => placementOf({ unit: "m", travel, up }, [0.4, -0.2, 0.9])),
    );
    fc.assert(
      fc.property(
        fc.constantFrom(...frames),
        fc.double({ min: -0.1, max: 0.1, noNaN: true }),
        fc.double({ min: -0.1, max: 0.1, noNaN: true }),
        fc.double({ min: 0.1, max: 1, noNaN: true }),
        fc.double({ min: 1, max: 90, noNaN: true }),
        (placement, toe, camber, height, speed) => {
          const long = Math.hypot(toe, 1, camber);
          const inCase: Vector3 = [toe / long, 1 / long, camber / long];
          const back = (v: Vector3): Vector3 =>
            [0, 1, 2].map((k) => placement.rotation.reduce((sum, row, axis) => sum + row[k] * v[axis], 0)) as Vector3;
          const centre = back([1 - placement.shift[0], 0.7 - placement.shift[1], height - placement.shift[2]]);
          const turning = turningWheels(study(), "plain", survey([wheel("wheel-1", centre, { axis: back(inCase) })]), placement, {
            ...rolling,
            speed,
          }).get("wheel-1")!;
          const low: Vector3 = [turning.centre[0], turning.centre[1], 0];
          expect(surfaceVelocity(turning, low)[0] / speed).toBeCloseTo(1, 9);
          expect(turning.axis[1]).toBeGreaterThan(0);
        },
      ),
      { seed: 5, numRuns: 200 },
    );
  });

  test("a part of two wheels on one axle turns about the middle of it", () => {
    const pair = survey([wheel("wheel-front", [0.6, -0.55, 0.3]), wheel("wheel-front", [0.6, 0.55, 0.3])]);
    expect(turningWheels(study(), "plain", pair, asIs, rolling).get("wheel-front")).toMatchObject({
      centre: [0.6, 0, 0.3],
      omega: expect.closeTo(-100, 9),
    });
  });

  test("refuses a part of wheels on two axles", async () => {
    const all = survey([wheel("wheel-s", [0.6, 0.5, 0.3]), wheel("wheel-s", [2.4, 0.5, 0.3])]);
    expect(await thrown(() => turningWheels(study(), "plain", all, asIs, rolling))).toEqual({
      code: "wheels-on-two-axles",
      message: "Part 'wheel-s' holds 2 wheels that do not share an axle; a part can turn about one axle only.",
      where: "cart.yaml, variant plain",
      remedy: "Split it into one part per wheel or per axle, or take it out of the rotating rule.",
    });
  });

  test("refuses a part that is to turn and is not round", async () => {
    const square = survey([], ["wheel-square"]);
    expect(await thrown(() => turningWheels(study(), "plain", square, asIs, rolling))).toMatchObject({
      code: "wheel-not-round",
      message: "Part 'wheel-square' is to turn with the road, but nothing in it is round enough to have an axle.",
    });
  });

  test("refuses an axle below the ground", async () => {
    const low = survey([wheel("wheel-fr", [0, 0.5, -0.1])]);
    expect(await thrown(() => turningWheels(study(), "plain", low, asIs, rolling))).toMatchObject({ code: "wheel-below-ground" });
  });

  test("above a fixed ground wheels stand still, and the plan says so", () => {
    const fixed: Condition = { ...rolling, ground: "fixed" };
    const body = survey([wheel("wheel-fr", [0.6, 0.5, 0.3])]);
    expect(turningWheels(study(), "plain", body, asIs, fixed).size).toBe(0);
    expect(wheelFindings(study(), body, asIs, fixed).map(({ code, severity }) => [code, severity])).toEqual([
      ["wheels-stand-still", "note"],
    ]);
  });

  test("wheels that do not turn on a moving road, and wheels off the ground, are found", () => {
    const body = survey([wheel("wheel-fr", [0.6, 0.5, 0.35]), wheel("tyre-rr", [2.4, 0.5, 0.3])]);
    expect(wheelFindings(study(), body, asIs, rolling).map(({ code, severity, part }) => [code, severity, part])).toEqual([
      ["wheels-locked-on-moving-ground", "warning", "tyre-rr"],
      ["wheels-off-ground", "warning", null],
    ]);
  });
});
