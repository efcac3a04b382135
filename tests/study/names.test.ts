import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { caseName, conditionsOf } from "../../src/study/conditions.js";
import { folderName, NAME_PATTERN, nameFault } from "../../src/study/names.js";
import { parseStudy } from "../../src/study/read.js";
import { least } from "./sketch.js";

describe("folder names", () => {
  test.each([
    ["open-bed", "open-bed"],
    ["Open Bed", "open-bed"],
    ["Heckflügel groß", "heckflugel-gross"],
    ["wing +5", "wing-5"],
    ["v1.2_b", "v1.2_b"],
    ["a.", "a"],
    ["Ångström", "angstrom"],
    ["ＦＵＬＬ", "full"],
  ])("%s -> %s", (name, folder) => {
    expect(nameFault(name)).toBeNull();
    expect(folderName(name)).toBe(folder);
  });

  test("any name that passes gives a folder that no shell, dictionary or path takes for anything else", () => {
    const likely = fc.string({ unit: fc.constantFrom(..."aZ9 _.-+/;#$*~'\"\\\n\u0000éß字İ"), maxLength: 70 });
    fc.assert(
      fc.property(fc.oneof(likely, fc.string({ unit: "grapheme" })), (name) => {
        if (nameFault(name) !== null) return;
        const folder = folderName(name);
        expect(folder).toMatch(/^[a-z0-9](?:[a-z0-9_.-]*[a-z0-9])?$/);
        expect(folder).not.toContain("..");
        expect(folderName(folder)).toBe(folder);
        expect(folder.length).toBeLessThanOrEqual(240);
      }),
      { seed: 11, numRuns: 2000 },
    );
  });

  test("the pattern of the schema lets every name pass that the reader takes", () => {
    const pattern = new RegExp(NAME_PATTERN);
    fc.assert(
      fc.property(fc.string({ unit: fc.constantFrom(..."aZ9 _.-+/;é字") }), (name) => {
        if (nameFault(name) === null) expect(pattern.test(name)).toBe(true);
      }),
      { seed: 12, numRuns: 3000 },
    );
    for (const name of ["../x", "a;#calc", ".a", "-a", "", " a", "a ", "a/b", "<b>", "a'b"]) expect(pattern.test(name)).toBe(false);
  });
});

describe("conditions", () => {
  const conditions = (speeds: string) => conditionsOf(parseStudy(least.replace("30 m/s", speeds), "/s/a.yaml"));

  test("are the speeds in the order of the file", () => {
    expect(conditions("[108 km/h, 100 km/h, 67 mph]")).toEqual([
      { name: "30ms", speed: 30, yaw: 0, ground: "moving" },
      { name: "27.78ms", speed: 100 / 3.6, yaw: 0, ground: "moving" },
      { name: "29.95ms", speed: 29.95168, yaw: 0, ground: "moving" },
    ]);
  });

  test("get as many decimals as tell them apart", () => {
    expect(conditions("[30 m/s, 30.001 m/s]").map((condition) => condition.name)).toEqual(["30ms", "30.001ms"]);
    expect(conditions("[30 m/s, 30.00004 m/s]").map((condition) => condition.name)).toEqual(["30ms", "30.00004ms"]);
  });

  test("are every yaw at each speed, named where it is not zero", () => {
    const study = parseStudy(`${least.replace("30 m/s", "[30 m/s, 20 m/s]")}yaw: [0 deg, -5 deg, 7.5 deg]\n`, "/s/a.yaml");
    expect(conditionsOf(study).map(({ name }) => name)).toEqual([
      "30ms",
      "30ms-yaw-5deg",
      "30ms-yaw7.5deg",
      "20ms",
      "20ms-yaw-5deg",
      "20ms-yaw7.5deg",
    ]);
    expect(conditionsOf(study)[1]).toEqual({
      name: "30ms-yaw-5deg",
      speed: 30,
      yaw: expect.closeTo((-5 * Math.PI) / 180, 12),
      ground: "moving",
    });
    const near = parseStudy(`${least}yaw: [0.001 deg, 0.0012 deg, 0]\n`, "/s/a.yaml");
    expect(conditionsOf(near).map(({ name }) => name)).toEqual(["30ms-yaw0.001deg", "30ms-yaw0.0012deg", "30ms"]);
  });

  test("name the folder of a case with the variant", () => {
    const [condition] = conditions("108 km/h");
    expect(caseName("open-bed", condition!)).toBe("open-bed-30ms");
    expect(caseName("Open Bed", condition!)).toBe("open-bed-30ms");
  });

  test("and variants never share a case folder", () => {
    fc.assert(
      fc.property(
        fc.uniqueArray(fc.constantFrom("a", "a-30ms", "a-30", "b", "30ms", "a.b", "a b"), { minLength: 1 }),
        fc.uniqueArray(fc.integer({ min: 100, max: 10_000 }), { minLength: 1, maxLength: 5 }),
        (names, speeds) => {
          const variants = names.map((name) => `${JSON.stringify(name)}: { files: [x.stl] }`).join(", ");
          const study = parseStudy(
            `study: a\nspeed: [${speeds.map((speed) => speed / 100)}]\nvariants: { ${variants} }\n`,
            "/s/a.yaml",
          );
          const folders = study.variants.flatMap(({ name }) => conditionsOf(study).map((condition) => caseName(name, condition)));
          expect(new Set(folders).size).toBe(names.length * speeds.length);
        },
      ),
      { seed: 13, numRuns: 40 },
    );
  });
});
