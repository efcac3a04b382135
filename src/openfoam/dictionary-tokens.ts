import { inputProblem } from "../errors.js";

/** A piece of a dictionary file. `variable` is `$name`, `directive` a `#word` or a code block with what belongs to it. */
export interface DictionaryToken {
  kind: "{" | "}" | "(" | ")" | "[" | "]" | ";" | "word" | "string" | "number" | "variable" | "directive";
  text: string;
  /** of a number */
  value: number;
  /** from 1 */
  line: number;
}

const punctuation = new Set(["{", "}", "(", ")", "[", "]", ";"]);
const decimal = /^[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?$/;

const newline = 10;
/** Every control character counts as a blank. */
const isBlank = (code: number): boolean => code <= 32 || code === 0xa0;
/** What ends a word, besides blanks and brackets. */
const endsWord = new Set([...'";{}[]'].map((character) => character.charCodeAt(0)));

/** Splits a dictionary into tokens; comments are passed over. */
export function tokensOf(text: string, name: string): DictionaryToken[] {
  const tokens: DictionaryToken[] = [];
  let at = 0;
  let line = 1;
  const add = (kind: DictionaryToken["kind"], content: string, onLine: number, value = Number.NaN): void => {
    tokens.push({ kind, text: content, value, line: onLine });
  };
  const unclosed = (what: string, onLine: number): Error =>
    inputProblem({
      code: "dictionary-syntax",
      message: `${what} is not closed before the file ends`,
      where: `${name}, line ${onLine}`,
      remedy: "Correct the dictionary; the solver would stop at the same place.",
    });
  const countLines = (from: number, to: number): void => {
    for (let each = from; each < to; each += 1) if (text.charCodeAt(each) === newline) line += 1;
  };

  while (at < text.length) {
    const character = text[at]!;
    if (character === "\n") {
      line += 1;
      at += 1;
    } else if (isBlank(text.charCodeAt(at))) at += 1;
    else if (text.startsWith("//", at)) {
      const end = text.indexOf("\n", at);
      at = end < 0 ? text.length : end;
    } else if (text.startsWith("/*", at)) {
      const end = text.indexOf("*/", at + 2);
      if (end < 0) throw unclosed("a comment (/*)", line);
      countLines(at, end);
      at = end + 2;
    } else if (character === '"') {
      const end = stringEnd(text, at);
      if (end < 0) throw unclosed("a quoted string", line);
      add("string", text.slice(at + 1, end).replace(/\\"/g, '"'), line);
      countLines(at, end);
      at = end + 1;
    } else if (text.startsWith("#{", at)) {
      const end = text.indexOf("#}", at + 2);
      if (end < 0) throw unclosed("a code block (#{)", line);
      add("directive", text.slice(at, end + 2), line);
      countLines(at, end);
      at = end + 2;
    } else if (punctuation.has(character)) {
      add(character as DictionaryToken["kind"], character, line);
      at += 1;
    } else {
      const end = wordEnd(text, at);
      const word = text.slice(at, end);
      if (word.startsWith("$")) add("variable", word, line);
      else if (word.startsWith("#")) {
        const directive = directiveEnd(text, at, end);
        if (directive < 0) throw unclosed(`the text after ${word}`, line);
        add("directive", text.slice(at, directive), line);
        countLines(at, directive);
        at = directive;
        continue;
      } else if (decimal.test(word)) add("number", word, line, Number(word));
      else add("word", word, line);
      at = end;
    }
  }
  return tokens;
}

function stringEnd(text: string, start: number): number {
  let end = text.indexOf('"', start + 1);
  while (end >= 0) {
    let backslashes = 0;
    while (text[end - 1 - backslashes] === "\\") backslashes += 1;
    if (backslashes % 2 === 0) return end;
    end = text.indexOf('"', end + 1);
  }
  return -1;
}

/** Words may hold brackets, when they open and close inside: `div(phi,U)`, `Cl(f)`, `${name}`. */
function wordEnd(text: string, start: number): number {
  let at = start;
  let round = 0;
  let curly = 0;
  for (; at < text.length; at += 1) {
    const character = text[at]!;
    if (character === "(") {
      // A list with its count in front: `3(1 2 3)`.
      if (round === 0 && at - start < 25 && decimal.test(text.slice(start, at))) break;
      round += 1;
    } else if (character === ")") {
      if (round === 0) break;
      round -= 1;
    } else if (character === "{" && text[at - 1] === "$") curly += 1;
    else if (character === "}" && curly > 0) curly -= 1;
    else if (isBlank(text.charCodeAt(at)) || endsWord.has(text.charCodeAt(at))) break;
    else if (character === "/" && (text[at + 1] === "/" || text[at + 1] === "*")) break;
  }
  return Math.max(at, start + 1);
}

/** `#calc "..."`, `#eval{...}`, `#codeStream {...}` take what follows along; others end with their word. */
function directiveEnd(text: string, start: number, end: number): number {
  if (!/^#(?:calc|eval|codeStream|neg|ifeq|if)\b/.test(text.slice(start, end))) return end;
  let at = end;
  while (at < text.length && /[ \t\r\n]/.test(text[at]!)) at += 1;
  if (text[at] === '"') {
    const close = stringEnd(text, at);
    return close < 0 ? -1 : close + 1;
  }
  if (text.startsWith("#{", at)) {
    const close = text.indexOf("#}", at);
    return close < 0 ? -1 : close + 2;
  }
  if (text[at] !== "{") return end;
  let depth = 0;
  for (; at < text.length; at += 1) {
    if (text[at] === "{") depth += 1;
    else if (text[at] === "}" && (depth -= 1) === 0) return at + 1;
  }
  return -1;
}
