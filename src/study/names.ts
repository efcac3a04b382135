/** Longest name of a study, a variant or a rule. With the speed and a path around it a folder stays far below 255 bytes. */
export const LONGEST_NAME = 60;

/**
 * The pattern of names for the schema, in the syntax that all readers of schemas share: it knows no classes of letters, so it lets
 * everything from U+00AA on pass. `nameFault` decides.
 */
export const NAME_PATTERN = "^[A-Za-z0-9\\u00aa-\\uffff]([A-Za-z0-9 _.+\\u00aa-\\uffff-]*[A-Za-z0-9_.+\\u00aa-\\uffff-])?$";

/** Letters that Unicode does not take apart into a base letter and a mark. */
const plainLetters: Record<string, string> = { ß: "ss", æ: "ae", œ: "oe", ø: "o", đ: "d", ð: "d", þ: "th", ł: "l", ı: "i" };

/**
 * What makes `name` unfit to name a study, a variant or a rule; null when it is fit. Names reach folders, dictionaries, job scripts
 * and reports: letters, digits, blank and `-` `_` `.` `+`, beginning with a letter or digit, at most 60 characters.
 */
export function nameFault(name: string): string | null {
  if (name.trim() === "") return "is empty";
  if (name !== name.trim()) return "begins or ends with a blank";
  if (name.length > LONGEST_NAME) return `has ${name.length} characters; ${LONGEST_NAME} is the most`;
  const bad = Array.from(name).find((letter) => !/[\p{L}\p{M}\p{N} _.+-]/u.test(letter));
  if (bad !== undefined) return `holds ${JSON.stringify(bad)}; letters, digits, blanks and - _ . + are possible`;
  if (!/^[\p{L}\p{N}]/u.test(name)) return "does not begin with a letter or digit";
  if (name.includes("..")) return 'holds ".."';
  if (folderName(name) === "") return "has no letter a-z and no digit that a folder could be named by";
  return null;
}

/**
 * Folder name made of a name: lower case `[a-z0-9][a-z0-9_.-]*`, without accents; every other run of characters is one hyphen.
 * Empty when nothing is left.
 */
export function folderName(name: string): string {
  return Array.from(name.toLowerCase().normalize("NFKD"), (letter) => plainLetters[letter] ?? letter)
    .join("")
    .replace(/\p{M}+/gu, "")
    .replace(/[^a-z0-9_.]+/g, "-")
    .replace(/\.{2,}/g, ".")
    .replace(/^[-_.]+|[-_.]+$/g, "");
}
