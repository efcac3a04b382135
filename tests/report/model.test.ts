import { describe, expect, test } from "vitest";
import { reportModel } from "../../src/report/model.js";
import type { TableModel } from "../../src/report/table-model.js";
import { exampleInput, partCounts, reference, variants } from "./example.js";

const model = reportModel(exampleInput());

/** Texts of one row, by its head. */
function row(table: TableModel, head: string): string[] {
  const found = table.groups.flatMap(({ rows }) => rows).filter((each) => each.head === head);
  expect(found, head).toHaveLength(1);
  return found[0]!.cells.map(({ text, note }) => (note === undefined ? text : `${text} ${note}`));
}

/** Texts of one row of the group with this title. */
function rowOf(table: TableModel, title: string, head: string): string[] {
  const group = table.groups.find((each) => each.title === title)!;
  return row({ ...table, groups: [group] }, head);
}

const whole = (variant: number, key: "drag" | "lift"): number =>
  Object.values(partCounts).reduce((sum, part) => sum + (part[key][variant] ?? 0), 0);

describe("the model of a study", () => {
  test("every comparison has its answer: counts, half-width, verdict, sentence", () => {
    expect(model.answers.map(({ a, b, verdict }) => [a, b, verdict])).toEqual([
      ["open-bed", "covered-bed", "resolved"],
      ["open-bed", "tailgate-down", "resolved"],
    ]);
    const expected = whole(1, "drag") - whole(0, "drag");
    expect(expected).toBeCloseTo(-13.8, 9);
    // Two half-widths of 0.6 counts: hypot(0.6, 0.6) = 0.85
    expect(model.answers[0]).toMatchObject({ delta: "−13.8", halfWidth: "± 0.8" });
    expect(model.answers[0]!.sentence).toBe("Drag falls, −13.8 ± 0.8 counts of Cd (resolved: as made up).");
  });

  test("the main table holds coefficients, newtons and kilogram-force of A, B and B − A", () => {
    const { table } = model.comparisons[0]!;
    expect(table.columns.map(({ title, note }) => [title, note])).toEqual([
      ["A", "open-bed"],
      ["B", "covered-bed"],
      ["B\u00a0−\u00a0A", "95 % interval"],
      ["verdict", undefined],
    ]);
    expect(row(table, "Cd")).toEqual(["0.3850", "0.3712", "−0.0138 ± 0.0008", "resolved"]);
    expect(row(table, "CdA, m²")).toEqual(["1.1015", "1.0620", "−0.0395 ± 0.0024", "direction-only"]);
    const q = 0.5 * reference.density * reference.speed ** 2 * reference.area;
    const [open, covered] = [0, 1].map((variant) => (q * whole(variant, "drag")) / 1000) as [number, number];
    expect(rowOf(table, "Forces at 108 km/h, N", "drag").slice(0, 2)).toEqual([open.toFixed(1), covered.toFixed(1)]);
    expect(rowOf(table, "Forces at 108 km/h, kgf", "drag").slice(0, 2)).toEqual([
      (open / 9.80665).toFixed(2),
      (covered / 9.80665).toFixed(2),
    ]);
    // Cl front of the example is 0.4 Cl + 0.02; the half-width of the difference is hypot(0.0009, 0.0009).
    const front = (variant: number) => 0.0004 * whole(variant, "lift") + 0.02;
    expect(rowOf(table, "Forces at 108 km/h, N", "lift, front axle")).toEqual([
      (q * front(0)).toFixed(1),
      (q * front(1)).toFixed(1).replace("-", "−"),
      `${(q * (front(1) - front(0))).toFixed(1).replace("-", "−")} ± ${(q * Math.hypot(0.0009, 0.0009)).toFixed(1)}`,
      "direction-only",
    ]);
  });

  test("axle forces are left out when A and B have different references", () => {
    const input = exampleInput();
    input.runs[1]!.ledger.reference = { ...input.runs[1]!.ledger.reference, speed: 31 };
    const { table } = reportModel(input).comparisons[0]!;
    const heads = table.groups.flatMap(({ rows }) => rows.map(({ head }) => head));
    expect(heads).toContain("Cl, front axle");
    expect(heads).not.toContain("lift, front axle");
  });

  test("parts stand by the size of their difference; one that only B has stands apart", () => {
    const parts = model.comparisons[0]!.parts!;
    expect(parts.groups.map(({ title, rows }) => [title, rows.map(({ head }) => head).slice(0, 3)])).toEqual([
      [null, ["cab", "tailgate", "bed"]],
      ["Parts that only one of the two has", ["bed-cover"]],
    ]);
    expect(row(parts, "cab")).toEqual(["64.8", "41.3", "−23.5 ± 0.3", "direction-only", "−2.6 ± 0.6", "direction-only"]);
    expect(row(parts, "bed-cover").slice(0, 3)).toEqual(["–", "4.6", "+4.6 ± 0.2"]);
    expect(parts.groups[1]!.rows[0]!.note).toBe("only in covered-bed");
    expect(model.comparisons[0]!.sum).toBe("The parts add up to −13.8 counts of drag; the whole differs by −13.8.");
  });

  test("the ledgers hold counts, shares and newtons, the whole between rules", () => {
    const { ledger } = model.runs[0]!;
    expect(row(ledger, "cab")).toEqual(["64.8 ± 0.2", "16.8", "60.3", "4.5", "312.5 ± 0.4", "102.2", "492.9"]);
    const rows = ledger.groups[0]!.rows;
    expect(rows.at(-1)).toMatchObject({ head: "whole vehicle", total: true });
    expect(rows.at(-1)!.part).toBeUndefined();
    expect(rows).toHaveLength(12);
  });

  test("parts and runs side by side, each part in the tone of its body", () => {
    const matrix = model.matrix!;
    expect(matrix.columns.map(({ title }) => title)).toEqual([...variants]);
    expect(row(matrix, "bed-cover")).toEqual(["–", "4.6", "–"]);
    expect(row(matrix, "whole vehicle")).toEqual(["385.0", "371.2", "381.4"]);
    const painted = model.bodies!.variants.flatMap(({ parts }) => parts);
    for (const { head, tone } of matrix.groups[0]!.rows.slice(0, -1))
      expect(painted.find(({ name }) => name === head)!.tone, head).toBe(tone);
  });

  test("what limits it: findings of all comparisons once, what can be resolved, layers that differ", () => {
    expect(model.limits).toEqual([
      "The spread that the mesh alone causes was not measured. Repeat on a finer mesh.",
      "Smaller drag differences than 0.8 counts for covered-bed, 0.8 counts for tailgate-down cannot be told from the noise of the histories.",
      "covered-bed minus open-bed: the wall layers of the two meshes differ by more than 5 % of what was asked (mean number in A and B: bed 2.76 and 2.10), so part of the difference there may be one of mesh.",
    ]);
  });

  test("errors of a run come first and name it", () => {
    const input = exampleInput();
    input.runs[2]!.ledger.findings = [
      {
        code: "zero-forces",
        severity: "error",
        part: "hood",
        count: 1,
        places: [],
        message: "every force is zero.",
        remedy: "Look.",
      },
    ];
    expect(reportModel(input).limits[0]).toBe("tailgate-down: hood: every force is zero. Look.");
  });

  test("the set-up: a sheet, a plan by subject with reasons, and only what differs between runs", () => {
    const { setUp } = model;
    expect(setUp.sheet).toContainEqual({ name: "speed", value: "108 km/h (30.00 m/s)" });
    expect(setUp.sheet).toContainEqual({ name: "domain, as computed", value: "53.1 × 20.4 × 10.2 m" });
    expect(setUp.sheet).toContainEqual({ name: "cell on the body", value: "15.9 mm" });
    expect(setUp.sheet).toContainEqual({ name: "kinematic viscosity", value: "1.461·10⁻⁵ m²/s" });
    expect(setUp.plan.map(({ caption }) => caption)).toEqual(["Model", "Air", "Flow", "Reference", "Domain", "Mesh"]);
    expect(row(setUp.plan[1]!, "air.density")).toEqual(["1.225", "kg/m³", "15.0 degC, 1013.25 hPa, 0 % humidity", "ISO 2533"]);
    expect(setUp.differing!.groups[0]!.rows.map(({ head }) => head)).toEqual(["mesh.predictedCells"]);
    expect(row(setUp.references, "area, m²")).toEqual(["2.8610", "2.8610", "2.8610", "run card"]);
  });

  test("one run alone is shown without a comparison", () => {
    const input = exampleInput();
    const alone = reportModel({ ...input, runs: [input.runs[0]!], comparisons: [], bodies: [] });
    expect(alone.answers).toEqual([]);
    expect(alone.bodies).toBeNull();
    expect(alone.totals.columns.map(({ title }) => title)).toEqual(["open-bed"]);
    expect(row(alone.totals, "Cd")).toEqual(["0.3850 ± 0.0006"]);
    expect(row(alone.totals, "drag, kgf")[0]).toMatch(/^61\.92 ± 0\.10$/);
  });

  test("a case made elsewhere: unknown reference, no plan, no parts", () => {
    const input = exampleInput();
    const run = input.runs[0]!;
    const bare = { value: 0.3, halfWidth: null };
    const model = reportModel({
      ...input,
      comparisons: [],
      bodies: [],
      runs: [
        {
          ...run,
          plan: [],
          condition: null,
          mesh: null,
          ledger: {
            ...run.ledger,
            condition: "",
            parts: [],
            reference: {
              area: 2,
              length: null,
              centre: null,
              speed: null,
              density: null,
              wheelbase: null,
              symmetryFactor: 1,
              sources: {},
            },
            total: { ...run.ledger.total, cd: bare, drag: null, lift: null, cda: null, clFront: null, clRear: null },
          },
        },
      ],
    });
    expect(model.matrix).toBeNull();
    expect(model.setUp.of).toBeNull();
    expect(model.mesh.whole).toBeNull();
    expect(row(model.totals, "Cd")).toEqual(["0.3000 ± ?"]);
    expect(model.totals.groups[0]!.rows.map(({ head }) => head)).toEqual(["Cd", "Cl"]);
    expect(model.runs[0]!.reference).toBe("reference area 2.0000 m², speed unknown, density unknown, no wheelbase");
  });

  test("several conditions: runs are named with their speed, the body shows the first", () => {
    const input = exampleInput();
    const faster = input.runs.slice(0, 2).map((run) => ({
      ...run,
      condition: { ...run.condition!, name: "40ms", speed: 40 },
      ledger: { ...run.ledger, condition: "40ms", path: `${run.ledger.path}-40` },
    }));
    const model = reportModel({ ...input, runs: [...input.runs, ...faster] });
    expect(model.runs.map(({ name }) => name)).toEqual([
      "open-bed, 108 km/h",
      "covered-bed, 108 km/h",
      "tailgate-down, 108 km/h",
      "open-bed, 144 km/h",
      "covered-bed, 144 km/h",
    ]);
    expect(model.matrix!.columns).toHaveLength(3);
  });

  test("two cases of one name are told apart by their folders", () => {
    const input = exampleInput();
    const [one, other] = input.runs as [(typeof input.runs)[0], (typeof input.runs)[0]];
    other.ledger.variant = one.ledger.variant;
    expect(reportModel({ ...input, comparisons: [] }).runs.map(({ name }) => name)).toEqual([
      "open-bed (cases/open-bed-30ms)",
      "open-bed (cases/covered-bed-30ms)",
      "tailgate-down",
    ]);
  });

  test("recorded results are said once, whatever the number of runs", () => {
    const input = exampleInput();
    for (const run of input.runs) run.ledger.recorded = "a run of 2026";
    expect(reportModel(input).recorded).toEqual(["a run of 2026"]);
    expect(model.recorded).toEqual([]);
  });

  test("cautions say what this is not", () => {
    const text = model.cautions.join(" ");
    for (const said of [
      "numerical estimates",
      "steady",
      "as drawn",
      "axle lift",
      "unstable",
      "sign-off",
      "local rules",
      "licensed",
    ])
      expect(text).toContain(said);
  });

  test("rows of the histories: files that were used alike stand together", () => {
    expect(model.provenance[0]).toMatchObject({
      run: "open-bed",
      rows: [
        {
          rows: "1\u202f200 of 1\u202f200 rows, 1 to 1200: start of the run",
          files: ["postProcessing/whole/0/force.dat", "postProcessing/part-cab/0/force.dat"],
        },
      ],
    });
  });
});

describe("parts of a half model", () => {
  test("a part that is left out goes with the mirror image that is computed", () => {
    const input = exampleInput();
    const run = input.runs[0]!;
    run.leftOut = ["mirror-left", "wheel-front-left", "wheel-rear-left"];
    for (const each of input.runs) {
      each.leftOut = run.leftOut;
      each.ledger.parts = each.ledger.parts.filter(({ name }) => !run.leftOut.includes(name));
    }
    const model = reportModel(input);
    const parts = model.bodies!.variants[0]!.parts;
    expect(parts.filter(({ name, row }) => name !== row).map(({ name, row }) => [name, row])).toEqual([
      ["mirror-left", "mirror-right"],
      ["wheel-front-left", "wheel-front-right"],
      ["wheel-rear-left", "wheel-rear-right"],
    ]);
    const row = model.matrix!.groups[0]!.rows.find(({ head }) => head === "mirror-right")!;
    expect(row.note).toBe("with mirror-left");
  });
});
