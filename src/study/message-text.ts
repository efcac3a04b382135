/** Text for a message: one line, nothing in it that a terminal would obey or that turns the direction of writing. */
export const printable = (text: string): string => text.replace(/[\p{Cc}\p{Cf}\p{Co}\p{Cs}\u2028\u2029]+/gu, "?");

const LONGEST = 60;

/** A value as a message shows it: one line, at most 60 characters. */
export function shownValue(value: unknown): string {
  let text: string;
  try {
    text = typeof value === "number" ? String(value) : (JSON.stringify(value) ?? String(value));
  } catch {
    // Aliases can make a list that holds itself.
    return Array.isArray(value) ? "a list" : "a block of keys";
  }
  const line = printable(text);
  return line.length > LONGEST ? `${line.slice(0, LONGEST - 3)}...` : line;
}

/** At most ten names, then how many more. */
export function listed(names: readonly string[]): string {
  const shown = names
    .slice(0, 10)
    .map((name) => printable(name.slice(0, LONGEST)))
    .join(", ");
  return names.length > 10 ? `${shown} and ${names.length - 10} more` : shown;
}

/** Such as `x, y or z`. */
export const alternatives = (words: readonly unknown[]): string =>
  words.length === 1 ? String(words[0]) : `${words.slice(0, -1).join(", ")} or ${words.at(-1)}`;
