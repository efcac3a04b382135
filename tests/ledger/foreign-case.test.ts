import { readFile, writeFile } from "node:fs/promises";
import { join } from "node:path";
import { gzipSync } from "node:zlib";
import { describe, expect, test } from "vitest";
import { Problem } from "../../src/errors.js";
import { buildLedger } from "../../src/ledger/build.js";
import { type CaseRecord, type ReferenceOverrides, readCaseRecord } from "../../src/ledger/case-record.js";
import { inScratch } from "../helpers/built.js";
import { codes } from "./records.js";
import {
  boundaryFile,
  coefficientsObject,
  coefficientTable,
  controlDict,
  forcesObject,
  layouts,
  saeReference,
  steady,
  writeCase,
} from "./vehicle.js";

// A made-up vehicle whose forces and their points are known; 0.5 * 30² * 2.1 = 945 N per unit of coefficient and of density.
const unit = 945;
const swing = (size: number) => (row: number) => size * Math.exp(-row / 1.5);
const shell = steady("shell", [0.2, 0, 0.9], [220, 0, 40], [15, 0, 0], 60, swing(90));
const wing = steady("wing", [-1, 0, 1.2], [30, 0, -80], [1, 0, 0], 60, swing(5));
const wheels = steady("wheels", [0, 0, 0.3], [60, 0, 25], [2, 0, 0], 60);
const vehicle = [shell, wing, wheels];
const drags = { shell: 235 / unit, wing: 31 / unit, wheels: 62 / unit };
const totalDrag = 328 / unit;
const totalLift = -15 / unit;
/** Nose-up about the origin: z D - x L, on 2.7 m. */
const totalPitch = (0.9 * 235 - 0.2 * 40 + 1.2 * 31 - 80 + 0.3 * 62) / (unit * 2.7);

async function read(files: Record<string, string>, options: ReferenceOverrides = {}): Promise<CaseRecord> {
  return inScratch(async (folder) => {
    await writeCase(folder, files);
    return readCaseRecord(folder, options);
  });
}

/** The problem that reading throws. */
async function refused(files: Record<string, string>, options: ReferenceOverrides = {}): Promise<Problem> {
  const problem = await read(files, options).then(
    () => null,
    (error: unknown) => error,
  );
  expect(problem).toBeInstanceOf(Problem);
  return problem as Problem;
}

const last = (values: Float64Array | null): number => values!.at(-1)!;
const tables = (names: string[], reference = saeReference, layout = layouts.C6) =>
  Object.assign(
    {},
    ...names.map((name) => {
      const parts = name === "total" ? vehicle : vehicle.filter((each) => each.name === name);
      return coefficientsObject(name, coefficientTable(parts, reference, layout));
    }),
  ) as Record<string, string>;

describe("coefficient tables of a case made elsewhere", () => {
  for (const [id, layout] of Object.entries(layouts))
    test(`layout ${id}: planted drag, lift, pitching moment and parts come out of columns found by name`, async () => {
      const record = await read(tables(["shell", "total", "wing", "wheels"], saeReference, layout), {
        wheelbase: 2.7,
        centre: [0, 0, 0],
      });
      expect(record.whole.name).toBe("total");
      expect(last(record.whole.cd)).toBeCloseTo(totalDrag, 6);
      expect(last(record.whole.cl)).toBeCloseTo(totalLift, 9);
      expect(last(record.whole.cm)).toBeCloseTo(totalPitch, 6);
      expect(Object.fromEntries(record.parts.map(({ name, cd }) => [name, last(cd).toFixed(6)]))).toEqual(
        Object.fromEntries(Object.entries(drags).map(([name, cd]) => [name, cd.toFixed(6)])),
      );
      expect(record.whole.cs === null).toBe(id === "C4");
      const { closing, total } = buildLedger(record);
      expect(closing.ok).toBe(true);
      expect(total.clFront!.value + total.clRear!.value).toBeCloseTo(total.cl.value, 12);
    });

  test("reference values and where they came from; density is in no header", async () => {
    const { reference, variant, condition, card } = await read(tables(["total"]));
    expect(reference).toMatchObject({
      area: 2.1,
      length: 2.7,
      speed: 30,
      centre: [0, 0, 0],
      density: null,
      symmetryFactor: 1,
      wheelbase: null,
    });
    expect(reference.sources).toEqual({
      area: "header of postProcessing/total/0/coefficient.dat",
      length: "header of postProcessing/total/0/coefficient.dat",
      speed: "header of postProcessing/total/0/coefficient.dat",
      centre: "header of postProcessing/total/0/coefficient.dat",
    });
    expect([variant.startsWith("dragledger-test-"), condition, card]).toEqual([true, "", null]);
  });

  test("options win and are named as the source; what they change is scaled", async () => {
    const options = {
      area: 4.2,
      speed: 60,
      density: 1.2,
      length: 5.4,
      wheelbase: 2.7,
      centre: [0, 0, 0] as [number, number, number],
    };
    const record = await read(tables(["total"]), options);
    expect(record.reference).toMatchObject(options);
    expect(new Set(Object.values(record.reference.sources))).toEqual(new Set(["option"]));
    expect(last(record.whole.cd)).toBeCloseTo(totalDrag / 8, 7);
    expect(last(record.whole.cm)).toBeCloseTo(totalPitch / 16, 7);
    const { total } = buildLedger(record);
    // The force is a matter of flow and density, whatever the coefficient was printed on.
    expect(total.drag!.value).toBeCloseTo(328 * 1.2, 3);
    expect(total.clFront!.value).toBeCloseTo(totalLift / 16 + totalPitch / 8, 7);
  });

  test("a moment centre of its own is moved to the one given; one that is taken for granted is said", async () => {
    const files = tables(["total"], { ...saeReference, centre: [1.35, 0, 0.5] });
    const moved = await read(files, { wheelbase: 2.7, centre: [0, 0, 0] });
    expect(last(moved.whole.cm)).toBeCloseTo(totalPitch, 6);
    expect(codes(moved)).toEqual([]);
    const taken = await read(files, { wheelbase: 2.7 });
    expect(codes(taken)).toEqual(["axle-centre-taken"]);
    expect(taken.findings[0].message).toContain("(1.35 0 0.5)");
  });

  test("a pitch axis that points to the left turns the sign of Cm back", async () => {
    const layout = { ...layouts.C4, reversed: true };
    expect(last((await read(tables(["total"], saeReference, layout))).whole.cm)).toBeCloseTo(totalPitch, 6);
  });

  test("a table of old versions has no header values: they are asked for, and what is taken for granted is said", async () => {
    const table = coefficientTable(vehicle, saeReference, layouts.C4)
      .split("\n")
      .filter((line) => !line.includes(" : "));
    const files = { "postProcessing/car/0/forceCoeffs.dat": table.slice(1).join("\n") };
    const problem = await refused(files);
    expect([problem.code, problem.remedy]).toEqual(["unknown-reference", "Give --area."]);
    const bare = await read(files, { area: 2.1 });
    expect(last(bare.whole.cd)).toBeCloseTo(totalDrag, 6);
    expect([bare.whole.cm, bare.reference.speed, bare.reference.length]).toEqual([null, null, null]);
    expect(codes(buildLedger(bare))).toEqual(["directions-assumed", "not-settled", "not-given", "not-given"]);
    const told = await read(files, { area: 2.1, length: 2.7, centre: [0, 0, 0], wheelbase: 2.7, speed: 30, density: 1.225 });
    expect(last(told.whole.cm)).toBeCloseTo(totalPitch, 6);
    expect(codes(told)).toEqual(["directions-assumed", "pitch-axis-taken"]);
  });

  test("tables on references of their own are put on that of the whole", async () => {
    const half = { ...saeReference, area: 1.05, length: 1, centre: [1, 0, 0] as [number, number, number] };
    const record = await read({
      ...tables(["total", "wheels"]),
      ...coefficientsObject("a-shell", coefficientTable([shell], half)),
      ...coefficientsObject("a-wing", coefficientTable([wing], { ...half, speed: 15 })),
    });
    expect(record.reference).toMatchObject({ area: 2.1, length: 2.7, centre: [0, 0, 0] });
    expect(codes(record)).toEqual(["references-differ"]);
    expect(record.whole.name).toBe("total");
    expect(last(record.parts.find(({ name }) => name === "a-shell")!.cd)).toBeCloseTo(drags.shell, 6);
    expect(record.parts.reduce((sum, { cm }) => sum + last(cm), 0)).toBeCloseTo(totalPitch, 6);
    expect(buildLedger(record).closing.ok).toBe(true);
  });

  test("an object with a drag direction of its own cannot be added", async () => {
    const other = {
      ...saeReference,
      drag: [0.6, 0, 0.8] as [number, number, number],
      lift: [-0.8, 0, 0.6] as [number, number, number],
    };
    const record = await read({ ...tables(["shell", "total"]), ...coefficientsObject("wing", coefficientTable([wing], other)) });
    expect(record.parts.map(({ name }) => name)).toEqual(["shell", "rest"]);
    expect(codes(record)).toContain("directions-differ");
  });

  test("y up and flow along -x: the same vehicle in other axes", async () => {
    const turned = vehicle.map((part) => ({
      ...part,
      at: [-part.at[0], part.at[2], part.at[1]] as [number, number, number],
      pressure: part.pressure.map(([x, y, z]) => [-x, z, y] as [number, number, number]),
      friction: part.friction.map(([x, y, z]) => [-x, z, y] as [number, number, number]),
    }));
    const reference = {
      ...saeReference,
      drag: [-1, 0, 0] as [number, number, number],
      lift: [0, 1, 0] as [number, number, number],
    };
    const record = await read({
      ...coefficientsObject("total", coefficientTable(turned, reference)),
      ...forcesObject("loads", turned, [0, 0, 0], 1.225),
    });
    expect(last(record.whole.cd)).toBeCloseTo(totalDrag, 6);
    expect(last(record.whole.cl)).toBeCloseTo(totalLift, 9);
    expect(last(record.whole.cm)).toBeCloseTo(totalPitch, 6);
    expect(record.oblique).toBe(false);
  });
});

describe("force tables of a case made elsewhere", () => {
  const forces = (density: number, digits = 12) => ({
    ...forcesObject("shell", [shell], [0, 0, 0], density, digits),
    ...forcesObject("loads", vehicle, [0.4, 0, 0.1], density, digits),
    ...forcesObject("rest-of-it", [wing, wheels], [1, 1, 1], density, digits),
  });
  const known = { area: 2.1, speed: 30, length: 2.7, centre: [0, 0, 0] as [number, number, number] };

  test("pressure and friction, and moments moved from three centres to one", async () => {
    const record = await read(forces(1.225), { ...known, density: 1.225 });
    expect(record.whole.name).toBe("loads");
    expect(last(record.whole.cd)).toBeCloseTo(totalDrag, 6);
    expect(last(record.whole.cdFriction)).toBeCloseTo(18 / unit, 9);
    expect(last(record.whole.cm)).toBeCloseTo(totalPitch, 6);
    expect(record.parts.reduce((sum, { cm }) => sum + last(cm), 0)).toBeCloseTo(totalPitch, 6);
    const { closing, total } = buildLedger(record);
    expect(closing.ok).toBe(true);
    expect(total.drag!.value).toBeCloseTo(328 * 1.225, 3);
    expect(codes(record).sort()).toEqual(["directions-assumed", "written-density-taken"]);
  });

  test("what is missing is asked for by the option that gives it", async () => {
    const problem = await refused(forces(1.225));
    expect(problem).toMatchObject({ kind: "input", code: "unknown-reference" });
    expect(problem.message).toBe("The files of the case do not say the reference area, speed, density.");
    expect(problem.remedy).toBe("Give --area and --speed and --density.");
    expect((await refused(forces(1.225), { area: 2.1, speed: 30 })).remedy).toBe("Give --density.");
  });

  test("the density in the control dictionary is the one the tables were written with; the option is that of the air", async () => {
    const dictionary = {
      "system/controlDict": controlDict({ loads: { patches: "body", density: 1 }, shell: { patches: "shell", density: 1 } }),
    };
    const record = await read({ ...dictionary, ...forces(1) }, { ...known, density: 1.2 });
    expect(last(record.whole.cd)).toBeCloseTo(totalDrag, 6);
    expect(buildLedger(record).total.drag!.value).toBeCloseTo(328 * 1.2, 3);
    const without = await read({ ...dictionary, ...forces(1) }, known);
    expect(without.reference).toMatchObject({ density: 1, sources: { density: "rhoInf in system/controlDict" } });
    expect(codes(buildLedger(without))).toContain("density-one");
  });

  test("force and coefficient table together tell the density, also when the dictionary was changed since", async () => {
    for (const digits of [7, 12]) {
      const record = await read({
        "system/controlDict": controlDict({ loads: { patches: "body", density: 1 } }),
        ...forcesObject("loads", vehicle, [0, 0, 0], 1.184, digits),
        ...coefficientsObject("coeffs", coefficientTable(vehicle, saeReference, layouts.C6, digits)),
      });
      expect(record.reference).toMatchObject({
        density: 1.184,
        sources: { density: "ratio of a force table to a coefficient table" },
      });
      expect(last(record.whole.cd)).toBeCloseTo(totalDrag, 5);
      expect(record.parts).toEqual([]);
      expect(record.whole.cdFriction).not.toBeNull();
      expect(record.tableCd).not.toBeNull();
      expect(buildLedger(record).closing).toMatchObject({ ok: true });
      expect(buildLedger(record).total.drag!.value).toBeCloseTo(328 * 1.184, 2);
    }
  });

  test("objects that were written with densities of their own still add up", async () => {
    const record = await read(
      {
        "system/controlDict": controlDict({
          loads: { patches: "body", density: 1.2 },
          shell: { patches: "shell", density: 1 },
          others: { patches: "others", density: 1 },
        }),
        ...forcesObject("loads", vehicle, [0, 0, 0], 1.2),
        ...forcesObject("shell", [shell], [0, 0, 0], 1),
        ...forcesObject("others", [wing, wheels], [0, 0, 0], 1),
      },
      known,
    );
    expect(record.whole.name).toBe("loads");
    expect(record.parts.map(({ name }) => name)).toEqual(["others", "shell"]);
    expect(buildLedger(record).closing.ok).toBe(true);
  });

  test("drag in an oblique direction closes to the digits of the components", async () => {
    const angle = 0.17;
    const [c, s] = [Math.cos(angle), Math.sin(angle)];
    const turn = ([x, y, z]: [number, number, number]): [number, number, number] => [c * x - s * z, y, s * x + c * z];
    // Lift twenty times the drag, as on a wing: drag is a small difference of what is printed.
    const lifting = ["a", "b"].map((name, index) => {
      const part = steady(name, [0, 0, 0], [3.123456 + index, 0, 90.7 - 180.1 * index], [0.5, 0, 0.1], 60, swing(1.234567));
      return { ...part, pressure: part.pressure.map(turn), friction: part.friction.map(turn) };
    });
    const reference = { ...saeReference, drag: turn([1, 0, 0]), lift: turn([0, 0, 1]) };
    const record = await read({
      ...coefficientsObject("coeffs", coefficientTable(lifting, reference, layouts.C6, 7)),
      ...forcesObject("all", lifting, [0, 0, 0], 1.2, 7),
      ...forcesObject("a", [lifting[0]], [0, 0, 0], 1.2, 7),
      ...forcesObject("b", [lifting[1]], [0, 0, 0], 1.2, 7),
    });
    expect(record.oblique).toBe(true);
    expect(record.printedDigits).toBe(7);
    expect(record.parts.map(({ name }) => name)).toEqual(["a", "b"]);
    expect(buildLedger(record).closing).toMatchObject({ ok: true });
  });
});

describe("what the mesh says", () => {
  const forceFiles = {
    ...forcesObject("front", [shell], [0, 0, 0], 1.2),
    ...forcesObject("back", [wing], [0, 0, 0], 1.2),
    ...forcesObject("everything", vehicle, [0, 0, 0], 1.2),
  };
  const known = { area: 2.1, speed: 30, length: 2.7, centre: [0, 0, 0] as [number, number, number] };
  const dictionary = controlDict({
    front: { patches: "shell glass", density: 1.2 },
    back: { patches: '"win.*"', density: 1.2 },
    everything: { patches: "car", density: 1.2 },
  });
  const walls = ["shell", "glass", "wing", "wheel-1", "ground"];
  const groups = { shell: ["car"], glass: ["car"], wing: ["car"], "wheel-1": ["car"] };

  test("the whole is the object whose patches (through patterns and groups) hold all others", async () => {
    const record = await read(
      { ...forceFiles, "system/controlDict": dictionary, "constant/polyMesh/boundary": boundaryFile(walls, {}, groups) },
      known,
    );
    expect(record.whole).toMatchObject({ name: "everything", patches: ["shell", "glass", "wing", "wheel-1"] });
    expect(record.parts.map(({ name, patches }) => [name, patches])).toEqual([
      ["back", ["wing"]],
      ["front", ["shell", "glass"]],
      ["rest", ["wheel-1"]],
    ]);
  });

  test("objects in included files, and a packed boundary file, are read; nothing outside the case is", async () => {
    await inScratch(async (folder) => {
      await writeCase(join(folder, "case"), {
        ...forceFiles,
        "system/controlDict":
          'functions { #include "own"\n #includeFunc everything\n #include "../../outside"\n #include "/etc/hostname"\n }',
        "system/own": dictionary.replace(/^.*\nfunctions\n\{|\}\n$/g, "").replace(/everything \{.*?\}/, ""),
        "system/everything": "type forces; patches (car); rho rhoInf; rhoInf 1.2;",
      });
      await writeCase(folder, { outside: "back { type forces; patches (ground); rhoInf 7; }" });
      const boundary = join(folder, "case/constant/polyMesh/boundary");
      await writeCase(folder, { "case/constant/polyMesh/boundary.gz": "" });
      await writeFile(`${boundary}.gz`, gzipSync(boundaryFile(walls, {}, groups)));
      const record = await readCaseRecord(join(folder, "case"), known);
      expect(record.reference.density).toBe(1.2);
      expect(record.parts.map(({ name, patches }) => [name, patches])).toEqual([
        ["back", ["wing"]],
        ["front", ["shell", "glass"]],
        ["rest", ["wheel-1"]],
      ]);
    });
  });

  test("a symmetry plane is a remark; only an option makes it a half model", async () => {
    const files = {
      ...tables(["total"]),
      "constant/polyMesh/boundary": boundaryFile(["body"], { middle: "symmetryPlane" }),
    };
    const remarked = await read(files);
    expect(codes(remarked)).toEqual(["may-be-half"]);
    expect(remarked.reference.symmetryFactor).toBe(1);
    expect(last(remarked.whole.cd)).toBeCloseTo(totalDrag, 6);

    const half = await read(files, { half: true, area: 4.2 });
    expect(codes(half)).toEqual([]);
    expect(half.reference).toMatchObject({ symmetryFactor: 2, area: 4.2, sources: { symmetryFactor: "option", area: "option" } });
    // Twice the force on twice the area of the table.
    expect(last(half.whole.cd)).toBeCloseTo(totalDrag, 6);
    expect(half.whole.cs).toBeNull();
    expect(codes(buildLedger(half))).toContain("half-model");
    expect(codes(await read(files, { half: false }))).toEqual([]);

    const problem = await refused(files, { half: true });
    expect(problem.code).toBe("half-without-area");
    expect(problem.remedy).toBe("Give the area of the whole vehicle with --area.");
  });

  test("a pattern that matches nothing gives a part of zeros, and an error in the ledger, once", async () => {
    const nothing = steady("glass", [0, 0, 0], [0, 0, 0]);
    const ledger = buildLedger(
      await read({ ...tables(["total", "shell"]), ...forcesObject("glass", [nothing], [0, 0, 0], 1) }, { density: 1.2 }),
    );
    expect(ledger.parts.find(({ name }) => name === "glass")!.cd).toEqual({ value: 0, halfWidth: 0 });
    const zero = ledger.findings.filter(({ code }) => code === "zero-forces" || code === "all-zero");
    expect(zero).toMatchObject([{ code: "zero-forces", severity: "error", part: "glass" }]);
  });
});

describe("rows and files that are not in order", () => {
  test("no force history", async () => {
    const problem = await refused({ "system/controlDict": controlDict({}) });
    expect(problem).toMatchObject({ kind: "input", code: "no-forces" });
    expect(problem.remedy).toContain("postProcessing");
    expect((await readCaseRecord("no/such/case").catch((error) => error)).code).toBe("no-case");
  });

  test("broken dictionaries say nothing, and stop nothing", async () => {
    const record = await read({
      ...tables(["total"]),
      "system/controlDict": "functions { total { patches (a; }",
      "constant/polyMesh/boundary": "\0\0\0",
    });
    expect(last(record.whole.cd)).toBeCloseTo(totalDrag, 6);
  });

  test("a run that was killed between two tables loses the last row, not the moments", async () => {
    await inScratch(async (folder) => {
      await writeCase(folder, { ...forcesObject("loads", vehicle, [0, 0, 0], 1.2) });
      const path = join(folder, "postProcessing/loads/0/moment.dat");
      const lines = (await readFile(path, "utf8")).trimEnd().split("\n");
      await writeFile(path, `${lines.slice(0, -1).join("\n")}\n`);
      const record = await readCaseRecord(folder, { area: 2.1, speed: 30, density: 1.2, length: 2.7, centre: [0, 0, 0] });
      expect(record.whole.time).toHaveLength(59);
      expect(last(record.whole.cm)).toBeCloseTo(totalPitch, 6);
    });
  });

  test("rows that one object lacks are left out of all; an object of another run is left out as a whole", async () => {
    const later = Array.from({ length: 60 }, (_, row) => row + 4);
    const other = Array.from({ length: 60 }, (_, row) => row + 1000);
    const record = await read({
      ...tables(["total", "shell"]),
      ...coefficientsObject("wing", coefficientTable([wing], saeReference, layouts.C6, 12, later)),
      ...coefficientsObject("wheels", coefficientTable([wheels], saeReference, layouts.C6, 12, other)),
    });
    expect(record.whole.time[0]).toBe(4);
    expect(record.whole.time).toHaveLength(57);
    expect(record.parts.map(({ name }) => name)).not.toContain("wheels");
    const told = record.findings.map(({ code, part, severity }) => [code, part, severity]);
    expect(told).toContainEqual(["object-left-out", "wheels", "warning"]);
    const [rows] = record.findings.filter(({ code }) => code === "rows-not-common");
    expect(rows.message).toBe("3 rows that not every object has are left out.");
  });
});
