import { inputProblem } from "../errors.js";
import type { Vector3 } from "../geometry/vector.js";
import { type DictionaryToken, tokensOf } from "./dictionary-tokens.js";

/** `( ... )`: items are numbers, words, lists or dictionaries. */
export interface DictionaryList {
  kind: "list";
  items: DictionaryValue[];
}

/** A bare word, a quoted string, or text that is kept as it stands (`#calc "..."`, `$name`, `#{ ... #}`) and never run. */
export interface DictionaryText {
  kind: "word" | "string" | "directive";
  text: string;
}

export type DictionaryValue = number | DictionaryText | DictionaryList | Dictionary;

/** A dictionary of the solver as data. Nothing in it is ever executed or included: directives stay text. */
export interface Dictionary {
  kind: "dictionary";
  /**
   * Entries in order of the file; of a repeated key the last value stands, repeated sub-dictionaries are merged, as the solver
   * does. A value has one or more items (`nu [0 2 -1 0 0 0 0] 1e-05;` has two). Keys that are patterns keep their quotes off and
   * are named in `patterns`.
   */
  entries: Map<string, DictionaryValue[]>;
  /** Keys that were quoted: regular expressions of the solver. */
  patterns: Set<string>;
  /** Items without a key, such as the count and list of `polyMesh/boundary`. */
  loose: DictionaryValue[];
  /** Directives found here (`#include "..."`, `#includeEtc ...`): kept as text. */
  directives: string[];
}

/** Deeper nesting is an attack, not a case. */
const deepest = 100;
/** Values that `$name` may copy in one file; a few lines could otherwise grow without bound. */
const mostCopied = 200_000;
/** Boundary files of thousands of patches stay far below. */
const mostCharacters = 64 * 1024 * 1024;

/**
 * Parses the solver's dictionary syntax: comments, nested dictionaries, lists, quoted strings and patterns, dimensions, `$name`
 * of the same file (replaced by its value when it stands alone and was defined before; otherwise kept as text), directives and
 * code blocks (kept as text). Nothing is executed, no other file is read.
 *
 * @param name file name for messages
 * @throws Problem (input) with the line where the syntax breaks
 */
export function parseDictionary(text: string, name: string): Dictionary {
  if (text.length > mostCharacters) {
    throw inputProblem({
      code: "dictionary-too-large",
      message: `the dictionary has ${text.length} characters, more than the ${mostCharacters} that are read`,
      where: name,
      remedy: "Give the dictionary of a case.",
    });
  }
  const parser = new Parser(tokensOf(text, name), name);
  return parser.dictionary(0, null);
}

class Parser {
  private at = 0;
  private copied = 0;

  constructor(
    private readonly tokens: readonly DictionaryToken[],
    private readonly name: string,
  ) {}

  /** Reads entries up to `}` (or the end of the file at depth 0). */
  dictionary(depth: number, outer: Scope | null): Dictionary {
    const found = emptyDictionary();
    const scope: Scope = { own: found, outer };
    for (;;) {
      const token = this.tokens[this.at];
      if (token === undefined) {
        if (depth === 0) return found;
        throw this.broken("the file ends inside a dictionary: a closing } is missing");
      }
      if (token.kind === "}") {
        if (depth === 0) throw this.broken("a closing } has no opening {");
        this.at += 1;
        return found;
      }
      if (token.kind === ";") this.at += 1;
      else if (token.kind === "directive") this.directive(found);
      else this.entry(found, scope, depth);
    }
  }

  /** `#include "x"`, `#includeEtc <x>`, `#remove (a b)`: kept as text with what follows on the same line. */
  private directive(into: Dictionary): void {
    const { line, text } = this.tokens[this.at++]!;
    const parts = [text];
    let open = 0;
    do {
      const next = this.tokens[this.at];
      if (next === undefined || next.line !== line || next.kind === "}" || next.kind === ";") break;
      if (next.kind === "(") open += 1;
      if (next.kind === ")") open -= 1;
      parts.push(next.text);
      this.at += 1;
    } while (open > 0);
    into.directives.push(parts.join(" "));
  }

  private entry(into: Dictionary, scope: Scope, depth: number): void {
    const first = this.tokens[this.at]!;
    const next = this.tokens[this.at + 1];
    const keyed = (first.kind === "word" || first.kind === "string" || first.kind === "number") && next !== undefined;
    if (keyed && next.kind === "{") {
      this.at += 2;
      this.guard(depth);
      this.set(into, first, [this.dictionary(depth + 1, scope)]);
      return;
    }
    // A list or number without a key stands at the top of boundary files.
    if (first.kind === "(" || (first.kind === "number" && next?.kind === "(")) {
      into.loose.push(this.value(scope, depth));
      return;
    }
    if (!keyed) {
      if (first.kind === "variable") {
        this.at += 1;
        const dictionary = lookUp(scope, first.text);
        // `$name;` alone in a dictionary merges that dictionary into it.
        if (dictionary?.length === 1 && isDictionary(dictionary[0])) mergeInto(into, this.copy(dictionary[0]) as Dictionary);
        else into.directives.push(first.text);
        return;
      }
      throw this.broken(`unexpected ${first.text === "" ? first.kind : first.text}`);
    }
    this.at += 1;
    const values: DictionaryValue[] = [];
    for (;;) {
      const token = this.tokens[this.at];
      if (token === undefined) throw this.broken(`the file ends inside the entry ${first.text}: a ; is missing`);
      if (token.kind === ";") {
        this.at += 1;
        break;
      }
      if (token.kind === "}") throw this.broken(`the entry ${first.text} has no ; before the closing }`);
      if (token.kind === ")") throw this.broken("a closing ) has no opening (");
      const referred = token.kind === "variable" ? lookUp(scope, token.text) : undefined;
      if (referred !== undefined) {
        this.at += 1;
        for (const value of referred) values.push(this.copy(value));
      } else values.push(this.value(scope, depth));
    }
    this.set(into, first, values);
  }

  private set(into: Dictionary, key: DictionaryToken, values: DictionaryValue[]): void {
    if (key.kind === "string") into.patterns.add(key.text);
    const before = into.entries.get(key.text);
    const [value] = values;
    if (before?.length === 1 && isDictionary(before[0]) && isDictionary(value)) mergeInto(before[0], value);
    else into.entries.set(key.text, values);
  }

  private value(scope: Scope, depth: number): DictionaryValue {
    const token = this.tokens[this.at++]!;
    switch (token.kind) {
      case "number":
        return token.value;
      case "string":
      case "word":
        return { kind: token.kind, text: token.text };
      case "variable":
      case "directive":
        return { kind: "directive", text: token.text };
      case "{":
        this.guard(depth);
        return this.dictionary(depth + 1, scope);
      case "(":
      case "[":
        this.guard(depth);
        return this.list(token.kind === "(" ? ")" : "]", scope, depth + 1);
      default:
        this.at -= 1;
        throw this.broken(`unexpected ${token.text === "" ? token.kind : token.text}`);
    }
  }

  private list(closing: ")" | "]", scope: Scope, depth: number): DictionaryList {
    const items: DictionaryValue[] = [];
    for (;;) {
      const token = this.tokens[this.at];
      if (token === undefined) throw this.broken(`the file ends inside a list: a closing ${closing} is missing`);
      if (token.kind === closing) {
        this.at += 1;
        return { kind: "list", items };
      }
      if (token.kind === ";") {
        this.at += 1;
        continue;
      }
      const referred = token.kind === "variable" ? lookUp(scope, token.text) : undefined;
      if (referred !== undefined) {
        this.at += 1;
        for (const value of referred) items.push(this.copy(value));
        continue;
      }
      items.push(this.value(scope, depth));
    }
  }

  /** A value of its own, so that later merging does not reach the one it came from. */
  private copy(value: DictionaryValue, depth = 0): DictionaryValue {
    this.copied += 1;
    if (this.copied > mostCopied) throw this.broken(`$ references copy more than ${mostCopied} values`);
    this.guard(depth);
    if (typeof value === "number") return value;
    const inside = (values: DictionaryValue[]): DictionaryValue[] => values.map((each) => this.copy(each, depth + 1));
    if (value.kind === "list") return { kind: "list", items: inside(value.items) };
    if (value.kind !== "dictionary") return { ...value };
    const entries = new Map([...value.entries].map(([key, values]) => [key, inside(values)]));
    return { ...value, entries, patterns: new Set(value.patterns), loose: inside(value.loose), directives: [...value.directives] };
  }

  private guard(depth: number): void {
    if (depth >= deepest) throw this.broken(`brackets are nested more than ${deepest} deep`);
  }

  private broken(message: string): Error {
    const line = this.tokens[Math.min(this.at, this.tokens.length - 1)]?.line ?? 1;
    return inputProblem({
      code: "dictionary-syntax",
      message,
      where: `${this.name}, line ${line}`,
      remedy: "Correct the dictionary; the solver would stop at the same place.",
    });
  }
}

interface Scope {
  own: Dictionary;
  outer: Scope | null;
}

/** `$name`, `${name}`, `$..name`, `$:a.b`: looked for in the scopes outwards, never further than what was read so far. */
function lookUp(scope: Scope, text: string): DictionaryValue[] | undefined {
  const path = text.replace(/^\$\{?/, "").replace(/\}$/, "");
  let from: Scope | null = scope;
  let name = path;
  if (name.startsWith(":")) {
    while (from.outer !== null) from = from.outer;
    name = name.slice(1);
    return name === "" ? undefined : descend(from.own, name.split(/[./]/));
  }
  if (name.startsWith(".")) {
    name = name.slice(1);
    while (name.startsWith(".") && from !== null) {
      name = name.slice(1);
      from = from.outer;
    }
    return from === null ? undefined : descend(from.own, name.split("."));
  }
  for (; from !== null; from = from.outer) {
    const found = from.own.entries.get(name) ?? descend(from.own, name.split("."));
    if (found !== undefined) return found;
  }
  return undefined;
}

function descend(dictionary: Dictionary, keys: readonly string[]): DictionaryValue[] | undefined {
  let inside: Dictionary = dictionary;
  for (const key of keys.slice(0, -1)) {
    const [value] = inside.entries.get(key) ?? [];
    if (!isDictionary(value)) return undefined;
    inside = value;
  }
  return inside.entries.get(keys.at(-1)!);
}

function mergeInto(into: Dictionary, from: Dictionary): void {
  for (const [key, values] of from.entries) {
    const before = into.entries.get(key);
    if (before?.length === 1 && isDictionary(before[0]) && isDictionary(values[0])) mergeInto(before[0], values[0]);
    else into.entries.set(key, values);
  }
  for (const pattern of from.patterns) into.patterns.add(pattern);
  into.loose.push(...from.loose);
  into.directives.push(...from.directives);
}

const emptyDictionary = (): Dictionary => ({
  kind: "dictionary",
  entries: new Map(),
  patterns: new Set(),
  loose: [],
  directives: [],
});

export const isDictionary = (value: DictionaryValue | undefined): value is Dictionary =>
  typeof value === "object" && value.kind === "dictionary";

/** The value at a path of keys; undefined when it is not there. */
export function valuesAt(dictionary: Dictionary, ...keys: string[]): DictionaryValue[] | undefined {
  return keys.length === 0 ? undefined : descend(dictionary, keys);
}

export function dictionaryAt(dictionary: Dictionary, ...keys: string[]): Dictionary | undefined {
  const [value] = valuesAt(dictionary, ...keys) ?? [];
  return isDictionary(value) ? value : undefined;
}

/** The last number of an entry: `1.225`, and the value of `nu [0 2 -1 0 0 0 0] 1.5e-05` or `rhoInf rhoInf [...] 1.2`. */
export function numberAt(dictionary: Dictionary, ...keys: string[]): number | undefined {
  return valuesAt(dictionary, ...keys)?.findLast((value) => typeof value === "number");
}

/** The first word or quoted string of an entry; undefined for numbers, lists, directives. */
export function wordAt(dictionary: Dictionary, ...keys: string[]): string | undefined {
  const [value] = valuesAt(dictionary, ...keys) ?? [];
  return textOf(value);
}

/** Three numbers in brackets (`(1 0 0)`, `uniform (30 0 0)`). */
export function vectorAt(dictionary: Dictionary, ...keys: string[]): Vector3 | undefined {
  const list = valuesAt(dictionary, ...keys)?.findLast((value) => typeof value === "object" && value.kind === "list");
  if (typeof list !== "object" || list.kind !== "list" || list.items.length !== 3) return undefined;
  return list.items.every((item) => typeof item === "number") ? (list.items as Vector3) : undefined;
}

/** Words and strings of a list entry, such as the patches of a function object; a single word counts as a list of one. */
export function wordsAt(dictionary: Dictionary, ...keys: string[]): string[] | undefined {
  const values = valuesAt(dictionary, ...keys);
  const list = values?.find((value) => typeof value === "object" && value.kind === "list");
  const items = typeof list === "object" && list.kind === "list" ? list.items : values;
  return items?.map(textOf).filter((text) => text !== undefined);
}

const textOf = (value: DictionaryValue | undefined): string | undefined =>
  typeof value === "object" && (value.kind === "word" || value.kind === "string") ? value.text : undefined;
