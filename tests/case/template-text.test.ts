import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { header, label, numberText, templateText, word } from "../../src/case/template-text.js";

const hostile = [
  "#calc",
  '#calc "1"',
  "#codeStream",
  "#include",
  "#includeEtc",
  "$whole",
  "$".concat("{x}"),
  'a"b',
  "a;b",
  "a b",
  "a{b}",
  "a(b)",
  "a\nb",
  "a\n",
  "../up",
  "/etc",
  "-x",
  "1st",
  "",
  "tür",
  "a`b`",
  "a|b",
  "a&b",
  "<script>",
  "a.b",
  "%1",
  "\u202e",
];

describe("text of templates", () => {
  test.each(hostile)("the word %j is refused", (text) => {
    expect(() => word(text)).toThrow("is no word that a dictionary may hold");
    expect(() => templateText(text)).toThrow("is no word that a dictionary may hold");
  });

  test("whatever text is given, a word holds nothing but letters, digits, - and _ (seed 21)", () => {
    fc.assert(
      fc.property(
        fc.oneof(fc.string({ unit: "binary" }), fc.constantFrom(...hostile), fc.stringMatching(/^[A-Za-z][\w-]*$/)),
        (text) => {
          let written: string | null = null;
          try {
            written = templateText(text);
          } catch {
            // refused
          }
          if (written !== null) expect(written).toMatch(/^[A-Za-z][A-Za-z0-9_-]*$/);
        },
      ),
      { seed: 21, numRuns: 2000 },
    );
  });

  test("numbers: ten digits, finite, no negative zero", () => {
    expect(numberText(0.1 + 0.2)).toBe("0.3");
    expect(numberText(-0)).toBe("0");
    expect(numberText(1.46071857277e-5)).toBe("0.00001460718573");
    expect(numberText(1e-9)).toBe("1e-9");
    for (const bad of [Number.NaN, Infinity, -Infinity]) expect(() => numberText(bad)).toThrow("is no number");
  });

  test("lists are written in round brackets, and everything in them is checked", () => {
    expect(templateText([1, -2.5, 0])).toBe("(1 -2.5 0)");
    expect(() => templateText([1, "a;b"])).toThrow("is no word");
    for (const bad of [null, undefined, {}, () => 1, Symbol.iterator])
      expect(() => templateText(bad)).toThrow("a template was given");
  });

  test("labels are prose: what could be code, markup or a path is refused", () => {
    expect(templateText(label("open bed, no: 2".replace(/[,:]/g, "")))).toBe("open bed no 2");
    for (const bad of ["a`b", "<b>", "a\nb", "[x](y)", "#calc", "$x", 'a"b', "a/b", "a\\b", ""])
      expect(() => label(bad)).toThrow("is no name");
  });

  test("a head names its object", () => {
    expect(header("dictionary", "fvSchemes")).toContain("object      fvSchemes;");
    expect(() => header("dictionary", "a b")).toThrow();
  });
});
