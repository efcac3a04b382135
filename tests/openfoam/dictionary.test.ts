import { describe, expect, test } from "vitest";
import { boundaryPatches } from "../../src/openfoam/boundary.js";
import {
  type Dictionary,
  dictionaryAt,
  numberAt,
  parseDictionary,
  valuesAt,
  vectorAt,
  wordAt,
  wordsAt,
} from "../../src/openfoam/dictionary.js";

const parse = (text: string): Dictionary => parseDictionary(text, "system/controlDict");
const message = (text: string): string => {
  try {
    parse(text);
  } catch (problem) {
    const { message, where } = problem as { message: string; where: string };
    return `${where}: ${message}`;
  }
  return "";
};

describe("dictionaries of the solver", () => {
  test("entries, nested dictionaries, lists, dimensions, patterns, comments", () => {
    const dictionary = parse(`
      /* header ; { */
      application simpleFoam; // solver; } {
      endTime 500;
      nu [0 2 -1 0 0 0 0] 1.5e-05;
      internalField uniform (30 0 -0.5);
      solvers { "(k|omega)" { tolerance 1e-08; } p { solver GAMG; } }
      functions
      {
          total
          {
              type forceCoeffs;
              libs ("libforces.so");
              patches ("body.*" wheel_front);
              rhoInf 1.225;
              CofR (1.35 0 0);
          }
      }
      divSchemes { default none; div(phi,U) bounded Gauss linearUpwind grad(U); }
      single wing;
      sizes 3(1 2 3);
      file "a \\"quoted\\" name";
    `);
    expect(wordAt(dictionary, "application")).toBe("simpleFoam");
    expect(numberAt(dictionary, "endTime")).toBe(500);
    expect(numberAt(dictionary, "nu")).toBe(1.5e-5);
    expect(vectorAt(dictionary, "internalField")).toEqual([30, 0, -0.5]);
    expect(wordsAt(dictionary, "functions", "total", "patches")).toEqual(["body.*", "wheel_front"]);
    expect(vectorAt(dictionary, "functions", "total", "CofR")).toEqual([1.35, 0, 0]);
    expect(numberAt(dictionary, "functions", "total", "rhoInf")).toBe(1.225);
    expect(wordsAt(dictionary, "single")).toEqual(["wing"]);
    expect(vectorAt(dictionary, "sizes")).toEqual([1, 2, 3]);
    expect(wordAt(dictionary, "file")).toBe('a "quoted" name');
    expect(wordAt(dictionary, "divSchemes", "div(phi,U)")).toBe("bounded");
    expect([...dictionaryAt(dictionary, "solvers")!.patterns]).toEqual(["(k|omega)"]);
    expect(numberAt(dictionary, "solvers", "(k|omega)", "tolerance")).toBe(1e-8);
    expect(numberAt(dictionary, "functions", "none", "rhoInf")).toBeUndefined();
    expect(dictionaryAt(dictionary, "endTime")).toBeUndefined();
  });

  test("a repeated key: the last value stands, dictionaries are merged", () => {
    const dictionary = parse("a 1; a 2; d { x 1; y 1; } d { y 2; }");
    expect(numberAt(dictionary, "a")).toBe(2);
    expect([numberAt(dictionary, "d", "x"), numberAt(dictionary, "d", "y")]).toEqual([1, 2]);
  });

  test("$name of the same file is replaced by its value; unknown names stay text", () => {
    const dictionary = parse(
      "speed 30; flow { velocity ($speed 0 0); } base { type wall; value 1; } roof { $base; value 2; } copy $:flow.velocity; other $absent; deep { a 7; b { c $..a; d $" +
        "{a}; } }",
    );
    expect(vectorAt(dictionary, "flow", "velocity")).toEqual([30, 0, 0]);
    expect([
      wordAt(dictionary, "roof", "type"),
      numberAt(dictionary, "roof", "value"),
      numberAt(dictionary, "base", "value"),
    ]).toEqual(["wall", 2, 1]);
    expect(vectorAt(dictionary, "copy")).toEqual([30, 0, 0]);
    expect(valuesAt(dictionary, "other")).toEqual([{ kind: "directive", text: "$absent" }]);
    expect([numberAt(dictionary, "deep", "b", "c"), numberAt(dictionary, "deep", "b", "d")]).toEqual([7, 7]);
  });

  test("directives and code stay text: nothing is run, nothing is included", () => {
    const dictionary = parse(`
      #include "/etc/passwd"
      #includeEtc "caseDicts/general"
      #remove (a b)
      area #calc "2*$width; system(\\"x\\")";
      code #{ system("rm"); } ; { #};
      stream #codeStream { code #{ os << 1; #}; };
      after 1;
    `);
    expect(dictionary.directives).toEqual(["#include /etc/passwd", "#includeEtc caseDicts/general", "#remove ( a b )"]);
    expect(numberAt(dictionary, "area")).toBeUndefined();
    expect(valuesAt(dictionary, "area")![0]).toMatchObject({ kind: "directive" });
    expect(valuesAt(dictionary, "code")![0]).toEqual({ kind: "directive", text: '#{ system("rm"); } ; { #}' });
    expect(numberAt(dictionary, "after")).toBe(1);
  });

  test.each([
    ["a 1", "system/controlDict, line 1: the file ends inside the entry a: a ; is missing"],
    ["\na { b 1;", "system/controlDict, line 2: the file ends inside a dictionary: a closing } is missing"],
    ["a 1; }", "system/controlDict, line 1: a closing } has no opening {"],
    ["a {\n b 1 }", "system/controlDict, line 2: the entry b has no ; before the closing }"],
    ["a (1 2;", "system/controlDict, line 1: the file ends inside a list: a closing ) is missing"],
    ["a 1);", "system/controlDict, line 1: a closing ) has no opening ("],
    ["\n\n/* open", "system/controlDict, line 3: a comment (/*) is not closed before the file ends"],
    ['a "open;', "system/controlDict, line 1: a quoted string is not closed before the file ends"],
    ["a #{ open", "system/controlDict, line 1: a code block (#{) is not closed before the file ends"],
  ])("broken text %j is refused with its line", (text, expected) => {
    expect(message(text)).toBe(expected);
  });

  test("nesting without end, growth by reference and endless text are refused, not followed", () => {
    expect(message("a { ".repeat(200_000))).toContain("brackets are nested more than 100 deep");
    expect(message(`a ${"( ".repeat(200_000)}`)).toContain("brackets are nested more than 100 deep");
    const doubling = Array.from({ length: 40 }, (_, index) => `v${index + 1} $v${index} $v${index};`).join("\n");
    expect(message(`v0 1 2;\n${doubling}`)).toContain("$ references copy more than 200000 values");
    const nesting = Array.from({ length: 3000 }, (_, index) => `d${index + 1} { x { $d${index}; } }`).join("\n");
    expect(message(`d0 { y 1; }\n${nesting}`)).toContain("brackets are nested more than 100 deep");
  });
});

describe("patches of a mesh", () => {
  test("names, types, faces and groups", () => {
    const text = `
      FoamFile { version 2.0; format ascii; class polyBoundaryMesh; object boundary; }
      3
      (
          inlet { type patch; nFaces 64; startFace 10; }
          body_frame:016-shadow%13 { type wall; inGroups 2(wall bodyGroup); nFaces 103; startFace 74; }
          "odd name" { type symmetry; inGroups List<word> 1(symmetry); nFaces 0; startFace 177; }
      )
    `;
    expect(boundaryPatches(parse(text), "boundary")).toEqual([
      { name: "inlet", type: "patch", faces: 64, groups: [] },
      { name: "body_frame:016-shadow%13", type: "wall", faces: 103, groups: ["wall", "bodyGroup"] },
      { name: "odd name", type: "symmetry", faces: 0, groups: ["symmetry"] },
    ]);
  });

  test("a dictionary without a list of patches is refused", () => {
    expect(() => boundaryPatches(parse("a 1;"), "constant/polyMesh/boundary")).toThrowError("there is no list of patches");
  });
});
