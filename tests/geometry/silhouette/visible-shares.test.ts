import { describe, expect, it } from "vitest";
import { visibleShares } from "../../../src/geometry/silhouette/visible-shares.js";
import { surfaceMesh } from "../../../src/geometry/surface-mesh.js";
import { bodyOf, box, shifted, shuffled, sphere, type Triangles } from "../shapes.js";

const shares = (parts: Record<string, Triangles>, direction: [number, number, number] = [1, 0, 0]): number[] => {
  const set = bodyOf(parts);
  return [...visibleShares(surfaceMesh(set), set.parts.length, direction)];
};
const plate = box([0, 0, 0], [0.1, 1, 1]);

describe("visibleShares", () => {
  it("gives a hidden part nothing and the nearest part all", () => {
    expect(shares({ front: plate, behind: shifted(plate, [1, 0, 0]) })).toEqual([1, 0]);
    expect(shares({ front: plate, behind: shifted(plate, [1, 0, 0]) }, [-1, 0, 0])).toEqual([0, 1]);
  });

  it("divides what is half hidden", () => {
    const [near, far] = shares({ near: shifted(plate, [-1, 0.5, 0]), far: plate });
    expect(near).toBeCloseTo(2 / 3, 2);
    expect(near + far).toBeCloseTo(1, 12);
  });

  it("gives a disc before a square its area", () => {
    const [ball, wall] = shares({ ball: sphere(0.4, 60, [-2, 0.5, 0.5]), wall: plate });
    expect(Math.abs(ball - Math.PI * 0.16)).toBeLessThan(1e-3);
    expect(Math.abs(wall - (1 - Math.PI * 0.16))).toBeLessThan(1e-3);
  });

  it("lets the lower number win a tie, whatever the order of the triangles", () => {
    expect(shares({ a: plate, b: plate })).toEqual([1, 0]);
    const set = bodyOf({ b: shuffled(plate, 3), a: plate });
    expect([...visibleShares(surfaceMesh(set), 2, [1, 0, 0])]).toEqual([1, 0]);
  });

  it("leaves no seams between triangles, also at an angle", () => {
    // Any gap between the triangles of the ball would show the wall behind it.
    const [ball, wall] = shares(
      { ball: sphere(1, 40), wall: shifted(box([0, -0.5, -0.5], [0.1, 0.5, 0.5]), [5, 0, 0]) },
      [1, 0, 0],
    );
    expect([ball, wall]).toEqual([1, 0]);
    expect(shares({ ball: sphere(1, 40), speck: sphere(0.2, 6, [0.3, 0.4, 0.5]) }, [0.3, 0.4, 0.5])[1]).toBe(0);
  });

  it("has zeros where nothing has area", () => {
    expect(shares({ a: [], b: [] })).toEqual([0, 0]);
    expect(shares({ a: [0, 0, 0, 1, 0, 0, 2, 0, 0] })).toEqual([0]);
  });
});
