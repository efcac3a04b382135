import { readdir } from "node:fs/promises";
import { join, relative, resolve } from "node:path";
import fc from "fast-check";
import { describe, expect, test } from "vitest";
import { caseContent } from "../../src/case/case-content.js";
import { planStudy } from "../../src/case/prepare.js";
import { renderCase } from "../../src/case/render.js";
import { studyCases } from "../../src/case/study-cases.js";
import { writeCase } from "../../src/case/write-case.js";
import { cleanPatchNames } from "../../src/geometry/files/part-names.js";
import { surveyBody } from "../../src/geometry/survey-body.js";
import { bodyOf } from "../geometry/shapes.js";
import { cartParts, cartStudy, temporaryFolder } from "./cart.js";

const evil = [
  '#calc "system(\\"touch pwned\\")"',
  '#codeStream { code #{ system("touch pwned"); #}; }',
  '#include "/etc/passwd"',
  "#includeEtc x",
  "$whole",
  "$".concat("{HOME}"),
  'a"; #calc "1',
  "hull; } functions { x { type systemCall; } }",
  "../../escape",
  "/etc/passwd",
  "a\nb: #calc",
  "`id`",
  "$(id)",
  "\u0000",
  "\u202e",
  "<img src=x onerror=alert(1)>",
  ".*",
  "(hull|cab)",
  "inlet",
  "body",
  "procBoundary0to1",
];

/** Signs of code, of other files, of patterns. Comments of the templates have none of them. */
// biome-ignore lint/suspicious/noControlCharactersInRegex: control characters are what is looked for
const forbidden = /[#$"`\\%<>|&\u0000-\u0008\u000e-\u001f\u007f-\uffff]/;
/** What the templates themselves write with such signs. */
const own = ['#include "meshQualityDict"', '{ file "body.eMesh"; level', '"(U|k|omega)"'];

const dictionaries = (files: { path: string; content: string | Uint8Array }[]) =>
  files.filter(({ path }) => /^(0|constant|system)\//.test(path) && !path.endsWith(".stl")) as { path: string; content: string }[];

function expectPlain(files: { path: string; content: string | Uint8Array }[]): void {
  for (const { path, content } of dictionaries(files)) {
    const rest = own.reduce((text, known) => text.replace(known, ""), content);
    expect([path, forbidden.exec(rest)?.[0]]).toEqual([path, undefined]);
  }
}

const surveyOnce = surveyBody(bodyOf(cartParts), { unit: "m", travel: "-x", up: "+z" });

describe("names of people and of files", () => {
  test("the templates have no signs of code but their own", async () => {
    const [planned] = await planStudy(await cartStudy({ variants: { plain: cartParts } }));
    expectPlain(renderCase(planned!.plan));
  });

  test("whatever parts are called, no dictionary holds code, and the surface has their patches (seed 77)", async () => {
    const study = await cartStudy({ variants: { plain: cartParts }, keys: { parts: "{}" } });
    const [{ plan }] = (await planStudy(study)) as [Awaited<ReturnType<typeof planStudy>>[number]];
    const keys = Object.keys(cartParts);
    fc.assert(
      fc.property(
        fc.array(fc.oneof(fc.constantFrom(...evil), fc.string({ unit: "binary", maxLength: 80 })), {
          minLength: keys.length,
          maxLength: keys.length,
        }),
        (names) => {
          const patches = cleanPatchNames(names);
          const parts = plan.parts.map((part, k) => ({ ...part, name: names[k]!, patch: patches[k]! }));
          const set = bodyOf(cartParts);
          set.parts = set.parts.map((part) => {
            const k = plan.parts.findIndex(({ patch }) => patch === part.patch);
            return k < 0 ? part : { ...part, name: names[k]!, patch: patches[k]! };
          });
          const survey = { ...surveyOnce, parts: [] };
          const { files } = caseContent(study, { ...plan, parts }, { variant: "plain", set, survey }, new Map());
          expectPlain(files);
          const stl = Buffer.from(files.find(({ path }) => path.endsWith(".stl"))!.content as Uint8Array).toString("latin1");
          const solids = stl.split("\n").filter((line) => line.startsWith("solid"));
          expect(solids.map((line) => line.slice(6)).sort()).toEqual(parts.map(({ patch }) => patch).sort());
        },
      ),
      { seed: 77, numRuns: 60 },
    );
  });
  test("a study or variant called so reaches no file, and no folder outside of cases/", async () => {
    const home = await temporaryFolder();
    const folder = join(home, "study");
    const plain = await cartStudy({ variants: { plain: cartParts }, folder, keys: { mesh: "{ cells: 5000 }" } });
    const [planned] = await planStudy(plain);
    const body = { variant: "plain", set: bodyOf(cartParts), survey: surveyOnce };
    // Such names do not pass the reader of studies; whoever calls the program as a library can still give them.
    for (const name of evil)
      for (const study of [
        { ...plain, name },
        { ...plain, baseline: name, variants: [{ ...plain.variants[0]!, name }] },
      ]) {
        const [{ path, variant }] = studyCases(study) as [ReturnType<typeof studyCases>[number]];
        expect(relative(join(folder, "cases"), resolve(path))).toMatch(/^[a-z0-9_.-]+$/);
        try {
          const plan = { ...planned!.plan, study: study.name, variant: variant.name };
          const content = caseContent(study, plan, body, new Map([[plain.variants[0]!.files[0]!, "0".repeat(64)]]));
          expectPlain(content.files);
          const readme = content.files.find(({ path }) => path === "README.md")!.content;
          if (!/^[A-Za-z0-9]+$/.test(name)) expect(readme).not.toContain(name);
          await writeCase(path, content, { again: true });
        } catch (error) {
          expect((error as Error).message).toMatch(/is no name that a text may hold|holds variant/);
        }
      }
    expect(await readdir(home)).toEqual(["study"]);
    expect((await readdir(folder)).sort()).toEqual(["cart.yaml", "cases", "plain.stl"]);
  });
});
