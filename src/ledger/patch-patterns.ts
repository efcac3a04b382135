import type { BoundaryPatch } from "../openfoam/boundary.js";

/** One word of a patch selection: a bare word is a name, a quoted string a regular expression. */
export interface PatchWord {
  text: string;
  quoted: boolean;
}

const longestPattern = 200;
const longestName = 200;
/** Repetitions in one pattern: each multiplies the time of a search by the length of the name. */
const mostRepetitions = 3;

/**
 * Names of the patches that a selection means: each word is a patch or a patch group; a quoted word is an expression over either, as the
 * solver reads it. Null when it cannot be told: patterns come from files of others, and one that could keep the search busy for ever
 * (repeated groups, many repetitions) or that is no expression here is not tried.
 */
export function selectedPatches(words: readonly PatchWord[], patches: readonly BoundaryPatch[]): string[] | null {
  if (patches.some(({ name, groups }) => [name, ...groups].some((each) => each.length > longestName))) return null;
  const tests: ((name: string) => boolean)[] = [];
  for (const { text, quoted } of words) {
    if (!quoted) {
      tests.push((name) => name === text);
      continue;
    }
    const pattern = expressionOf(text);
    if (pattern === null) return null;
    tests.push((name) => name === text || pattern.test(name));
  }
  const selected = (name: string): boolean => tests.some((test) => test(name));
  return patches.filter(({ name, groups }) => selected(name) || groups.some(selected)).map(({ name }) => name);
}

function expressionOf(text: string): RegExp | null {
  const repetitions = text.match(/[*+{]/g)?.length ?? 0;
  const repeatedGroup = /\)[*+?{]/;
  const beyond = /\(\?|\\[1-9]|\[\[/;
  if (text.length > longestPattern || repetitions > mostRepetitions || repeatedGroup.test(text) || beyond.test(text)) return null;
  try {
    return new RegExp(`^(?:${text})$`);
  } catch {
    return null;
  }
}
