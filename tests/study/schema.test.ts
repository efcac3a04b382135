import { describe, expect, test } from "vitest";
import { parse } from "yaml";
import { keyAt, notComputed, studyKeys } from "../../src/study/keys.js";
import { parseStudy } from "../../src/study/read.js";
import { studyJsonSchema } from "../../src/study/schema.js";
import { allSchemas, instanceFaults, schemaBreaches } from "./json-schema.js";
import { least, sketch } from "./sketch.js";

const schema = studyJsonSchema() as Record<string, unknown>;

/** The schema of a key of the table. */
function schemaOf(key: string): Record<string, unknown> {
  let found = schema;
  for (const step of key.split(".")) {
    const next = step === "*" ? found.additionalProperties : (found.properties as Record<string, unknown>)[step];
    found = next as Record<string, unknown>;
  }
  return found;
}

describe("the JSON Schema", () => {
  test("keeps the rules of 2020-12", () => {
    expect(schema.$schema).toBe("https://json-schema.org/draft/2020-12/schema");
    expect(schemaBreaches(schema)).toEqual([]);
  });

  test("the check of those rules finds what breaks them", () => {
    expect(schemaBreaches({ type: "text" })).toEqual(["#: type"]);
    expect(schemaBreaches({ properties: { a: { required: "b", colour: 1, enum: [] } } })).toEqual([
      "#/properties/a: required",
      "#/properties/a: colour",
      "#/properties/a: enum",
    ]);
  });

  test("is plain data, the same each time", () => {
    expect(JSON.parse(JSON.stringify(schema))).toEqual(schema);
    expect(studyJsonSchema()).toEqual(schema);
  });

  test("lists exactly the keys of the table, each with title and description, none open to other keys", () => {
    const listed = allSchemas(schema)
      .map(({ path }) => path.replace("#/", "").replaceAll("additionalProperties", "properties/*").replaceAll("properties/", ""))
      .filter((path) => !/#|anyOf|items|propertyNames/.test(path))
      .map((path) => path.replaceAll("/", "."));
    expect(listed.sort()).toEqual(studyKeys.map((entry) => entry.key).sort());
    for (const entry of studyKeys) {
      const found = schemaOf(entry.key);
      expect(found.title, entry.key).toBe(entry.title);
      expect(found.description, entry.key).toContain(entry.description);
      if (found.type === "object" && !["variants", "parts"].includes(entry.key))
        expect(found.additionalProperties, entry.key).toBe(false);
    }
    expect(schema.additionalProperties).toBe(false);
    for (const key of notComputed.keys()) expect(schema.properties).not.toHaveProperty(key);
  });

  test("has the defaults of the table, and defaults and examples fit their own schema", () => {
    for (const entry of studyKeys) {
      const found = schemaOf(entry.key);
      if (entry.default !== undefined) expect(found.default, entry.key).toEqual(entry.default);
      if ("default" in found) expect(instanceFaults(found, found.default), entry.key).toEqual([]);
      for (const example of (found.examples as unknown[]) ?? []) expect(instanceFaults(found, example), entry.key).toEqual([]);
      expect(instanceFaults(found, parse(entry.example)), entry.key).toEqual([]);
    }
    const required = studyKeys.filter((entry) => entry.required && !entry.key.includes("."));
    expect(schema.required).toEqual(required.map((entry) => entry.key));
  });

  test("accepts what the reader accepts", () => {
    for (const text of [sketch, least]) {
      expect(() => parseStudy(text, "/s/a.yaml")).not.toThrow();
      expect(instanceFaults(schema, parse(text))).toEqual([]);
    }
  });

  test.each([
    ["spped: 3", ".spped"],
    ["zones: {}", ".zones"],
    ["floor: 1", ".floor"],
    ["mesh: { levels: 2 }", ".mesh.levels"],
    ["mesh: { half: yes }", ".mesh.half"],
    ["solver: { start: warm }", ".solver.start"],
    ["body: { unit: km }", ".body.unit"],
    ["ground: belt", ".ground"],
    ["parts: { a: {} }", ".parts.a"],
    ["parts: { ../a: { match: x } }", ".parts.../a"],
    ["parts: { a: { match: [] } }", ".parts.a.match"],
    ["question: 3", ".question"],
  ])("refuses %s, as the reader does", (line, place) => {
    const text = `${least}${line}\n`;
    expect(instanceFaults(schema, parse(text))).toEqual([place]);
    expect(() => parseStudy(text, "/s/a.yaml")).toThrow();
  });

  test.each([["variants: {}"], ["variants: { a: { files: [] } }"], ["variants: { a: { files: x } }"], ["variants: { a: {} }"]])(
    "refuses %s, as the reader does",
    (variants) => {
      const text = `study: a\nspeed: 3\n${variants}\n`;
      expect(instanceFaults(schema, parse(text))).not.toEqual([]);
      expect(() => parseStudy(text, "/s/a.yaml")).toThrow();
    },
  );
});

describe("the table of keys", () => {
  test("has an example for every key that the reader takes, at the key's place", () => {
    for (const { key, example } of studyKeys) {
      const steps = key.split(".").map((step) => (step === "*" ? "blunt" : step));
      let block = parse(example);
      for (const step of steps.toReversed()) block = { [step]: block };
      if (key === "parts.*.rotating") block.parts.blunt.match = "x";
      const files = { blunt: { files: ["a.stl"] }, "open-bed": { files: ["b.stl"] } };
      const text = JSON.stringify({ study: "a", speed: 30, variants: files, ...block });
      expect(() => parseStudy(text, "/s/a.yaml"), key).not.toThrow();
    }
  });

  test("is found by place: names of the user's own and list positions do not matter", () => {
    expect(keyAt(["variants", "open-bed", "files", 3])?.key).toBe("variants.*.files");
    expect(keyAt(["speed", 1])?.key).toBe("speed");
    expect(keyAt(["mesh", "y-plus"])?.key).toBe("mesh.y-plus");
    expect(keyAt(["mesh", "*"])).toBeNull();
    expect(keyAt(["variants", "*", "x"])).toBeNull();
  });

  test("describes each key in one sentence", () => {
    for (const { key, description } of studyKeys) expect(description, key).toMatch(/^[A-Z][^.]*(\.[0-9][^.]*)*\.$/);
  });
});
