import { isAlias, isMap, isScalar, isSeq, LineCounter, type Node, type Pair, parseDocument, visit } from "yaml";
import { inputProblem } from "../errors.js";

export interface Position {
  /** from 1 */
  line: number;
  column: number;
}

/** A YAML text as plain data that still knows where everything stands. */
export interface YamlSource {
  value: unknown;
  /** Where the value at a path begins, or its key; a path that does not exist gives the nearest place above it. */
  at(path: readonly PropertyKey[], what?: "key" | "value"): Position;
}

/** Aliases that may be followed before a text is taken for an attack on memory. */
const MOST_ALIASES = 100;
const DEEPEST = 64;

/**
 * Reads YAML 1.2 with its positions. `name` is how messages call the file.
 *
 * @throws Problem(input) `study-syntax`, `study-duplicate-key`, `study-too-deep`, `study-aliases`.
 */
export function readYaml(text: string, name: string): YamlSource {
  const lines = new LineCounter();
  const position = (offset: number): Position => {
    const { line, col } = lines.linePos(offset);
    return { line: Math.max(1, line), column: Math.max(1, col) };
  };
  const place = (offset: number): string => {
    const { line, column } = position(offset);
    return `${name}:${line}:${column}`;
  };
  const tooDeep = (where: string) =>
    inputProblem({
      code: "study-too-deep",
      message: `The text is nested more than ${DEEPEST} deep; a study needs four levels.`,
      where,
      remedy: "Remove the stray brackets or indentation.",
    });
  if (deepBrackets(text) > DEEPEST) throw tooDeep(name);

  let document: ReturnType<typeof parseDocument>;
  try {
    document = parseDocument(text, { lineCounter: lines, prettyErrors: false, uniqueKeys: true, version: "1.2", schema: "core" });
  } catch (error) {
    if (error instanceof RangeError) throw tooDeep(name);
    throw error;
  }
  const fault = document.errors[0] ?? document.warnings[0];
  if (fault !== undefined) {
    const start = fault.pos[0];
    if (fault.code === "DUPLICATE_KEY") {
      const key = /^[^\s:]+/.exec(text.slice(start))?.[0] ?? "";
      throw inputProblem({
        code: "study-duplicate-key",
        message: `The key '${key.slice(0, 60)}' is there twice.`,
        where: place(start),
        remedy: "Keep one of the two.",
      });
    }
    throw inputProblem({
      code: "study-syntax",
      message: `The text is not valid YAML: ${sentence(fault.message)}`,
      where: place(start),
      remedy: syntaxRemedy(text, start),
    });
  }
  visit(document, {
    Pair(_, pair: Pair) {
      const key = pair.key as Node;
      if (isScalar(key) && key.value !== "__proto__" && key.value !== null) return;
      throw inputProblem({
        code: "study-syntax",
        message: isScalar(key) && key.value !== null ? `'${String(key.value)}' cannot be a key.` : "A key must be a plain word.",
        where: place(key?.range?.[0] ?? 0),
        remedy: "Rename the key.",
      });
    },
  });
  let value: unknown;
  try {
    value = document.toJS({ maxAliasCount: MOST_ALIASES });
  } catch (error) {
    if (error instanceof RangeError) throw tooDeep(name);
    if (!(error instanceof ReferenceError)) throw error;
    throw inputProblem({
      code: "study-aliases",
      message: "The aliases (*name) of the text cannot be followed: they refer to each other too often, or to nothing.",
      where: name,
      remedy: "Write the values out.",
    });
  }

  return {
    value,
    at(path, what = "value") {
      let node: unknown = document.contents;
      let offset = isScalar(node) || isMap(node) || isSeq(node) ? (node.range?.[0] ?? 0) : 0;
      path.forEach((step, depth) => {
        if (isAlias(node)) node = node.resolve(document);
        const last = depth === path.length - 1;
        if (isMap(node)) {
          const pair = node.items.find((item) => isScalar(item.key) && String(item.key.value) === String(step));
          const target = pair && ((last && what === "key") || !(pair.value as Node | null)?.range ? pair.key : pair.value);
          offset = (target as Node | undefined)?.range?.[0] ?? offset;
          node = pair?.value;
        } else if (isSeq(node)) {
          node = node.items[Number(step)];
          offset = (node as Node | undefined)?.range?.[0] ?? offset;
        } else node = undefined;
      });
      return position(offset);
    },
  };
}

/** Greatest depth of open brackets, quotes not looked at: a bound that costs nothing, ahead of a parser that recurses. */
function deepBrackets(text: string): number {
  let depth = 0;
  let deepest = 0;
  for (let at = 0; at < text.length; at++) {
    const c = text.charCodeAt(at);
    if (c === 91 || c === 123) deepest = Math.max(deepest, ++depth);
    else if ((c === 93 || c === 125) && depth > 0) depth--;
  }
  return deepest;
}

const sentence = (message: string): string => {
  const first = message.split("\n")[0]!.trim().slice(0, 160);
  return /[.!?]$/.test(first) ? first : `${first}.`;
};

function syntaxRemedy(text: string, offset: number): string {
  const before = text.slice(text.lastIndexOf("\n", offset - 1) + 1, offset + 1);
  if (/^\s*\t/.test(before)) return "Indent with blanks; YAML does not take tabs.";
  return "Check indentation, brackets and quotes at this place; a text that holds ': ' or '#' needs quotes.";
}
