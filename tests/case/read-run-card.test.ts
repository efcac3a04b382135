import { mkdir, readFile, writeFile } from "node:fs/promises";
import { join } from "node:path";
import { describe, expect, test } from "vitest";
import { prepareStudy } from "../../src/case/prepare.js";
import { readRunCard } from "../../src/case/read-run-card.js";
import { thrown } from "../study/thrown.js";
import { cartParts, cartStudy, temporaryFolder } from "./cart.js";

describe("run cards", () => {
  test("what is written is read back", async () => {
    const study = await cartStudy({ variants: { plain: cartParts }, keys: { mesh: "{ cells: 5000 }" } });
    const [{ path, plan }] = (await prepareStudy(study)) as [Awaited<ReturnType<typeof prepareStudy>>[number]];
    const card = (await readRunCard(path))!;
    expect(card).toEqual(JSON.parse(await readFile(join(path, "dragledger.json"), "utf8")));
    expect(card.reference).toMatchObject({ area: plan.reference.area.value, speed: 30, centre: [0, 0, 0], symmetryFactor: 2 });
    expect(card.plan.find(({ key }) => key === "mesh.firstCell")!.value).toBe(plan.mesh.firstCell.value);
    expect(card.study).toEqual({ name: "cart-lid", question: "Does a lid pay?", baseline: "plain" });
  });

  test("no card, no folder: null", async () => {
    const folder = await temporaryFolder();
    expect(await readRunCard(folder)).toBeNull();
    expect(await readRunCard(join(folder, "nowhere"))).toBeNull();
  });

  test.each([
    ["{", /^The run card is no JSON: /],
    ["", /^The run card is no JSON: /],
    ["[]", /^The run card is not as this version writes it: document: /],
    ['{"schema":"dragledger/run-card/2"}', /^The run card is not as this version writes it: schema: /],
    ['{"__proto__":{"schema":"dragledger/run-card/1"}}', /^The run card is not as this version writes it: schema: /],
  ])("a damaged card %j says so", async (text, message) => {
    const folder = await temporaryFolder();
    await writeFile(join(folder, "dragledger.json"), text);
    const problem = await thrown(() => readRunCard(folder));
    expect(problem.message).toMatch(message);
    expect(problem).toMatchObject({ code: "damaged-run-card", where: join(folder, "dragledger.json") });
  });

  test("a folder in its place", async () => {
    const folder = await temporaryFolder();
    await mkdir(join(folder, "dragledger.json"));
    expect((await thrown(() => readRunCard(folder))).code).toMatch(/run-card/);
  });
});
