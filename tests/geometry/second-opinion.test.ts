import { existsSync } from "node:fs";
import { mkdtemp, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { execa } from "execa";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { readSurfaces } from "../../src/geometry/files/read.js";
import { binaryStl } from "../../src/geometry/files/write-stl.js";
import { surfaceMesh } from "../../src/geometry/surface-mesh.js";
import type { Survey } from "../../src/geometry/survey.js";
import { surveyBody } from "../../src/geometry/survey-body.js";
import { topologyOf } from "../../src/geometry/topology.js";
import type { TriangleSet } from "../../src/geometry/triangle-set.js";
import { findSolver } from "../../src/openfoam/environment.js";
import { car } from "./car.js";
import { bodyOf, box, capsule, cone, ellipsoid, joined, shifted, sphere, torus } from "./shapes.js";

// A second opinion on ten bodies: the platform's own surfaceCheck (triangles, vertices, edges of one and of more than two triangles, connected
// parts) and surfaceInertia (area, and with density 1 the volume and its centroid).

const solver = await findSolver();
const sample = join(import.meta.dirname, "../../sample-geometry/geometry");
const motorcycle = "/usr/share/doc/openfoam-examples/examples/resources/geometry/motorBike.obj.gz";
const pickup = ["hood", "cab", "bed", "tailgate", "underbody", "wheel-front-left", "wheel-rear-left"].map((name) =>
  join(sample, `${name}.stl`),
);

const bodies: [name: string, body: () => Promise<TriangleSet>][] = [
  ["sphere", async () => bodyOf({ body: sphere(1, 32, [3, 2, 1]) })],
  ["ellipsoid", async () => bodyOf({ body: ellipsoid(2.25, 0.9, 0.7, 32) })],
  ["torus", async () => bodyOf({ body: torus(1, 0.25, 48) })],
  ["capsule", async () => bodyOf({ body: capsule(0.3, 1.2, 16) })],
  ["cone", async () => bodyOf({ body: cone(1, 2, 96) })],
  ["two boxes apart", async () => bodyOf({ body: joined(box([0, 0, 0], [4, 1.8, 1.4]), box([5, 0, 0], [6, 1, 1])) })],
  ["box without a lid", async () => bodyOf({ body: box([0, 0, 0], [4, 1.8, 1.4]).slice(0, 90) })],
  [
    "boxes that share an edge",
    async () => bodyOf({ body: joined(box([0, 0, 0], [1, 1, 1]), shifted(box([0, 0, 0], [1, 1, 1]), [1, 1, 0])) }),
  ],
  ["pickup", () => readSurfaces(pickup)],
  ["car of 100 thousand triangles", async () => car(100_000).set],
  ["motorcycle", () => readSurfaces([motorcycle])],
];

let folder: string;
beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), "second-opinion-"));
});
afterAll(() => rm(folder, { recursive: true, force: true }));

async function said(program: string, args: string[]): Promise<string> {
  const { stdout } = await execa(join(solver!.path, program), args, {
    cwd: folder,
    // On bodies with two equal moments of inertia surfaceInertia divides by zero on its way to the axes, which are not wanted here.
    env: { ...solver!.env, PWD: folder, FOAM_SIGFPE: "false" },
    extendEnv: false,
  });
  return stdout;
}

const number = (text: string, pattern: RegExp): number => Number(pattern.exec(text)?.[1] ?? Number.NaN);

/** Relative to `scale`: what twelve printed digits and sums in another order leave. */
function expectNear(own: number, other: number, scale: number): void {
  expect(Math.abs(own - other) / scale, `${own} against ${other}`).toBeLessThan(1e-7);
}

describe.skipIf(solver === null)(`a second opinion by the platform${solver === null ? " (OpenFOAM is not installed)" : ""}`, () => {
  test.each(bodies.filter(([name]) => name !== "motorcycle" || existsSync(motorcycle)))(
    "%s",
    { timeout: 60_000 },
    async (_name, body) => {
      const set = await body();
      await writeFile(join(folder, "body.stl"), binaryStl(set));
      const check = await said("surfaceCheck", ["body.stl"]);
      const survey: Survey = surveyBody(set, { unit: "m", travel: "-x", up: "+z", cell: null });
      const topology = topologyOf(surfaceMesh(set), set.parts.length);
      expect(number(check, /^Triangles\s*:\s*(\d+)/m)).toBe(survey.triangles);

      const inertia = await said("surfaceInertia", ["body.stl", "-density", "1"]);
      expectNear(survey.wettedArea, number(inertia, /^Surface area: (\S+)/m), survey.wettedArea);
      const closed = check.includes("Surface is closed.");
      expect(closed).toBe(survey.topology.openEdges === 0 && survey.topology.nonManifoldEdges === 0);
      if (!closed) {
        expect(number(check, /connected to one face : (\d+)/)).toBe(survey.topology.openEdges);
        expect(number(check, /connected to >2 faces : (\d+)/)).toBe(survey.topology.nonManifoldEdges);
      }
      expect(number(check, /^Number of unconnected parts : (\d+)/m)).toBe(topology.shells.count);
      if (!closed) return;
      const extent = Math.max(...Object.values(survey.extents));
      expectNear(survey.volume, number(inertia, /^Mass: (\S+)/m), extent ** 3);
      const centre = /^Centre of mass: \((\S+) (\S+) (\S+)\)/m.exec(inertia)!.slice(1).map(Number);
      survey.centroid.forEach((value, axis) => {
        expectNear(value, centre[axis]!, extent);
      });
    },
  );
});
