import { describe, expect, it } from "vitest";
import { findCrossings } from "../../../src/geometry/checks/crossings.js";
import { topologyFindings } from "../../../src/geometry/checks/topology-findings.js";
import { surfaceMesh } from "../../../src/geometry/surface-mesh.js";
import { topologyOf } from "../../../src/geometry/topology.js";
import type { Mirror } from "../../../src/geometry/vehicle/mirror.js";
import { bodyOf, box, joined, sphere, type Triangles, turnedOver } from "../shapes.js";

const none: Mirror = { kind: "none", cut: null, plane: 0, deviation: 0 };

function findings(parts: Record<string, Triangles>, mirror = none) {
  const set = bodyOf(parts);
  const mesh = surfaceMesh(set);
  const topology = topologyOf(mesh, set.parts.length);
  return topologyFindings(topology, findCrossings(mesh, topology.shells.shellOf, set.parts.length), set.parts, 0.5, mirror);
}

describe("topologyFindings", () => {
  it("has none on a closed body", () => {
    expect(findings({ ball: sphere(1, 12) })).toEqual([]);
  });

  it("gives the span of the widest border, be it the longest or not", () => {
    // A triangle 8 long, and a star of twelve edges of 1, which is longer around.
    const star = Array.from({ length: 6 }, (_, k): Triangles => {
      const at = (angle: number): [number, number, number] => [20 + Math.cos(angle), Math.sin(angle), 0];
      return [20, 0, 0, ...at((k * Math.PI) / 3), ...at(((k + 0.9) * Math.PI) / 3)];
    }).flat();
    const [found] = findings({ thin: [0, 0, 0, 8, 0, 0, 4, 0.25, 0], star });
    expect(found).toMatchObject({ code: "open-edges", severity: "warning", part: null, count: 21 });
    expect(found.message).toBe(
      "21 edges belong to one triangle only (2 borders, the widest 4 m across): holes or sheets. Through a hole wider than a cell the mesh grows into the body: star 18, thin 3.",
    );
    expect(found.places[0]).toEqual([2, 0, 0]);
    expect(findings({ thin: [0, 0, 0, 8, 0, 0, 4, 0.25, 0] }, { ...none, kind: "half", cut: "open" })[0].severity).toBe("note");
  });

  it("names what is wrong, each by its code, in metres", () => {
    const cube = box([0, 0, 0], [2, 2, 2]);
    const codes = (shape: Triangles) => findings({ shape }).map(({ code, severity, count }) => `${code} ${severity} ${count}`);
    expect(codes(turnedOver(cube))).toEqual(["inside-out warning 1"]);
    expect(codes(joined(cube, cube.slice(0, 9)))).toEqual(["non-manifold-edges warning 3", "duplicate-triangles warning 1"]);
    expect(codes(joined(cube.slice(0, 99), turnedOver(cube.slice(99))))).toEqual(["flipped-edges warning 3"]);
    expect(codes(joined(cube, [0, 0, 0, 0, 0, 0, 1, 0, 0]))).toEqual(["degenerate-triangles note 1"]);
    const bent = sphere(1, 16).map((value, k) => (k % 3 === 0 && value > 0.2 ? -value - 0.9 : value));
    expect(codes(bent).join(", ")).toMatch(/self-intersections warning \d+$/);
  });
});
