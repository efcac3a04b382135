import Module, { type ManifoldToplevel } from "manifold-3d";
import { beforeAll, describe, expect, it } from "vitest";
import { silhouette } from "../../../src/geometry/silhouette/silhouette.js";
import { surfaceMesh } from "../../../src/geometry/surface-mesh.js";
import type { Vector3 } from "../../../src/geometry/vector.js";
import { car } from "../car.js";
import { bodyOf, box, joined, random, shifted, sphere, type Triangles, turned } from "../shapes.js";

// An independent reference: manifold-3d's project(), which unites projected polygons with the library Clipper2.
let library: ManifoldToplevel;
beforeAll(async () => {
  library = await Module();
  library.setup();
});

/** Area of the projection along z of the union of closed bodies, one at a time so that nothing has to be oriented or joined before. */
function projectedUnion(bodies: Triangles[]): number {
  const sections = bodies.map((body) => {
    const set = bodyOf({ body });
    const { vertices, corners } = surfaceMesh(set);
    const solid = library.Manifold.ofMesh(new library.Mesh({ numProp: 3, vertProperties: vertices, triVerts: corners }));
    expect(solid.isEmpty()).toBe(false);
    return solid.project();
  });
  return library.CrossSection.union(sections).area();
}

const z: Vector3 = [0, 0, 1];
const areaAlongZ = (bodies: Triangles[]): number => silhouette(surfaceMesh(bodyOf({ bodies: joined(...bodies) })), z).area;

describe("silhouette against manifold-3d", () => {
  it.each([1, 2, 3, 4, 5, 6, 7, 8])("random unions of boxes and spheres, seed %i", (seed) => {
    const next = random(seed);
    const bodies = Array.from({ length: 12 }, (): Triangles => {
      const size = (): number => 0.2 + next();
      const shape = next() < 0.5 ? box([0, 0, 0], [size(), size(), size()]) : sphere(size() / 2, 12);
      const axis: Vector3 = [next() - 0.5, next() - 0.5, next() - 0.5];
      const length = Math.hypot(...axis);
      const placed = shifted(turned(shape, axis.map((value) => value / length) as Vector3, 7 * next()), [
        4 * next(),
        2 * next(),
        next(),
      ]);
      // Both sides must see the same numbers.
      return placed.map(Math.fround);
    });
    const reference = projectedUnion(bodies);
    expect(Math.abs(areaAlongZ(bodies) / reference - 1)).toBeLessThan(1e-9);
  });

  it("a car-like body with wheels and mirrors, from above", () => {
    const { set } = car(6000, 3);
    const shells = [[0, 1, 2, 3, 4, 5, 6], [7], [8], [9], [10], [11], [12]].map((parts): Triangles => {
      const shell: Triangles = [];
      set.partOf.forEach((part, t) => {
        if (parts.includes(part)) shell.push(...set.positions.subarray(9 * t, 9 * t + 9));
      });
      return shell;
    });
    const area = silhouette(surfaceMesh(set), z).area;
    expect(Math.abs(area / projectedUnion(shells) - 1)).toBeLessThan(1e-9);
  });
});
