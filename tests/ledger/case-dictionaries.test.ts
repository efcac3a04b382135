import { symlink } from "node:fs/promises";
import { join } from "node:path";
import { describe, expect, test } from "vitest";
import { type CaseDictionaries, readCaseDictionaries } from "../../src/ledger/case-dictionaries.js";
import { inScratch } from "../helpers/built.js";
import { boundaryFile, writeCase } from "./vehicle.js";

const read = (files: Record<string, string>): Promise<CaseDictionaries> =>
  inScratch(async (folder) => {
    await writeCase(folder, files);
    return readCaseDictionaries(folder);
  });

const boundary = { "constant/polyMesh/boundary": boundaryFile(["cab", "bed"], { middle: "symmetry" }) };

describe("what the dictionaries of a case say of its force objects", () => {
  test("a case without dictionaries says nothing", async () => {
    const said = await read({});
    expect([said.densityOf("loads"), said.patchesOf("loads"), said.symmetryPlane]).toEqual([null, null, false]);
  });

  test("density and patches by object, also one of a mesh region", async () => {
    const said = await read({
      ...boundary,
      "system/controlDict":
        "rhoAir 1.19; functions { loads { patches (cab); rho rhoInf; rhoInf $rhoAir; } other { patches cab; } empty {} }",
    });
    expect([said.densityOf("loads"), said.densityOf("air/loads"), said.densityOf("other")]).toEqual([1.19, 1.19, null]);
    expect([said.patchesOf("loads"), said.patchesOf("other"), said.patchesOf("empty"), said.patchesOf("gone")]).toEqual([
      ["cab"],
      ["cab"],
      null,
      null,
    ]);
    expect(said.symmetryPlane).toBe(true);
  });

  test("a selection that is made by code or a variable from elsewhere cannot be told", async () => {
    const said = await read({
      ...boundary,
      "system/controlDict": "functions { loads { patches ($here cab); } more { patches (cab 3); } }",
    });
    expect([said.patchesOf("loads"), said.patchesOf("more")]).toEqual([null, null]);
  });

  test("the list form of old versions", async () => {
    const said = await read({ ...boundary, "system/controlDict": "functions ( loads { patches (cab); rhoInf 1.1; } );" });
    expect([said.densityOf("loads"), said.patchesOf("loads")]).toEqual([1.1, ["cab"]]);
  });

  test("includes at the top, inside functions, and files that include each other for ever", async () => {
    const said = await read({
      ...boundary,
      "system/controlDict": '#include "functions"\nfunctions { #include "one" }',
      "system/functions":
        'functions { #sinclude "two"\n #includeIfPresent "missing"\n deep { rhoInf 3; } }\n#include "controlDict"',
      "system/one": '#include "two"\nfirst { rhoInf 1; }',
      "system/two": '#include "one"\nsecond { rhoInf 2; }',
    });
    expect(["first", "second", "deep"].map((name) => said.densityOf(name))).toEqual([1, 2, 3]);
  });

  test("nothing outside the case is read, and no directive is run", async () => {
    await inScratch(async (folder) => {
      await writeCase(folder, {
        "outside/loads": "loads { rhoInf 9; }",
        "case/system/controlDict":
          'functions { #include "../../outside/loads"\n #includeFunc ../../outside/loads\n #include "$HOME/loads"\n #includeEtc "loads"\n' +
          ' #calc "1+1"\n other { rhoInf #calc "9"; patches #{ code #}; } }',
      });
      const said = await readCaseDictionaries(join(folder, "case"));
      expect([said.densityOf("loads"), said.densityOf("other"), said.densityOf("../../outside/loads")]).toEqual([null, null, null]);
    });
  });

  test("a file that is a device is not read", async () => {
    await inScratch(async (folder) => {
      await writeCase(folder, { "system/fvSchemes": "" });
      await symlink("/dev/zero", join(folder, "system/controlDict"));
      expect((await readCaseDictionaries(folder)).densityOf("loads")).toBeNull();
    });
  });
});
