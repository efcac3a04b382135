import { describe, expect, it } from "vitest";
import { measures } from "../../../src/geometry/measures.js";
import { place, placementOf, vehicleAxes } from "../../../src/geometry/place.js";
import { surfaceMesh } from "../../../src/geometry/surface-mesh.js";
import type { TriangleSet } from "../../../src/geometry/triangle-set.js";
import { joinWheels } from "../../../src/geometry/vehicle/axles.js";
import { contactDepth, stanceOf } from "../../../src/geometry/vehicle/stance.js";
import { fitWheels } from "../../../src/geometry/vehicle/wheels.js";
import { car } from "../car.js";
import { bodyOf, box, cylinder, joined, moved, shifted, type Triangles } from "../shapes.js";

const axes = vehicleAxes({ travel: "-x", up: "+z" });

function stance(set: TriangleSet, more: { middle?: number; half?: boolean; axes?: typeof axes } = {}) {
  const mesh = surfaceMesh(set);
  const wheelParts = set.parts.flatMap(({ name }, k) => (/wheel|tyre|rim/.test(name) ? [k] : []));
  const fits = fitWheels(mesh, wheelParts, more.axes ?? axes).flatMap(({ fit }) => (fit === null ? [] : [fit]));
  const { bounds } = measures(mesh, set.partOf, 0).whole;
  return stanceOf(mesh, bounds, joinWheels(fits), more.axes ?? axes, {
    middle: more.middle ?? 0,
    half: more.half ?? false,
    depth: contactDepth,
    wheelParts,
  });
}

/** A wheel about y, of 256 corners, pressed flat at z = 0 where it would lie lower. */
const wheel = (radius: number, width: number, [x, y, z]: [number, number, number]): Triangles =>
  moved(cylinder(radius, width, 256), ([a, b, c]) => [x + a, y + c, Math.max(0, z - b)]);

const parts = (z: number) => ({
  body: box([-1, -0.8, 0.2], [3.5, 0.8, 1.2]),
  "wheel-front-left": wheel(0.3, 0.2, [0, -0.7, z]),
  "wheel-front-right": wheel(0.3, 0.2, [0, 0.7, z]),
  "wheel-rear-left": wheel(0.32, 0.24, [2.6, -0.65, z + 0.02]),
  "wheel-rear-right": wheel(0.32, 0.24, [2.6, 0.65, z + 0.02]),
});

describe("how a vehicle stands", () => {
  it("tells which wheel is where, tracks, overhangs and clearance of a box on four wheels", () => {
    const found = stance(bodyOf(parts(0.29)));
    expect(found.wheels.map(({ position }) => position)).toEqual(["front-left", "front-right", "rear-left", "rear-right"]);
    expect(found.track.front).toBeCloseTo(1.4, 6);
    expect(found.track.rear).toBeCloseTo(1.3, 6);
    expect(found.overhangs?.front).toBeCloseTo(1, 6);
    expect(found.overhangs?.rear).toBeCloseTo(0.9, 6);
    expect(found.clearance).toMatchObject({ part: 0, place: [-1, -0.800000011920929, 0.20000000298023224] });
    expect(found.clearance?.height).toBeCloseTo(0.2, 6);
    expect(found.ground).toBe(0);
  });

  it("contact patch of a tyre pressed flat by d: chord 2 sqrt(2 R h - h^2) at h = d + 1 mm, times its width", () => {
    const { wheels } = stance(bodyOf(parts(0.29)));
    for (const { contact, axleHeight, gap, radius } of wheels.slice(0, 2)) {
      const h = radius - axleHeight + contactDepth;
      const chord = 2 * Math.sqrt(2 * radius * h - h * h);
      expect(axleHeight).toBeCloseTo(0.29, 4);
      expect(gap).toBe(0);
      // 256 corners stand for the circle.
      expect(Math.abs((contact?.length ?? 0) / chord - 1)).toBeLessThan(5e-3);
      expect(contact?.width).toBeCloseTo(0.2, 6);
      expect(contact?.area).toBeCloseTo((contact?.length ?? 0) * (contact?.width ?? 0), 6);
    }
    expect(wheels[0].contact?.centre[0]).toBeCloseTo(0, 6);
    expect(wheels[0].contact?.centre[1]).toBeCloseTo(-0.7, 6);
  });

  it("a wheel that hovers has a gap and no patch", () => {
    const set = bodyOf({ ...parts(0.29), "wheel-rear-right": wheel(0.32, 0.24, [2.6, 0.65, 0.345]) });
    const hovering = stance(set).wheels[3];
    expect(hovering.position).toBe("rear-right");
    expect(hovering.gap).toBeCloseTo(0.025, 6);
    expect(hovering.contact).toBeNull();
  });

  it("wheels in one part, tyre and rim apart, a third axle, a half body, a motorcycle", () => {
    const { body, ...four } = parts(0.3);
    const all = stance(bodyOf({ body, wheels: joined(...Object.values(four)) }));
    expect(all.wheels.map(({ position }) => position).sort()).toEqual(["front-left", "front-right", "rear-left", "rear-right"]);
    expect(all.wheels.every(({ contact }) => contact !== null && contact.width < 0.3)).toBe(true);

    const rims = stance(bodyOf({ ...parts(0.3), "rim-front-left": wheel(0.2, 0.1, [0, -0.7, 0.3]) }));
    expect(rims.wheels).toHaveLength(4);
    expect(rims.wheels[0].parts).toEqual([1, 5]);

    const three = stance(
      bodyOf({
        ...parts(0.3),
        "wheel-mid-left": wheel(0.3, 0.2, [1.9, -0.7, 0.3]),
        "wheel-mid-right": wheel(0.3, 0.2, [1.9, 0.7, 0.3]),
      }),
    );
    expect(three.wheels.map(({ position }) => position)).toContain("axle-2-left");
    expect(three.overhangs?.rear).toBeCloseTo(0.9, 6);

    const right = stance(
      bodyOf({
        body: box([-1, 0, 0.2], [3.5, 0.8, 1.2]),
        "wheel-front": wheel(0.3, 0.2, [0, 0.7, 0.3]),
        "wheel-rear": wheel(0.3, 0.2, [2.6, 0.65, 0.3]),
      }),
      { half: true },
    );
    expect(right.track).toEqual({ front: expect.closeTo(1.4, 5), rear: expect.closeTo(1.3, 5) });
    expect(right.wheels.map(({ position }) => position)).toEqual(["front-right", "rear-right"]);

    const single = stance(
      bodyOf({
        body: box([-0.2, -0.2, 0.3], [1.6, 0.2, 1]),
        "wheel-front": wheel(0.3, 0.1, [0, 0, 0.3]),
        "wheel-rear": wheel(0.3, 0.1, [1.4, 0, 0.3]),
      }),
    );
    expect(single.wheels.map(({ position }) => position)).toEqual(["front", "rear"]);
    expect(single.track).toEqual({ front: null, rear: null });
  });

  it("is the same in any unit and axes of the file", () => {
    const { set, track } = car(20_000);
    const straight = stance(set);
    expect(straight.track.front).toBeCloseTo(track, 4);
    const turned = placementOf({ unit: "m", travel: "+y", up: "+z" }, [0, 0, 0]);
    // x rearward becomes -y of the file when it travels along +y.
    const set2 = place(set, {
      ...turned,
      rotation: [
        [0, 1, 0],
        [-1, 0, 0],
        [0, 0, 1],
      ],
    });
    const other = stance(set2, { axes: vehicleAxes({ travel: "+y", up: "+z" }) });
    expect(other.overhangs?.front).toBeCloseTo(straight.overhangs?.front ?? 0, 5);
    expect(other.wheels.map(({ position }) => position)).toEqual(straight.wheels.map(({ position }) => position));
    expect(other.clearance?.height).toBeCloseTo(straight.clearance?.height ?? 0, 6);
  });

  it("without wheels there is a clearance only", () => {
    const set = bodyOf({ body: shifted(box([0, 0, 0], [4, 1.6, 1.2]), [0, 0, 0.1]) });
    expect(stance(set)).toMatchObject({
      wheels: [],
      track: { front: null, rear: null },
      overhangs: null,
      clearance: { height: 0 },
    });
  });
});
