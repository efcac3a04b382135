/** A name for people, checked by `label`; only prose may hold one. */
class Label {
  constructor(readonly text: string) {}
}

/**
 * The only form in which a name reaches a dictionary or a script: a dictionary of the solver can run code (`#calc`), read files
 * (`#include`) and copy values (`$name`), and none of that can be written with these letters.
 *
 * @throws Error for anything else; names are cleaned before, so that is a defect or an attack.
 */
export function word(text: string): string {
  if (!/^[A-Za-z][A-Za-z0-9_-]*$/.test(text)) throw new Error(`${JSON.stringify(text)} is no word that a dictionary may hold`);
  return text;
}

/** A name for people in prose (README): letters, digits, blanks and `- _ . +` only. Throws as `word`. */
export function label(text: string): Label {
  if (!/^[\p{L}\p{M}\p{N} _.+-]+$/u.test(text)) throw new Error(`${JSON.stringify(text)} is no name that a text may hold`);
  return new Label(text);
}

/** A number to ten digits, as the solver reads it. Throws for what is not finite. */
export function numberText(value: number): string {
  if (!Number.isFinite(value)) throw new Error(`${value} is no number that a dictionary may hold`);
  // -0 would read back as a number too, but not look like one.
  return String(Number(value.toPrecision(10)) + 0);
}

/**
 * What a template may write with `<%= %>`: a finite number, a word, a truth value, a list of such (in round brackets), a label.
 * Everything that comes from a study or a body passes here; there is no other way into a written file.
 */
export function templateText(value: unknown): string {
  if (typeof value === "number") return numberText(value);
  if (typeof value === "string") return word(value);
  if (typeof value === "boolean") return value ? "true" : "false";
  if (Array.isArray(value)) return `(${value.map(templateText).join(" ")})`;
  if (value instanceof Label) return value.text;
  throw new Error(`a template was given ${value === null ? "null" : typeof value}`);
}

/** Head of a dictionary, as the solver's own tools write it. */
export const header = (kind: string, object: string): string => `FoamFile
{
    version     2.0;
    format      ascii;
    class       ${word(kind)};
    object      ${word(object)};
}
`;
