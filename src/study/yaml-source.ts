import {
  type Document,
  isAlias,
  isMap,
  isScalar,
  isSeq,
  LineCounter,
  type Node,
  parseDocument,
  visit,
  type YAMLError,
  type YAMLMap,
} from "yaml";
import { inputProblem, type Problem } from "../errors.js";
import { printable } from "./message-text.js";

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
/** Nesting of brackets and of `- ` within a line; a study needs four levels. The parser recurses, and slows down with depth. */
const DEEPEST = 40;
/** Opening brackets and quotes: a text of nothing else costs the parser the square of their number. */
const MOST_MARKS = 10_000;

/**
 * Reads YAML 1.2 with its positions. `name` is how messages call the file.
 *
 * @throws Problem(input) `study-syntax`, `study-duplicate-key`, `study-too-large`, `study-too-deep`, `study-aliases`.
 */
export function readYaml(text: string, name: string): YamlSource {
  const lines = new LineCounter();
  const position = (offset: number): Position => {
    const { line, col } = lines.linePos(offset);
    return { line: Math.max(1, line), column: Math.max(1, col) };
  };
  const problem = (code: string, message: string, offset: number | null, remedy: string): Problem => {
    const place = offset === null ? null : position(offset);
    return inputProblem({
      code,
      message: printable(message),
      where: place ? `${name}:${place.line}:${place.column}` : name,
      remedy,
    });
  };
  if ((text.match(/[[{"']/g)?.length ?? 0) > MOST_MARKS)
    throw problem(
      "study-too-large",
      `The text holds more than ${MOST_MARKS} brackets and quotes; no study needs as many.`,
      null,
      "Name the study file, not another kind of file.",
    );
  if (nestsTooDeep(text))
    throw problem(
      "study-too-deep",
      `The text is nested more than ${DEEPEST} deep; a study needs four levels.`,
      null,
      "Remove the stray brackets or indentation.",
    );

  const document = parseDocument(text, {
    lineCounter: lines,
    prettyErrors: false,
    uniqueKeys: false,
    version: "1.2",
    schema: "core",
  });
  const fault = document.errors[0] ?? document.warnings[0];
  if (fault !== undefined) throw syntaxProblem(fault, text, problem);
  checkKeys(document, problem);
  let value: unknown;
  try {
    value = document.toJS({ maxAliasCount: MOST_ALIASES });
  } catch (error) {
    if (!(error instanceof ReferenceError)) throw error;
    throw problem(
      "study-aliases",
      `The aliases (*name) of the text expand to more than ${MOST_ALIASES} values.`,
      null,
      "Write the values out.",
    );
  }
  return { value, at: (path, what = "value") => position(offsetOf(document, path, what)) };
}

type MakeProblem = (code: string, message: string, offset: number | null, remedy: string) => Problem;

function syntaxProblem(fault: YAMLError, text: string, problem: MakeProblem): Problem {
  const start = fault.pos[0];
  if (fault.code === "MULTIPLE_DOCS")
    return problem(
      "study-syntax",
      "The file holds more than one YAML document.",
      start,
      "Remove the line --- and what follows it.",
    );
  const first = fault.message.split("\n")[0]!.trim().slice(0, 160);
  const line = text.slice(text.lastIndexOf("\n", start - 1) + 1, start + 1);
  return problem(
    "study-syntax",
    `The text is not valid YAML: ${first}${/[.!?]$/.test(first) ? "" : "."}`,
    start,
    /^\s*\t/.test(line)
      ? "Indent with blanks; YAML takes no tabs."
      : "Check indentation, brackets and quotes at this place; a text that holds ': ' or ' #' needs quotes.",
  );
}

/** Keys must be plain words, each once as text too (`1` and `"1"` are one key here), and aliases must refer to what is complete. */
function checkKeys(document: Document, problem: MakeProblem): void {
  let aliases = 0;
  visit(document, {
    Map(_, map: YAMLMap) {
      const seen = new Set<string>();
      for (const { key } of map.items) {
        const offset = (key as Node | null)?.range?.[0] ?? map.range?.[0] ?? 0;
        if (!isScalar(key) || key.value === null || key.value === "")
          throw problem("study-syntax", "A key must be a plain word.", offset, "Write a word and a colon, or remove the entry.");
        const word = String(key.value);
        // The one key that a plain object would not hold as its own.
        if (word === "__proto__") throw problem("study-unknown-key", `Unknown key '${word}'.`, offset, "Remove or rename the key.");
        if (seen.has(word))
          throw problem("study-duplicate-key", `The key '${word.slice(0, 60)}' is there twice.`, offset, "Keep one of the two.");
        seen.add(word);
      }
    },
    Alias(_, alias, above) {
      if (++aliases > MOST_ALIASES)
        throw problem("study-aliases", `The text holds more than ${MOST_ALIASES} aliases (*name).`, null, "Write the values out.");
      const target = alias.resolve(document);
      const offset = alias.range?.[0] ?? 0;
      if (target === undefined)
        throw problem("study-aliases", `The alias *${alias.source} refers to no anchor before it.`, offset, "Write the value out.");
      if (above.includes(target))
        throw problem(
          "study-aliases",
          `The alias *${alias.source} stands within what it refers to.`,
          offset,
          "Write the value out.",
        );
    },
  });
}

/** Offset in the text of the value at a path or of its key; of the nearest place above where there is none. */
function offsetOf(document: Document, path: readonly PropertyKey[], what: "key" | "value"): number {
  let node: unknown = document.contents;
  let offset = (node as Node | null)?.range?.[0] ?? 0;
  for (const [depth, step] of path.entries()) {
    if (isAlias(node)) node = node.resolve(document);
    if (isMap(node)) {
      const pair = node.items.find((item) => isScalar(item.key) && String(item.key.value) === String(step));
      if (pair === undefined) return offset;
      const key = pair.key as Node;
      const value = pair.value as Node | null;
      const wantsKey = (depth === path.length - 1 && what === "key") || !value?.range;
      offset = (wantsKey ? key : value).range?.[0] ?? offset;
      node = value;
    } else if (isSeq(node)) {
      node = node.items[Number(step)];
      offset = (node as Node | undefined)?.range?.[0] ?? offset;
    } else return offset;
  }
  return offset;
}

/** Whether brackets are open, list dashes stand in a row or lines are indented deeper than allowed; what is quoted counts too. */
function nestsTooDeep(text: string): boolean {
  let open = 0;
  let dashes = 0;
  for (let at = 0; at < text.length; at++) {
    const c = text.charCodeAt(at);
    if (c === 91 || c === 123) open++;
    else if ((c === 93 || c === 125) && open > 0) open--;
    if (c === 10) dashes = 0;
    else if ((c === 45 || c === 63) && (text.charCodeAt(at + 1) === 32 || text.charCodeAt(at + 1) === 9)) dashes++;
    if (open > DEEPEST || dashes > DEEPEST) return true;
  }
  return indentLevels(text) > DEEPEST;
}

/** Greatest number of ever deeper indents that stand above each other. */
function indentLevels(text: string): number {
  const indents: number[] = [];
  let most = 0;
  for (const line of text.matchAll(/^( *)[^ \r\n]/gm)) {
    const indent = line[1]!.length;
    while (indents.length > 0 && indents.at(-1)! >= indent) indents.pop();
    indents.push(indent);
    most = Math.max(most, indents.length);
  }
  return most;
}
