import { describe, expect, test } from "vitest";
import { type PatchWord, selectedPatches } from "../../src/ledger/patch-patterns.js";
import type { BoundaryPatch } from "../../src/openfoam/boundary.js";

const patch = (name: string, ...groups: string[]): BoundaryPatch => ({ name, type: "wall", faces: 1, groups });
const patches = [
  patch("cab", "body"),
  patch("wheel-1", "body", "wheels"),
  patch("wheel-2", "body", "wheels"),
  patch("ground"),
  patch("a.b"),
  patch("axb"),
];
const bare = (text: string): PatchWord => ({ text, quoted: false });
const quoted = (text: string): PatchWord => ({ text, quoted: true });
const select = (...words: PatchWord[]) => selectedPatches(words, patches);

describe("patches that a selection means", () => {
  test("a bare word is a patch or a group, never a pattern", () => {
    expect(select(bare("cab"))).toEqual(["cab"]);
    expect(select(bare("body"))).toEqual(["cab", "wheel-1", "wheel-2"]);
    expect(select(bare("a.b"))).toEqual(["a.b"]);
    expect(select(bare("wheel.*"))).toEqual([]);
    expect(select(bare("cab"), bare("ground"), bare("cab"))).toEqual(["cab", "ground"]);
  });

  test("a quoted word is an expression over the whole name of patches and groups", () => {
    expect(select(quoted("wheel-.*"))).toEqual(["wheel-1", "wheel-2"]);
    expect(select(quoted("wheel"))).toEqual([]);
    expect(select(quoted("whee.s"))).toEqual(["wheel-1", "wheel-2"]);
    expect(select(quoted("(cab|ground)"))).toEqual(["cab", "ground"]);
    expect(select(quoted("a[.]b"))).toEqual(["a.b"]);
    expect(select(quoted(".*"))).toHaveLength(6);
  });

  test.each([
    "(a+)+$",
    "(a|aa)*b",
    "([a-z]*)*",
    "(.*)(.*)(.*)(.*)(.*)x",
    ".*.*.*.*.*.*x",
    "(?=a)b",
    "(a)\\1",
    "[[:alpha:]]x",
    "a{2,3}{4}{5}{6}",
    "(",
    "x".repeat(300),
  ])("a pattern that could keep the search busy, or is none, is not tried: %s", (pattern) => {
    expect(select(quoted(pattern))).toBeNull();
  });

  test("very long names are not searched", () => {
    expect(selectedPatches([quoted(".*a.*b.*")], [patch("a".repeat(100_000))])).toBeNull();
  });
});
