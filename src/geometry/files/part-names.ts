/**
 * Names the case gives to its own boundaries and regions, or that the solver treats specially. A part of the body must not take
 * one, whatever its case: the wall of the body and the wall of the domain would be one patch.
 */
export const reservedPatchNames: readonly string[] = [
  "inlet",
  "outlet",
  "ground",
  "sky",
  "side",
  "left",
  "right",
  "symmetry",
  "body",
  "whole",
  "total",
  "wheels",
  "defaultFaces",
  "oldInternalFaces",
  "internalMesh",
  "internalField",
  "boundaryField",
  "all",
  "none",
  "default",
  "include",
  "true",
  "false",
  "yes",
  "no",
  "on",
  "off",
];

/** Folder and file names are made of patch names, and most file systems stop at 255 bytes. */
const LONGEST = 60;

/** Letters that Unicode does not take apart into a base letter and a mark. */
const letters: Record<string, string> = {
  ß: "ss",
  ẞ: "SS",
  æ: "ae",
  Æ: "AE",
  œ: "oe",
  Œ: "OE",
  ø: "o",
  Ø: "O",
  đ: "d",
  Đ: "D",
  ð: "d",
  Ð: "D",
  þ: "th",
  Þ: "Th",
  ł: "l",
  Ł: "L",
  ı: "i",
};

/**
 * Makes part names safe for the solver's dictionaries, for file names and for a shell: `[A-Za-z][A-Za-z0-9_-]*`, at most 60
 * letters, none reserved (`reservedPatchNames`, and the prefix the solver keeps for the seams between processes), no two alike
 * even where case does not count. The result has the order of the input and depends on nothing else.
 *
 * Accents are dropped, other letters outside ASCII that have no plain form are left out, every other run of characters becomes
 * one hyphen. A name that was already safe stays as it is before any other name is given out, so that adding an odd name to a
 * body does not rename a clean one.
 */
export function cleanPatchNames(names: string[]): string[] {
  const result = new Array<string>(names.length);
  const taken = new Set(reservedPatchNames.map((name) => name.toLowerCase()));
  const claim = (index: number, wanted: string): void => {
    let name = wanted;
    for (let k = 2; taken.has(name.toLowerCase()); k++) name = `${wanted.slice(0, LONGEST - String(k).length - 1)}-${k}`;
    taken.add(name.toLowerCase());
    result[index] = name;
  };
  const later: number[] = [];
  names.forEach((name, index) => {
    if (plain(name) === name && !taken.has(name.toLowerCase())) claim(index, name);
    else later.push(index);
  });
  for (const index of later) {
    const name = plain(names[index]);
    claim(index, isReserved(name) ? `${name}-part` : name);
  }
  return result;
}

const isReserved = (name: string): boolean => reservedPatchNames.some((reserved) => reserved.toLowerCase() === name.toLowerCase());

function plain(name: string): string {
  const ascii = Array.from(name.normalize("NFKD"), (letter) => letters[letter] ?? letter)
    .join("")
    .replace(/\p{M}+/gu, "");
  const joined = ascii
    .replace(/[^A-Za-z0-9_-]+/g, "-")
    .replace(/-{2,}/g, "-")
    .replace(/^-+|-+$/g, "");
  const started = joined === "" ? "part" : /^[A-Za-z]/.test(joined) ? joined : `part-${joined.replace(/^[_-]+/, "")}`;
  const own = /^(procBoundary|processor)/i.test(started) ? `part-${started}` : started;
  return own.slice(0, LONGEST).replace(/-+$/, "");
}

const NAME_LIMIT = 200;
const strict = new TextDecoder("utf-8", { fatal: true });

/**
 * The name of a part as people read it, from the bytes of a file: UTF-8, or Latin-1 where it is not; without control characters
 * and marks that turn the direction of writing, which could forge lines of a terminal or a report; at most 200 characters.
 */
export function partName(bytes: Uint8Array): string {
  let text: string;
  try {
    text = strict.decode(bytes);
  } catch {
    text = Buffer.from(bytes.buffer, bytes.byteOffset, bytes.byteLength).toString("latin1");
  }
  return text
    .replace(/[\p{Cc}\p{Cf}\u2028\u2029]+/gu, " ")
    .trim()
    .slice(0, NAME_LIMIT);
}
