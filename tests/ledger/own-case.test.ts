import { describe, expect, test } from "vitest";
import type { RunCard } from "../../src/case/run-card.js";
import { buildLedger } from "../../src/ledger/build.js";
import { type CaseRecord, type ReferenceOverrides, readCaseRecord } from "../../src/ledger/case-record.js";
import { inScratch } from "../helpers/built.js";
import { codes, runCard } from "./records.js";
import {
  coefficientsObject,
  coefficientTable,
  forcesObject,
  layouts,
  saeReference,
  steady,
  type TableReference,
  writeCase,
} from "./vehicle.js";

// Case files as a prepared case leaves them: `whole`, `part-<patch>` and `coefficients`, moments about the origin.
const unit = 0.5 * 1.225 * 30 ** 2 * 2.1;
const shell = steady("body-shell", [0.2, 0, 0.9], [220, 12, 40], [15, 0, 0], 200, (row) => 40 * Math.exp(-row / 1.5));
const wheels = steady("wheels", [0, 0, 0.3], [60, -4, 25], [2, 0, 0], 200);
const parts = [shell, wheels];
const pitch = 0.9 * 235 - 0.2 * 40 + 0.3 * 62;

const files = (reference: TableReference = saeReference): Record<string, string> => ({
  ...forcesObject("whole", parts, [0, 0, 0], 1.225),
  ...forcesObject("part-body-shell", [shell], [0, 0, 0], 1.225),
  ...forcesObject("part-wheels", [wheels], [0, 0, 0], 1.225),
  ...coefficientsObject("coefficients", coefficientTable(parts, reference)),
});

const read = (tables: Record<string, string>, card: RunCard = runCard(), options: ReferenceOverrides = {}): Promise<CaseRecord> =>
  inScratch(async (folder) => {
    await writeCase(folder, { ...tables, "dragledger.json": JSON.stringify(card) });
    return readCaseRecord(folder, options);
  });

describe("a case prepared here", () => {
  test("reference, names and axles come from the run card; the ledger closes against the coefficient table", async () => {
    const record = await read(files());
    expect(record).toMatchObject({ variant: "plain", condition: "30ms", findings: [], oblique: false });
    expect(record.reference).toMatchObject({ area: 2.1, wheelbase: 2.7, density: 1.225, symmetryFactor: 1 });
    expect(new Set(Object.values(record.reference.sources))).toEqual(new Set(["run card"]));
    expect(record.parts.map(({ name }) => name)).toEqual(["Body shell", "Wheels"]);
    const { total, parts: entries, closing, window } = buildLedger(record);
    const force = 1.225;
    expect(total.drag!.value).toBeCloseTo(297 * force, 4);
    expect(total.lift!.value).toBeCloseTo(65 * force, 4);
    expect(total.side!.value).toBeCloseTo(8 * force, 4);
    expect(total.cd.value).toBeCloseTo((297 * force) / unit, 8);
    expect(total.cda!.value).toBeCloseTo((297 * force * 2.1) / unit, 8);
    expect(total.cdFriction!.value).toBeCloseTo((17 * force) / unit, 8);
    expect(total.clFront!.value).toBeCloseTo(((65 / 2 + pitch / 2.7) * force) / unit, 7);
    expect(total.clRear!.value).toBeCloseTo(((65 / 2 - pitch / 2.7) * force) / unit, 7);
    expect(entries[1].cd.value).toBeCloseTo((62 * force) / unit, 10);
    expect(entries[1].clFront!.value + entries[1].clRear!.value).toBeCloseTo(entries[1].cl.value, 12);
    expect(closing).toMatchObject({ ok: true });
    expect(closing.message).toContain("6 sums over 200 rows agree within print precision");
    expect(record.tableCd).toHaveLength(200);
    expect(window.to).toBe(200);
  });

  test("a half model: the vehicle is twice what the solver saw, on half of the area in its table", async () => {
    const card = runCard({ reference: { ...runCard().reference, area: 4.2, symmetryFactor: 2 } });
    const record = await read(files(), card);
    const { total, closing, findings } = buildLedger(record);
    expect(total.drag!.value).toBeCloseTo(2 * 297 * 1.225, 4);
    expect(total.cd.value).toBeCloseTo((297 * 1.225) / unit, 8);
    expect([total.cs, total.side]).toEqual([null, null]);
    expect(total.clFront!.value).toBeCloseTo(((65 / 2 + pitch / 2.7) * 1.225) / unit, 7);
    expect(closing.ok).toBe(true);
    expect(findings.map(({ code }) => code)).toEqual(["half-model"]);
  });

  test("the reference area of a half under a whole vehicle", async () => {
    for (const [area, factor] of [
      [1.06, "0.5"],
      [4.2, "2"],
    ] as const) {
      const { findings } = buildLedger(await read(files(), runCard(), { area }));
      expect(findings).toMatchObject([{ code: "area-of-half", severity: "error" }]);
      expect(findings[0].message).toContain(`is about ${factor} times the frontal area of the body`);
    }
    expect(codes(buildLedger(await read(files(), runCard(), { area: 2.0 })))).toEqual([]);
    // A half model whose body was given as a half: twice its frontal area is the whole.
    const half = runCard({ reference: { ...runCard().reference, area: 4.2, symmetryFactor: 2 } });
    expect(codes(buildLedger(await read(files(), half)))).toEqual(["half-model"]);
    const wrong = runCard({ reference: { ...runCard().reference, area: 8.4, symmetryFactor: 2 } });
    expect(codes(buildLedger(await read(files({ ...saeReference, area: 4.2 }), wrong)))).toContain("area-of-half");
  });

  test("a table with another reference than the card's tells of a case that was changed", async () => {
    const record = await read(files({ ...saeReference, speed: 40, area: 2 }));
    expect(record.findings.map(({ code, severity, message }) => [code, severity, message.slice(0, 68)])).toEqual([
      ["reference-changed", "error", "The coefficient table was written with the reference speed 40, the r"],
      ["reference-changed", "error", "The coefficient table was written with the reference area 2, the run"],
    ]);
  });

  test("forces of another density than the card's do not close against the coefficients", async () => {
    const changed = { ...files(), ...coefficientsObject("coefficients", coefficientTable(parts.map(halved), saeReference)) };
    const { closing } = buildLedger(await read(changed));
    expect(closing.ok).toBe(false);
    expect(closing.message).toMatch(/^coefficient table against the forces: off by 3\.3e-1 of the sizes summed at \d+/);
  });

  test("a part without history, and one of other iterations, are errors of the ledger", async () => {
    const {
      "postProcessing/part-wheels/0/force.dat": _force,
      "postProcessing/part-wheels/0/moment.dat": _moment,
      ...without
    } = files();
    const record = await read(without);
    expect(record.findings).toMatchObject([{ code: "part-not-recorded", severity: "error", part: "Wheels" }]);
    expect(buildLedger(record).closing.ok).toBe(false);

    const shifted = Object.fromEntries(
      Object.entries(files()).map(([path, text]) => [
        path,
        path.includes("part-wheels") ? text.replace(/^(\d+)\t/gm, "9$100\t") : text,
      ]),
    );
    expect((await read(shifted)).findings).toMatchObject([{ code: "object-left-out", severity: "error", part: "Wheels" }]);
  });

  test("the coefficient table stands in for a whole without forces; without either there is no ledger", async () => {
    const only = Object.fromEntries(Object.entries(files()).filter(([path]) => !path.includes("/whole/")));
    const record = await read(only);
    expect(record.whole.cd.at(-1)).toBeCloseTo((297 * 1.225) / unit, 8);
    expect([record.whole.cdPressure, record.tableCd]).toEqual([null, null]);
    expect(buildLedger(record).closing.ok).toBe(true);

    const none = Object.fromEntries(Object.entries(files()).filter(([path]) => path.includes("/part-")));
    await expect(read(none)).rejects.toMatchObject({ kind: "input", code: "no-whole" });
    await expect(read({})).rejects.toMatchObject({ code: "no-forces", remedy: "Run it first: dragledger run." });
  });

  test("options win over the card", async () => {
    const record = await read(files(), runCard(), { density: 1.1, wheelbase: 3, centre: [0.1, 0, 0] });
    expect(record.reference).toMatchObject({ density: 1.1, wheelbase: 3, centre: [0.1, 0, 0], area: 2.1 });
    expect(record.reference.sources).toMatchObject({ density: "option", wheelbase: "option", centre: "option", area: "run card" });
    const { total } = buildLedger(record);
    // The tables were written with the card's density: coefficients stay, newtons are those of the other air.
    expect(total.cd.value).toBeCloseTo((297 * 1.225) / unit, 8);
    expect(total.drag!.value).toBeCloseTo(297 * 1.1, 4);
    expect(total.clFront!.value).toBeCloseTo(((65 / 2 + (pitch + 0.1 * 65) / 3) * 1.225) / unit, 7);
  });

  test("a card without a wheelbase is of a body without axles", async () => {
    const { total, findings } = buildLedger(await read(files(), runCard({ wheelbase: null })));
    expect([total.clFront, total.clRear]).toEqual([null, null]);
    expect(total.cm).not.toBeNull();
    expect(findings).toEqual([]);
  });

  test("recorded results are called so", async () => {
    expect(buildLedger(await read(files(), runCard({ recorded: "of another day" }))).recorded).toBe("of another day");
    expect(buildLedger(await read(files())).recorded).toBeNull();
  });
});

const halved = (part: (typeof parts)[number]) => ({
  ...part,
  pressure: part.pressure.map(([x, y, z]) => [x / 2, y / 2, z / 2] as [number, number, number]),
  friction: part.friction.map(([x, y, z]) => [x / 2, y / 2, z / 2] as [number, number, number]),
});

test("the layouts of the made-up tables are the solver's", () => {
  expect(layouts.C6.columns).toHaveLength(12);
  expect([...layouts.C7.columns].sort()).toEqual(layouts.C7.columns);
});
