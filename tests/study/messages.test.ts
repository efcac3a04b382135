import { describe, expect, test } from "vitest";
import { parseStudy } from "../../src/study/read.js";
import { least } from "./sketch.js";
import { thrown } from "./thrown.js";

const problem = (text: string) => thrown(() => parseStudy(text, "/s/nose.yaml", "nose.yaml"));
const name = "study: nose\n";
const speed = "speed: 30 m/s\n";
const variants = "variants:\n  blunt: { files: [blunt.stl] }\n";
const everyKey = "study, question, air, speed, yaw, ground, baseline, variants, body, parts, mesh, solver, stop, floor";

describe("messages about keys, word for word", () => {
  test("a misspelt key", async () => {
    expect(await problem(`${name}spped: 30 m/s\n${speed}${variants}`)).toEqual({
      code: "study-unknown-key",
      message: "Unknown key 'spped' (did you mean 'speed'?).",
      where: "nose.yaml:2:1 (spped)",
      remedy: `Keys possible here: ${everyKey}.`,
    });
  });

  test("a misspelt key further down, other separators, and a key at the wrong place", async () => {
    expect(await problem(`${least}mesh: { yPlus: 50 }\n`)).toEqual({
      code: "study-unknown-key",
      message: "Unknown key 'yPlus' (did you mean 'y-plus'?).",
      where: "nose.yaml:5:9 (mesh.yPlus)",
      remedy: "Keys possible here: cells, half, y-plus, layers, shift, levels.",
    });
    expect(await problem(`${least}cells: 1 million\n`)).toMatchObject({
      message: "Unknown key 'cells' (did you mean 'mesh.cells'?).",
      where: "nose.yaml:5:1 (cells)",
    });
    expect(await problem(`${name}${speed}variants:\n  blunt: { file: blunt.stl, files: [blunt.stl] }\n`)).toMatchObject({
      message: "Unknown key 'file' (did you mean 'files'?).",
      where: "nose.yaml:4:12 (variants.blunt.file)",
      remedy: "Keys possible here: files.",
    });
  });

  test("a key that is like none", async () => {
    expect(await problem(`${least}colour: red\n`)).toMatchObject({ message: "Unknown key 'colour'." });
  });

  test("a key twice, also where only its spelling in YAML differs", async () => {
    expect(await problem(`${name}${speed}study: tail\n${variants}`)).toEqual({
      code: "study-duplicate-key",
      message: "The key 'study' is there twice.",
      where: "nose.yaml:3:1",
      remedy: "Keep one of the two.",
    });
    expect(await problem(`${name}${speed}variants: { 1: { files: [a] }, "1": { files: [b] } }\n`)).toMatchObject({
      message: "The key '1' is there twice.",
      where: "nose.yaml:3:32",
    });
  });

  test("required keys that are missing: the first, and where the others are", async () => {
    expect(await problem(`${name}${variants}`)).toEqual({
      code: "study-missing-key",
      message: `Key 'speed' is missing; expected a speed such as "30 m/s" or "108 km/h".`,
      where: "nose.yaml:1:1 (speed)",
      remedy: "Write, for example, speed: 30 m/s.",
    });
    expect(await problem("ground: moving\n")).toEqual({
      code: "study-missing-key",
      message: "Key 'study' is missing; expected a name of letters, digits, blanks and - _ . +.",
      where: "nose.yaml:1:1 (study)",
      remedy: "Write, for example, study: pickup-bed. Also wrong: line 1 (speed), line 1 (variants).",
    });
  });

  test("keys that this version does not compute", async () => {
    expect(await problem(`${least}zones:\n  bed: { x: [3.1 m, 4.9 m] }\n`)).toEqual({
      code: "not-computed",
      message: "Key 'zones': zones are not computed by this version.",
      where: "nose.yaml:5:1 (zones)",
      remedy: "Remove the key.",
    });
    expect(await problem(`${least}air-boxes: {}\n`)).toMatchObject({
      code: "not-computed",
      message: "Key 'air-boxes': air boxes are not computed by this version.",
    });
    expect(await problem(`${least}solver: { mode: transient }\n`)).toEqual({
      code: "not-computed",
      message: `Key 'solver.mode' is "transient", which this version does not compute; the only value possible is steady.`,
      where: "nose.yaml:5:17 (solver.mode)",
      remedy: "Write mode: steady, or remove the key.",
    });
    expect(await problem(`${least}solver: { turbulence: k-epsilon }\n`)).toMatchObject({
      message: `Key 'solver.turbulence' is "k-epsilon"; expected k-omega-SST or realizable-k-epsilon.`,
    });
    expect(await problem(`${least}mesh: { levels: 3 }\n`)).toMatchObject({
      message: "Key 'mesh.levels' is 3, which this version does not compute; the only value possible is 1.",
    });
    expect(await problem(`${least}floor: 1\n`)).toMatchObject({
      message: "Key 'floor' is 1, which this version does not compute; the only value possible is 0.",
    });
    expect(await problem(`${least}yaw: [0 deg, 45 deg]\n`)).toMatchObject({
      code: "study-value",
      message: "Key 'yaw[1]' is \"45 deg\" (0.785398 rad); expected -30 to 30 deg.",
    });
    expect(await problem(`${least}yaw: [5 deg, 0, 5.0 deg]\n`)).toMatchObject({
      code: "study-same-yaw",
      message: "Keys 'yaw[0]' and 'yaw[2]' are the same angle, 5 deg.",
    });
    expect(await problem(`${least}yaw: 5\n`)).toMatchObject({
      code: "study-value",
      message: `Key 'yaw' is 5, which has no unit; expected an angle such as "5 deg" or "0.1 rad".`,
    });
  });
});

describe("messages about quantities, word for word", () => {
  test.each([
    ["30 kg", `Key 'speed' is "30 kg", which is not a speed; expected a speed such as "30 m/s" or "108 km/h".`],
    ["30 furlongs", `Key 'speed' is "30 furlongs", which is not a speed; expected a speed such as "30 m/s" or "108 km/h".`],
    [
      "30 zorks",
      `Key 'speed' is "30 zorks", which has the unit "zorks", which is not known; expected a speed such as "30 m/s" or "108 km/h".`,
    ],
    ["fast", `Key 'speed' is "fast", which does not begin with a number; expected a speed such as "30 m/s" or "108 km/h".`],
    ['""', `Key 'speed' is "", which is empty; expected a speed such as "30 m/s" or "108 km/h".`],
    [
      "'27,8 m/s'",
      `Key 'speed' is "27,8 m/s", which has a comma in its number (the decimal sign is a point, and digits are not grouped); expected a speed such as "30 m/s" or "108 km/h".`,
    ],
    [
      "900 km/h",
      `Key 'speed' is "900 km/h" (250 m/s); expected 1 to 100 m/s (faster air is compressible, which this version does not compute).`,
    ],
    [
      "-30",
      `Key 'speed' is -30; expected 1 to 100 m/s (faster air is compressible, which this version does not compute); a bare number is in m/s.`,
    ],
    ["true", `Key 'speed' is true; expected a speed such as "30 m/s" or "108 km/h".`],
    ["", `Key 'speed' has no value; expected a speed such as "30 m/s" or "108 km/h".`],
    [".inf", `Key 'speed' is Infinity; expected a speed such as "30 m/s" or "108 km/h".`],
    ["[]", `Key 'speed' is empty; expected a speed such as "30 m/s" or "108 km/h".`],
    ["{ a: 1 }", `Key 'speed' is a block of keys; expected a speed such as "30 m/s" or "108 km/h".`],
    ["[30 m/s, 30 s]", `Key 'speed[1]' is "30 s", which is not a speed; expected a speed such as "30 m/s" or "108 km/h".`],
    ["[30 m/s, 108 km/h]", "Keys 'speed[0]' and 'speed[1]' are the same speed, 30 m/s."],
  ])("speed: %s", async (text, message) => {
    expect(await problem(`${name}speed: ${text}\n${variants}`)).toMatchObject({ message });
  });

  test.each([
    ["air: { temperature: 15 }", "air.temperature", "Key 'air.temperature' is 15; expected -50 to 60 degC; a bare number is in K."],
    [
      "air: { temperature: 15 m }",
      "air.temperature",
      `Key 'air.temperature' is "15 m", which has the unit "m"; expected a temperature such as "15 degC" or "59 degF".`,
    ],
    [
      "air: { temperature: -300 degC }",
      "air.temperature",
      `Key 'air.temperature' is "-300 degC", which is below absolute zero; expected a temperature such as "15 degC" or "59 degF".`,
    ],
    [
      "air: { pressure: 1013.25 }",
      "air.pressure",
      "Key 'air.pressure' is 1013.25; expected 300 to 2000 hPa; a bare number is in Pa.",
    ],
    [
      "air: { humidity: 50 }",
      "air.humidity",
      "Key 'air.humidity' is 50; expected 0 to 100 %; a bare number is a ratio, 0.5 is 50 %.",
    ],
    ["stop: { drag: 1 }", "stop.drag", "Key 'stop.drag' is 1; expected 0.01 to 100 counts (1 count is 0.001)."],
    [
      "stop: { confidence: 95 }",
      "stop.confidence",
      "Key 'stop.confidence' is 95; expected 50 to 99.9 %; a bare number is a ratio, 0.5 is 50 %.",
    ],
    ["mesh: { cells: 12 }", "mesh.cells", "Key 'mesh.cells' is 12; expected 5 thousand to 500 million."],
    [
      "mesh: { cells: 1 m }",
      "mesh.cells",
      `Key 'mesh.cells' is "1 m", which has the unit "m"; expected a number such as "1.5 million" or "60 thousand".`,
    ],
    ["mesh: { layers: 2.5 }", "mesh.layers", "Key 'mesh.layers' is 2.5; expected a whole number from 0 to 20."],
    ["mesh: { y-plus: 1 }", "mesh.y-plus", "Key 'mesh.y-plus' is 1; expected 30 to 300 (wall functions hold there)."],
    ["mesh: { half: yes }", "mesh.half", `Key 'mesh.half' is "yes"; expected auto, true or false.`],
    ["body: { unit: km }", "body.unit", `Key 'body.unit' is "km"; expected m, mm, cm, in or ft.`],
    ["body: { travel: x }", "body.travel", `Key 'body.travel' is "x"; expected +x, -x, +y, -y, +z or -z.`],
    [
      "body: { wheelbase: long }",
      "body.wheelbase",
      `Key 'body.wheelbase' is "long", which does not begin with a number; expected auto, none or a length such as "2.7 m".`,
    ],
    ["body: { wheelbase: 2700 }", "body.wheelbase", "Key 'body.wheelbase' is 2700; expected 0.01 to 30 m; a bare number is in m."],
    [
      "body: { reference-area: 2.1 m }",
      "body.reference-area",
      `Key 'body.reference-area' is "2.1 m", which is not an area; expected auto or an area such as "2.1 m2".`,
    ],
    ["ground: belt", "ground", `Key 'ground' is "belt"; expected moving or fixed.`],
    ["question: [a]", "question", "Key 'question' is a list; expected a text."],
    [
      "solver: { most-iterations: 0 }",
      "solver.most-iterations",
      "Key 'solver.most-iterations' is 0; expected a whole number from 10 to 1 million.",
    ],
    ["mesh:", "mesh", "Key 'mesh' has no value; expected a block with cells, half, y-plus, layers and shift."],
    ["air: dry", "air", `Key 'air' is "dry"; expected a block with temperature, pressure and humidity.`],
    [
      "parts: { wheels: { rotating: true } }",
      "parts.wheels.match",
      `Key 'parts.wheels.match' is missing; expected a pattern such as "wheel-*", or a list of them.`,
    ],
    [
      "parts: { wheels: { match: w, rotating: 1 } }",
      "parts.wheels.rotating",
      "Key 'parts.wheels.rotating' is 1; expected true or false.",
    ],
  ])("%s", async (line, key, message) => {
    const found = await problem(`${least}${line}\n`);
    expect(found).toMatchObject({ code: expect.stringMatching(/^study-(value|missing-key)$/), message });
    expect(found.where).toMatch(new RegExp(`^nose\\.yaml:5:[0-9]+ \\(${key.replaceAll(".", "\\.")}\\)$`));
  });

  test("the way out: quotes, the default, or an example", async () => {
    expect((await problem(`${least}mesh: { half: yes }\n`)).remedy).toBe("Correct it, or remove the key to have auto.");
    expect(await problem(`study: true\n${speed}${variants}`)).toMatchObject({
      message: "Key 'study' is true, which YAML reads as a boolean; expected a name of letters, digits, blanks and - _ . +.",
      remedy: 'Put it in quotes if it is meant: "true".',
    });
    expect((await problem(`${name}speed: 30 kg\n${variants}`)).remedy).toBe("Write, for example, speed: 30 m/s.");
    expect((await problem(`${least}mesh:\n`)).remedy).toBe("Write, for example, mesh: { cells: 1.5 million }, or remove the key.");
  });
});

describe("messages about variants, word for word", () => {
  test("without files", async () => {
    expect(await problem(`${name}${speed}variants:\n  blunt: {}\n`)).toEqual({
      code: "study-missing-key",
      message: "Key 'variants.blunt.files' is missing; expected a list of paths such as [geometry/body.stl, geometry/wheels.stl].",
      where: "nose.yaml:4:10 (variants.blunt.files)",
      remedy: "Write, for example, files: [geometry/body.stl].",
    });
    expect(await problem(`${name}${speed}variants:\n  blunt:\n`)).toMatchObject({
      message: "Key 'variants.blunt' has no value; expected a block with the key files.",
      where: "nose.yaml:4:3 (variants.blunt)",
    });
    expect(await problem(`${name}${speed}variants:\n  blunt: { files: [] }\n`)).toMatchObject({
      message: "Key 'variants.blunt.files' is empty; expected a list of paths such as [geometry/body.stl, geometry/wheels.stl].",
    });
    expect(await problem(`${name}${speed}variants:\n  blunt: { files: blunt.stl }\n`)).toMatchObject({
      message: `Key 'variants.blunt.files' is "blunt.stl"; expected a list of paths such as [geometry/body.stl, geometry/wheels.stl].`,
    });
    expect(await problem(`${name}${speed}variants:\n  blunt: { files: [3] }\n`)).toMatchObject({
      message: "Key 'variants.blunt.files[0]' is 3, which YAML reads as a number; expected a text.",
    });
  });

  test("none at all", async () => {
    expect(await problem(`${name}${speed}variants: {}\n`)).toEqual({
      code: "study-no-variants",
      message: "Key 'variants' is empty; expected variants by name, each with its files.",
      where: "nose.yaml:3:1 (variants)",
      remedy: "Add at least one, such as open-bed: { files: [body.stl] }.",
    });
  });

  test("a baseline that is none of them", async () => {
    const text = `${name}${speed}baseline: open-bad\nvariants: { open-bed: { files: [a] }, covered-bed: { files: [b] } }\n`;
    expect(await problem(text)).toEqual({
      code: "study-baseline",
      message: `Key 'baseline' is "open-bad", which is not among the variants (did you mean 'open-bed'?); expected one of: open-bed, covered-bed.`,
      where: "nose.yaml:3:11 (baseline)",
      remedy: "Name one of the variants, or remove the key to take the first.",
    });
  });

  test("two that would share a folder", async () => {
    const text = `${name}${speed}variants: { Open bed: { files: [a] }, öpen-bed: { files: [b] } }\n`;
    expect(await problem(text)).toEqual({
      code: "study-same-folder",
      message: "Variants 'Open bed' and 'öpen-bed' would share the case folder 'open-bed'.",
      where: "nose.yaml:3:39 (variants.öpen-bed)",
      remedy: "Rename one of them; accents, case and blanks do not tell folders apart.",
    });
  });

  test("a file twice", async () => {
    expect(await problem(`${name}${speed}variants: { a: { files: [x/a.stl, ./x/../x/a.stl] } }\n`)).toMatchObject({
      code: "study-same-file",
      message: "Variant 'a' names the file ./x/../x/a.stl twice.",
      where: "nose.yaml:3:35 (variants.a.files[1])",
    });
  });

  test("travel and up along one axis", async () => {
    expect(await problem(`${least}body: { travel: +z }\n`)).toEqual({
      code: "study-axes",
      message: "Keys 'body.travel' (+z) and 'body.up' (+z) lie on one axis; expected two different axes.",
      where: "nose.yaml:5:7 (body.up)",
      remedy: "Give the direction of travel and up along different axes, such as travel: -x and up: +z.",
    });
  });
});

describe("messages about names, word for word", () => {
  const possible = "letters, digits, blanks and - _ . + are possible";
  test.each([
    ["'../x'", `Key 'study' is "../x", which holds "/"; ${possible}.`],
    ["a;#calc", `Key 'study' is "a;#calc", which holds ";"; ${possible}.`],
    ['"$(reboot)"', `Key 'study' is "$(reboot)", which holds "$"; ${possible}.`],
    ['"a\\nb"', `Key 'study' is "a\\nb", which holds "\\n"; ${possible}.`],
    ["<b>", `Key 'study' is "<b>", which holds "<"; ${possible}.`],
    ["a..b", `Key 'study' is "a..b", which holds "..".`],
    ["'.hidden'", `Key 'study' is ".hidden", which does not begin with a letter or digit.`],
    ['"-rf"', `Key 'study' is "-rf", which does not begin with a letter or digit.`],
    ['" a"', `Key 'study' is " a", which begins or ends with a blank.`],
    ["''", `Key 'study' is "", which is empty.`],
    ["x".repeat(61), `Key 'study' is "${"x".repeat(56)}..., which has 61 characters; 60 is the most.`],
    ["車体", `Key 'study' is "車体", which has no letter a-z and no digit that a folder could be named by.`],
    ["2024", "Key 'study' is 2024, which YAML reads as a number; expected a name of letters, digits, blanks and - _ . +."],
  ])("study: %s", async (text, message) => {
    expect(await problem(`study: ${text}\n${speed}${variants}`)).toMatchObject({ message, where: "nose.yaml:1:8 (study)" });
  });

  test("of variants and of rules", async () => {
    expect(await problem(`${name}${speed}variants:\n  "../x": { files: [a] }\n`)).toEqual({
      code: "study-name",
      message: `The name "../x" under 'variants' holds "/"; ${possible}.`,
      where: "nose.yaml:4:3 (variants.../x)",
      remedy: "Names become folders and labels: use letters, digits, blanks and - _ . + and begin with a letter or digit.",
    });
    expect(await problem(`${least}parts: { "a;#calc": { match: x } }\n`)).toMatchObject({
      code: "study-name",
      message: `The name "a;#calc" under 'parts' holds ";"; ${possible}.`,
    });
  });
});

describe("messages about the text, word for word", () => {
  const check = "Check indentation, brackets and quotes at this place; a text that holds ': ' or ' #' needs quotes.";
  test.each([
    [
      "study: nose\n\tspeed: 30 m/s\n",
      "nose.yaml:2:1",
      "Tabs are not allowed as indentation.",
      "Indent with blanks; YAML takes no tabs.",
    ],
    ["study: [nose\nspeed: 3\n", "nose.yaml:2:1", "", check],
    ['study: "nose\nspeed: 3\n', "nose.yaml", "", check],
    ["study: nose: blunt\n", "nose.yaml:1:8", "Nested mappings are not allowed in compact mappings.", check],
    ["study: nose\n  speed: 3\n", "nose.yaml", "", check],
    ["study: nose\nquestion: !run x\n", "nose.yaml:2:11", "Unresolved tag: !run.", check],
  ])("%j", async (text, where, detail, remedy) => {
    const found = await problem(text);
    expect(found.code).toBe("study-syntax");
    expect(found.where).toContain(where);
    expect(found.where).toMatch(/^nose\.yaml:\d+:\d+$/);
    expect(found.message).toMatch(/^The text is not valid YAML: .+[.!?]$/);
    expect(found.message).toContain(detail);
    expect(found.remedy).toBe(remedy);
  });

  test("two documents in one file", async () => {
    expect(await problem(`${least}---\n${least}`)).toEqual({
      code: "study-syntax",
      message: "The file holds more than one YAML document.",
      where: "nose.yaml:5:1",
      remedy: "Remove the line --- and what follows it.",
    });
  });

  test("a list instead of keys", async () => {
    expect(await problem("- study: nose\n")).toMatchObject({
      message: "The study file holds a list; expected keys such as 'study', 'speed' and 'variants'.",
      where: "nose.yaml:1:1",
    });
  });
});
