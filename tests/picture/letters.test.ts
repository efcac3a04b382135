import { expect, test } from "vitest";
import { glyphOf, shownName, textWidth } from "../../src/picture/letters.js";

test("every printable letter of ASCII has strokes of its own within its box", () => {
  const drawings = new Map<string, string>();
  for (let code = 33; code < 127; code++) {
    const letter = String.fromCharCode(code);
    const { strokes, advance } = glyphOf(letter);
    expect(strokes.length, letter).toBeGreaterThan(0);
    for (const stroke of strokes) {
      expect(stroke.length % 2, letter).toBe(0);
      expect(stroke.length, letter).toBeGreaterThanOrEqual(4);
      stroke.forEach((value, at) => {
        expect(value, letter).toBeGreaterThanOrEqual(0);
        expect(value, letter).toBeLessThanOrEqual(at % 2 === 0 ? advance : 8);
      });
    }
    const drawing = JSON.stringify(strokes);
    if (letter !== "O" && letter !== "0") expect(drawings.get(drawing), letter).toBeUndefined();
    drawings.set(drawing, letter);
  }
});

test("other letters are question marks", () => {
  for (const letter of ["\u00e4", "\u{1f697}", "\u202e", "\n", "constructor"]) expect(glyphOf(letter)).toBe(glyphOf("?"));
});

test("a longer text is wider, in proportion to its size", () => {
  expect(textWidth("", 12)).toBe(0);
  expect(textWidth("wheelbase", 24)).toBeCloseTo(2 * textWidth("wheelbase", 12), 9);
});

test("names are cleaned and shortened", () => {
  expect(shownName("\u0000wheel\u001b[0m \u202efront\r\n")).toBe("wheel[0m front");
  expect(shownName("a".repeat(10_000), 20)).toBe(`${"a".repeat(17)}...`);
  expect(shownName("\u200f\u0007")).toBe("(no name)");
});
