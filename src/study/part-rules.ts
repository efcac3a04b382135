import { inputProblem } from "../errors.js";
import { listed, printable } from "./message-text.js";
import type { PartRule } from "./study.js";

/**
 * Whether a pattern matches a whole name. `*` stands for any run of characters, also none; everything else for itself, case
 * included. Takes time proportional to the product of the lengths at worst, whatever the pattern.
 */
export function matchesPattern(pattern: string, name: string): boolean {
  let p = 0;
  let n = 0;
  let star = -1;
  let resume = 0;
  while (n < name.length) {
    if (pattern[p] === "*") {
      star = p++;
      resume = n;
    } else if (p < pattern.length && pattern[p] === name[n]) {
      p++;
      n++;
    } else if (star >= 0) {
      p = star + 1;
      n = ++resume;
    } else return false;
  }
  while (pattern[p] === "*") p++;
  return p === pattern.length;
}

/** The rule that holds for a part: the first whose pattern matches its name (as in the file, not the patch); null when none does. */
export function ruleFor(rules: readonly PartRule[], part: string): PartRule | null {
  return rules.find((rule) => matchesPattern(rule.match, part)) ?? null;
}

/** The parts that the rules call rotating, in the order given. */
export function rotatingParts(rules: readonly PartRule[], parts: readonly string[]): string[] {
  return parts.filter((part) => ruleFor(rules, part)?.rotating === true);
}

/**
 * Refuses rules that match no part at all. `parts`: the part names of all variants together, since a rule may be about a part
 * that only one of them has. `where`: the study file.
 *
 * @throws Problem(input) `rule-without-part`.
 */
export function requireMatches(rules: readonly PartRule[], parts: readonly string[], where: string): void {
  const names = [...new Set(parts)];
  const idle = rules.find((rule) => !names.some((name) => matchesPattern(rule.match, name)));
  if (idle === undefined) return;
  throw inputProblem({
    code: "rule-without-part",
    message: `The pattern "${printable(idle.match)}" of the rule '${idle.name}' matches no part of any variant; the parts are: ${listed(names)}.`,
    where: `${where} (parts.${idle.name}.match)`,
    remedy: "Correct the pattern (case counts, * stands for any run of characters), or remove the rule.",
  });
}
