import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { Problem } from "../../src/errors.js";
import { parseStudy } from "../../src/study/read.js";
import { least, sketch } from "./sketch.js";
import { thrown } from "./thrown.js";

const problem = (text: string) => thrown(() => parseStudy(text, "/s/nose.yaml", "nose.yaml"));
const levels = "The text is nested more than 40 deep; a study needs four levels.";

describe("hostile study files", () => {
  test.each([
    ["brackets", "[".repeat(9000)],
    ["braces", "{".repeat(9000)],
    ["list dashes in a row", "- ".repeat(60_000)],
    ["complex keys in a row", "? ".repeat(60_000)],
    ["indentation", Array.from({ length: 400 }, (_, k) => `${" ".repeat(k)}a:`).join("\n")],
  ])("nested without end by %s", async (_, text) => {
    expect(await problem(text)).toEqual({
      code: "study-too-deep",
      message: levels,
      where: "nose.yaml",
      remedy: "Remove the stray brackets or indentation.",
    });
  });

  test("nested as deep as is let through, by every means at once", async () => {
    const deep = `${Array.from({ length: 35 }, (_, k) => `${" ".repeat(k)}a:`).join("\n")}\n${" ".repeat(36)}${"- ".repeat(35)}${"[".repeat(35)}`;
    expect((await problem(deep)).code).toBe("study-syntax");
  });

  test("brackets and quotes without number", async () => {
    expect(await problem("[]".repeat(20_000))).toMatchObject({
      code: "study-too-large",
      message: "The text holds more than 10000 brackets and quotes; no study needs as many.",
    });
    expect((await problem('"'.repeat(20_000))).code).toBe("study-too-large");
  });

  test("aliases that multiply", async () => {
    const lines = ["a: &a [x, x, x, x, x, x, x, x, x]"];
    for (const [from, to] of ["ab", "bc", "cd", "de", "ef", "fg"]) lines.push(`${to}: &${to} [${`*${from}, `.repeat(9)}]`);
    expect(await problem(`${lines.join("\n")}\n`)).toEqual({
      code: "study-aliases",
      message: "The aliases (*name) of the text expand to more than 100 values.",
      where: "nose.yaml",
      remedy: "Write the values out.",
    });
  });

  test("aliases without number, without anchor, and within themselves", async () => {
    const many = Array.from({ length: 200 }, (_, k) => `k${k}: ${k === 0 ? "&x 1" : "*x"}`).join("\n");
    expect((await problem(many)).message).toBe("The text holds more than 100 aliases (*name).");
    expect(await problem(`${least}air: *there\n`)).toMatchObject({
      message: "The alias *there refers to no anchor before it.",
      where: "nose.yaml:5:6",
    });
    expect((await problem(`${least}yaw: &a [*a]\n`)).message).toBe("The alias *a stands within what it refers to.");
    expect((await problem("&a\nstudy: *a\n")).message).toBe("The alias *a stands within what it refers to.");
  });

  test("keys that are no words, or that mean something to an object", async () => {
    expect((await problem(`${least}__proto__: 1\n`)).message).toBe("Unknown key '__proto__'.");
    expect((await problem("study: a\nspeed: 1\nvariants: { __proto__: { files: [a] } }\n")).message).toBe(
      "Unknown key '__proto__'.",
    );
    expect((await problem(`${least}constructor: 1\n`)).message).toBe("Unknown key 'constructor'.");
    for (const text of [`${least}[a]: 1\n`, `${least}? [a]\n: b\n`, ": a\n", '"": a\n', "~: a\n"])
      expect((await problem(text)).message, text).toBe("A key must be a plain word.");
  });

  test("tags that ask for more than data", async () => {
    for (const tag of ["!!js/function", "!!python/object/apply:os.system", "!include", "!!env"])
      expect((await problem(`${least}question: ${tag} x\n`)).code).toBe("study-syntax");
    expect((await problem(`${least}question: !!binary aGVsbG8=\n`)).code).toBe("study-value");
  });

  test("escape sequences do not reach the terminal", async () => {
    for (const text of [
      `${least}"\\e[31mred\\u202e\\u2028\\n": 1\n`,
      `${least}ground: "\\e[31m\\x9b\\n"\n`,
      `${least}parts: { "\\e[2J": { match: x } }\n`,
      `study: "\\e]0;x\\a"\nspeed: 3\nvariants: { a: { files: [a] } }\n`,
      `study: a\nspeed: "3 \\e[1m"\nvariants: { a: { files: [a] } }\n`,
      `study: a\nspeed: 3\nvariants: { a: { files: ["\\e[1m", "\\e[1m"] } }\n`,
      `${least}"a\\e": 1\n"a\\e": 2\n`,
      `${least}air: *\u009b31m\n`,
    ]) {
      const { message, where, remedy } = await problem(text);
      // biome-ignore lint/suspicious/noControlCharactersInRegex: control characters are what must not be there
      for (const part of [message, where, remedy]) expect(part, text).not.toMatch(/[\u0000-\u001f\u007f-\u009f\u2028\u2029\u202e]/);
    }
  });

  test("a number of many digits, a text of many letters", async () => {
    expect((await problem(least.replace("30 m/s", "9".repeat(100_000)))).message).toMatch(/^Key 'speed' is Infinity/);
    expect((await problem(least.replace("30 m/s", "9 ".repeat(50_000)))).message.length).toBeLessThan(250);
    expect((await problem(`${"k".repeat(100_000)}: 1\n${least}`)).message.length).toBeLessThan(250);
  });

  test("lists of more than can be meant", async () => {
    const list = Array.from({ length: 1001 }, (_, k) => `${k / 20 + 1}`).join(", ");
    expect((await problem(least.replace("30 m/s", `[${list}]`))).message).toBe(
      `Key 'speed' is a list of more than 1000; expected a speed such as "30 m/s" or "108 km/h".`,
    );
    expect((await problem(least.replace("[blunt.stl]", `[${list}]`))).message).toMatch(
      /^Key 'variants.blunt.files' is a list of more than 1000/,
    );
  });

  test("thousands of faults: the first and some more", async () => {
    const keys = Array.from({ length: 600 }, (_, k) => `w${k}: 1`).join("\n");
    expect((await problem(`${keys}\n${least}`)).remedy).toMatch(
      /Also wrong: line 2 \(w1\), line 3 \(w2\), line 4 \(w3\), line 5 \(w4\), line 6 \(w5\), 594 more\.$/,
    );
  });

  test("any damage to a good file is a problem of the input with its place, or no damage", () => {
    const places = fc.array(
      fc.tuple(fc.nat(sketch.length), fc.nat(12), fc.string({ unit: fc.constantFrom(..."[]{}:,#&*!|>'\"%@`-?\n\t a1é\0") })),
      {
        minLength: 1,
        maxLength: 3,
      },
    );
    fc.assert(
      fc.property(places, (cuts) => {
        let text = sketch;
        for (const [at, length, more] of cuts) text = text.slice(0, at) + more + text.slice(at + length);
        try {
          parseStudy(text, "/s/a.yaml", "a.yaml");
        } catch (error) {
          if (!(error instanceof Problem)) throw error;
          expect(error.kind).toBe("input");
          expect(error.where).toMatch(/^a\.yaml(:\d+:\d+( \(.+\))?)?$/);
          expect(error.message).toMatch(/^[^\n]+[.!?]$/);
          expect(error.remedy).toMatch(/^[^\n]+$/);
        }
      }),
      { seed: 99, numRuns: 150 },
    );
  });
});
