import { mkdtemp, readFile, rm, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { join } from "node:path";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { asciiStl } from "../../src/geometry/files/write-stl.js";
import { car } from "../geometry/car.js";
import { bodyOf, turnedOver } from "../geometry/shapes.js";
import { dragledger } from "../helpers/built.js";

const given = ["--unit", "m", "--travel", "-x", "--up", "+z"];
let folder: string;

beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), "dragledger-inspect-"));
  const { set } = car(6000, 4);
  // The hood faces the wrong way.
  const hood = set.parts.findIndex(({ name }) => name === "hood");
  const shapes = Object.fromEntries(
    set.parts.map(({ name }, part) => {
      const own = [...set.positions].filter((_, at) => set.partOf[Math.floor(at / 9)] === part);
      return [name, part === hood ? turnedOver(own) : own];
    }),
  );
  await writeFile(join(folder, "car.stl"), asciiStl(bodyOf(shapes)));
});

afterAll(() => rm(folder, { recursive: true, force: true }));

describe("inspect, as it is built", () => {
  test("draws three views and repairs into a new file, which is then without the fault", { timeout: 120_000 }, async () => {
    const names = ["car-front.png", "car-side.png", "plan.png"];
    const call = ["inspect", "car.stl", ...given, "--yaw", "5deg", "--picture", ...names, "--repair", "mended.stl", "--json"];
    const { code, stdout } = await dragledger(call, { cwd: folder });
    expect(code).toBe(0);
    const survey = JSON.parse(stdout);
    expect(survey.topology.flippedEdges).toBeGreaterThan(20);
    expect(survey.yawed).toMatchObject([{ yaw: expect.closeTo(0.0872665, 6) }]);
    expect(survey.repair).toMatchObject({ path: "mended.stl", changes: [{ kind: "turned-over", part: "hood" }], left: [] });
    expect(survey.pictures.map(({ seen }: { seen: string }) => seen)).toEqual(["front", "side", "plan"]);
    for (const name of names) {
      const bytes = await readFile(join(folder, name));
      expect([...bytes.subarray(0, 8)]).toEqual([0x89, 0x50, 0x4e, 0x47, 0x0d, 0x0a, 0x1a, 0x0a]);
      expect(bytes.length).toBeGreaterThan(20_000);
    }
    const again = await dragledger(["inspect", "mended.stl", ...given, "--json"], { cwd: folder });
    const mended = JSON.parse(again.stdout);
    expect(mended.topology).toMatchObject({ flippedEdges: 0, openEdges: 0 });
    expect(mended.parts.map(({ name }: { name: string }) => name)).toEqual(survey.parts.map(({ name }: { name: string }) => name));
    expect(mended.verdict).toBe("fit");
  });

  test("never writes over what it read, nor a picture of no known view", async () => {
    const before = await readFile(join(folder, "car.stl"));
    const over = await dragledger(["inspect", "car.stl", ...given, "--repair", "./car.stl"], { cwd: folder });
    expect([over.code, over.stderr]).toEqual([2, expect.stringContaining("is a file that the body was read from")]);
    expect(await readFile(join(folder, "car.stl"))).toEqual(before);
    const view = await dragledger(["inspect", "car.stl", "--picture", "car.png"], { cwd: folder });
    expect([view.code, view.stderr]).toEqual([2, expect.stringContaining("does not say which view")]);
  });

  test("says in words what it said in JSON", { timeout: 60_000 }, async () => {
    const { stdout } = await dragledger(["inspect", "car.stl", ...given], { cwd: folder });
    for (const line of ["track ", "overhangs ", "clearance ", "side, plan area", "surface cell ", "seen from the front m²"])
      expect(stdout).toContain(line);
  });
});
