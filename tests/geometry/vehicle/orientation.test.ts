import { describe, expect, it } from "vitest";
import { measures } from "../../../src/geometry/measures.js";
import { placeDirection, placementOf } from "../../../src/geometry/place.js";
import { surfaceMesh } from "../../../src/geometry/surface-mesh.js";
import type { Orientation, SignedAxis } from "../../../src/geometry/survey.js";
import type { Vector3 } from "../../../src/geometry/vector.js";
import { mirrorOf } from "../../../src/geometry/vehicle/mirror.js";
import { guessAxes } from "../../../src/geometry/vehicle/orientation.js";
import { nameHints } from "../../../src/geometry/vehicle/part-words.js";
import { guessUnit } from "../../../src/geometry/vehicle/unit-guess.js";
import { car } from "../car.js";
import { bodyOf, box, cylinder, joined, moved, shifted, type Triangles, turned, turnedOver } from "../shapes.js";

const wheel = (x: number, y: number): Triangles => shifted(turned(cylinder(0.3, 0.2, 24), [1, 0, 0], Math.PI / 2), [x, y, 0.3]);

/** A plain van in case axes: 4.4 long, 1.8 wide, 1.9 high. */
const van: Record<string, Triangles> = {
  hood: box([0, -0.9, 0.2], [1, 0.9, 0.9]),
  cabin: box([1, -0.9, 0.2], [4.2, 0.9, 1.9]),
  tailgate: box([4.2, -0.9, 0.4], [4.4, 0.9, 1.8]),
};
const wheels: Record<string, Triangles> = {
  "wheel-a": wheel(0.8, -0.75),
  "wheel-b": wheel(0.8, 0.75),
  "wheel-c": wheel(3.5, -0.75),
  "wheel-d": wheel(3.5, 0.75),
};
const unnamed = (parts: Record<string, Triangles>): Record<string, Triangles> =>
  Object.fromEntries(Object.values(parts).map((shape, k) => [`p${k}`, shape]));

function guess(parts: Record<string, Triangles>, asked: Partial<Orientation> = {}, wheelNames = /^wheel/) {
  const set = bodyOf(parts);
  const mesh = surfaceMesh(set);
  const { whole, groups } = measures(mesh, set.partOf, set.parts.length);
  const names = set.parts.map((part) => part.name);
  return guessAxes(
    {
      bounds: whole.bounds,
      names,
      measures: groups,
      wheels: names.flatMap((name, k) => (wheelNames.test(name) ? [k] : [])),
      mirrored: (axis) => {
        const { kind, cut } = mirrorOf(mesh, whole.bounds, axis);
        return kind === "whole" ? "whole" : cut === "open" ? "cut" : "no";
      },
    },
    asked,
  );
}

/** The parts as drawn by someone who drives towards `travel` with `up` up. */
function drawn(parts: Record<string, Triangles>, travel: SignedAxis, up: SignedAxis): Record<string, Triangles> {
  const { rotation } = placementOf({ unit: "m", travel, up }, [0, 0, 0]);
  const back: [Vector3, Vector3, Vector3] = [0, 1, 2].map((k) => [rotation[0][k], rotation[1][k], rotation[2][k]]) as [
    Vector3,
    Vector3,
    Vector3,
  ];
  return Object.fromEntries(
    Object.entries(parts).map(([name, shape]) => [name, moved(shape, (point) => placeDirection(point, { rotation: back }))]),
  );
}

describe("guessAxes", () => {
  it("finds all 24 ways to draw a van with named ends and wheels, and is certain", () => {
    for (const travel of ["+x", "-x", "+y", "-y", "+z", "-z"] as const)
      for (const up of ["+x", "-x", "+y", "-y", "+z", "-z"] as const) {
        if (travel[1] === up[1]) continue;
        expect(guess(drawn({ ...van, ...wheels }, travel, up))).toMatchObject({ travel, up, certain: true, doubts: [] });
      }
  });

  it("says what speaks for it", () => {
    expect(guess({ ...van, ...wheels }).basis).toBe(
      `the body is longest along x; the parts' names put the nose at the low end of x ("hood" in front, "tailgate" behind); the wheels turn about y; the wheels are at the low end of z`,
    );
  });

  it("without names, takes x rearward and is not certain", () => {
    const found = guess({ ...unnamed(van), ...wheels });
    expect(found).toMatchObject({ travel: "-x", up: "+z", certain: false });
    expect(found.basis).toContain("no part's name tells front from rear");
  });

  it("without wheels, finds the sides by their likeness although the van is higher than wide", () => {
    const found = guess(drawn(van, "-z", "+y"));
    expect(found).toMatchObject({ travel: "-z", up: "+y", certain: false });
    expect(found.basis).toContain("the two sides are alike across x");
    expect(guess({ ...van, antenna: box([2, 0.5, 1.9], [2.01, 0.51, 2.2]) })).toMatchObject({ travel: "-x", up: "+z" });
  });

  it("knows half a van by its cut", () => {
    const open: Triangles = [];
    const half = halfCar();
    for (let at = 0; at < half.length; at += 9)
      if (![1, 4, 7].every((k) => half[at + k] === 0)) open.push(...half.slice(at, at + 9));
    const found = guess(drawn({ half: open }, "-z", "+y"));
    expect(found).toMatchObject({ travel: "-z", up: "+y", certain: false });
    expect(found.basis).toContain("the body is a half, cut across x");
  });

  it("takes what is asked for, guesses the rest, and doubts what the parts speak against", () => {
    expect(guess({ ...van, ...wheels }, { travel: "-x", up: "+z" })).toEqual({
      travel: "-x",
      up: "+z",
      basis: "given",
      certain: true,
      doubts: [],
    });
    const against = guess({ ...van, ...wheels }, { travel: "+x" });
    expect(against).toMatchObject({ travel: "+x", up: "+z", certain: true });
    expect(against.doubts).toEqual([
      `travel +x is given, but the parts' names put the nose at the low end of x ("hood" in front, "tailgate" behind)`,
    ]);
    expect(guess({ ...van, ...wheels }, { up: "-z" }).doubts).toEqual(["up -z is given, but the wheels are at the low end of z"]);
    expect(guess({ ...van, ...wheels }, { up: "+z" })).toMatchObject({ travel: "-x", up: "+z", doubts: [] });
    expect(guess({ ...van, ...wheels }, { travel: "-y" })).toMatchObject({ travel: "-y" });
  });

  it("finds something to say about a cube, a point and nothing", () => {
    for (const shape of [box([0, 0, 0], [1, 1, 1]), [1, 1, 1, 1, 1, 1, 1, 1, 1], []])
      expect(guess({ shape })).toMatchObject({ travel: "-x", up: "+z", certain: false });
  });
});

describe("guessUnit", () => {
  it.each<[number, string, boolean]>([
    [4.5, "m", true],
    [4500, "mm", true],
    [450, "cm", true],
    [177, "in", true],
    [14.8, "ft", true],
    [265, "cm", false],
    [1.044, "m", false],
    [1044, "mm", false],
    [50, "m", false],
    [0.01, "m", false],
    [0, "m", false],
  ])("%f long: %s, certain %s", (length, value, certain) => {
    expect(guessUnit(length)).toMatchObject({ value, certain });
  });

  it("gives its reason", () => {
    expect(guessUnit(4512.3).basis).toBe("the greatest extent, 4512, is the length of a road vehicle (2.5 to 7 m) in mm only");
    expect(guessUnit(265).basis).toBe("the greatest extent, 265, is the length of a road vehicle in cm and in in; cm was taken");
  });
});

describe("nameHints", () => {
  it.each([
    ["wheel-front-left", true, "front"],
    ["WHEEL_RR", true, "rear"],
    ["FrontWheelLeft", true, "front"],
    ["wheelFL", true, "front"],
    ["tyrefrontleft", true, "front"],
    ["tire rear", true, "rear"],
    ["rim1", true, null],
    ["rr-wh-tyre", true, "rear"],
    ["wheels", true, null],
    ["trim", false, null],
    ["entire", false, null],
    ["primer", false, null],
    ["spare-wheel", false, null],
    ["steering wheel", false, null],
    ["wheelhouse-fl", false, "front"],
    ["wheel-arch-rear", false, "rear"],
    ["hood", false, "front"],
    ["rear windscreen", false, "rear"],
    ["tailgate", false, "rear"],
    ["front-and-rear", false, null],
    ["body", false, null],
  ])("%s: wheel %s, end %s", (name, isWheel, end) => {
    expect(nameHints(name)).toEqual({ wheel: isWheel, end });
  });
});

/** The right half of a car-like body, its left side pressed flat into the cut as a lid. */
const halfCar = (): Triangles => moved([...car(3000).set.positions], ([x, y, z]) => [x, Math.max(y, 0), z]);

describe("mirrorOf", () => {
  const mirror = (shape: Triangles, axis = 1) => {
    const set = bodyOf({ shape });
    const mesh = surfaceMesh(set);
    return mirrorOf(mesh, measures(mesh, set.partOf, 1).whole.bounds, axis);
  };
  const whole = joined(van.hood, van.cabin);

  it("knows a whole body, also where the two sides are cut into triangles differently", () => {
    expect(mirror(whole)).toEqual({ kind: "whole", cut: null, lid: 0, plane: 0, deviation: 0 });
    const other = turnedOver(moved(whole, ([x, y, z]) => [x, -y, z]));
    expect(
      mirror(
        joined(
          shifted(box([0, 0, 0], [4, 0.8, 1]), [0, 0.1, 0]),
          other.slice(0, 0),
          shifted(box([0, 0, 0], [4, 0.8, 1]), [0, -0.9, 0]),
        ),
      ),
    ).toMatchObject({ kind: "whole", plane: 0 });
  });

  it("measures how far a body is from it", () => {
    const found = mirror(joined(whole, shifted(box([0, 0, 0], [0.2, 0.1, 0.1]), [2, 0.9, 1])));
    expect(found).toMatchObject({ kind: "none" });
    expect(found.plane).toBeCloseTo(0.05, 6);
    expect(found.deviation).toBeCloseTo(0.1, 6);
    // A box far out: the corner of the bonnet, mirrored, finds that box as the nearest.
    const far = mirror(joined(whole, shifted(box([0, 0, 0], [0.2, 0.2, 0.2]), [2, 3, 1])));
    expect(far.plane).toBeCloseTo(1.15, 6);
    expect(far.deviation).toBeCloseTo(Math.hypot(2, 0.8), 6);
  });

  it("knows a half by its open cut and by its lid", () => {
    const half = halfCar();
    expect(mirror(half)).toEqual({ kind: "half", cut: "lid", lid: expect.closeTo(5.39219, 4), plane: 0, deviation: 0 });
    const open: Triangles = [];
    for (let at = 0; at < half.length; at += 9)
      if (![1, 4, 7].every((k) => half[at + k] === 0)) open.push(...half.slice(at, at + 9));
    expect(open.length).toBeLessThan(half.length);
    expect(mirror(open)).toMatchObject({ kind: "half", cut: "open", plane: 0 });
    expect(mirror(shifted(turnedOver(moved(open, ([x, y, z]) => [x, -y, z])), [0, 5, 0]))).toMatchObject({
      kind: "half",
      cut: "open",
      plane: 5,
    });
  });

  it("does not take the flat side of a van with one mirror for a cut", () => {
    expect(mirror(joined(whole, box([1, 0.9, 1], [1.1, 1.1, 1.2]))).kind).toBe("none");
  });

  it("does not take a hole in one side for a cut", () => {
    const hole = joined(whole, shifted(box([0, 0, 0], [0.5, 0.5, 0.5]).slice(0, 90), [1, 0.4, 0.3]));
    expect(mirror(shifted(hole, [0, 0.01, 0])).kind).toBe("none");
  });
});
