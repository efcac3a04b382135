import fc from "fast-check";
import { describe, expect, test } from "vitest";
import type { History } from "../../src/history/history.js";
import { type Piece, pieceOf } from "../../src/history/pieces.js";
import { splice } from "../../src/history/splice.js";
import { readTables } from "../../src/openfoam/read-table.js";
import type { Table } from "../../src/openfoam/table.js";

/** Drag and lift over a run: a start-up that dies away, a swing, and noise from a fixed sequence. */
const drag = (time: number): number => 0.3 + 4 * Math.exp(-time / 8) + 0.002 * Math.sin(time) + 0.0005 * Math.sin(time * time);
const lift = (time: number): number => -0.1 - Math.exp(-time / 12) + 0.003 * Math.cos(time / 3);

interface Part {
  folder: number;
  from: number;
  to: number;
  suffixed?: boolean;
  /** added to every value: another run */
  shift?: number;
  area?: number;
  step?: number;
}

const tableOf = ({ from, to, shift = 0, area = 2.1, step = 1 }: Part): Table => {
  const times: number[] = [];
  for (let time = from; time <= to + 1e-9; time += step) times.push(time);
  const rows = times.map((time) => `${time}\t${drag(time) + shift}\t${lift(time) + shift}`);
  const text = `# Force and moment coefficients\n# Aref : ${area}\n# Time \tCd\tCl\n${rows.join("\n")}\n`;
  return readTables(new TextEncoder().encode(text), "coefficient.dat")[0]!;
};
const piece = (part: Part): Piece =>
  pieceOf(
    tableOf(part),
    `${part.folder}/coefficient${part.suffixed ? `_${part.folder}` : ""}.dat`,
    part.folder,
    part.suffixed ?? false,
  );
const join = (...parts: Part[]): History => splice("total", "coefficient", parts.map(piece));
const times = (history: History): number[] => [...history.columns[0]!.values];
const range = (from: number, to: number): number[] => Array.from({ length: to - from + 1 }, (_, index) => from + index);
const used = (history: History): number[] => history.segments.map((segment) => segment.used);
const codes = (history: History): string[] => history.findings.map(({ code }) => code);

describe("files of one run", () => {
  test("folders are sorted as numbers; each continues the one before", () => {
    const history = join(
      { folder: 1000, from: 1001, to: 1010 },
      { folder: 0, from: 1, to: 90 },
      { folder: 90, from: 91, to: 1000 },
    );
    expect(times(history)).toEqual(range(1, 1010));
    expect(history.segments.map(({ file, used: rows, reason }) => [file, rows, reason])).toEqual([
      ["0/coefficient.dat", 90, "start of the run"],
      ["90/coefficient.dat", 910, "continues 0/coefficient.dat"],
      ["1000/coefficient.dat", 10, "continues 90/coefficient.dat"],
    ]);
    expect(history.findings).toEqual([]);
  });

  test("an overlap: the later start wins, and the segment says so", () => {
    const history = join({ folder: 0, from: 1, to: 100 }, { folder: 45, from: 46, to: 80, shift: 1e-4 });
    expect(times(history)).toEqual(range(1, 80));
    expect(history.columns[1]!.values[45]).toBe(drag(46) + 1e-4);
    expect(history.segments[0]!.reason).toBe("start of the run; 55 rows from time 46 on were replaced by 45/coefficient.dat");
    expect(used(history)).toEqual([45, 35]);
  });

  test("rows at a write interval: the first row of the restart is one interval on", () => {
    const history = join({ folder: 0, from: 10, to: 100, step: 10 }, { folder: 104, from: 110, to: 200, step: 10 });
    expect(history.rows).toBe(20);
  });

  test("the restart of a short folder chain stays one run although few rows came before", () => {
    const history = join({ folder: 0, from: 1, to: 30 }, { folder: 30, from: 31, to: 31 }, { folder: 31, from: 32, to: 60 });
    expect(times(history)).toEqual(range(1, 60));
  });

  test("a table of one row written afterwards from stored fields is no restart", () => {
    const history = join({ folder: 0, from: 1, to: 50 }, { folder: 20, from: 20, to: 20 });
    expect(times(history)).toEqual(range(1, 50));
    expect(history.segments[1]!.reason).toBe("written afterwards from stored fields (-postProcess), not by the run");
  });
});

describe("files of several runs", () => {
  test("the suffixed file is the newer run; the plain one is the oldest", () => {
    const history = join({ folder: 0, from: 1, to: 50 }, { folder: 0, from: 1, to: 30, suffixed: true, shift: 0.01 });
    expect(times(history)).toEqual(range(1, 30));
    expect(history.columns[1]!.values[0]).toBe(drag(1) + 0.01);
    expect(codes(history)).toEqual(["several-runs"]);
    expect(history.segments[0]!.reason).toBe("another run, older than the one used");
  });

  test("a later folder that the newest run does not reach belongs to the older one", () => {
    const history = join(
      { folder: 0, from: 1, to: 40 },
      { folder: 0, from: 1, to: 26, suffixed: true },
      { folder: 40, from: 41, to: 60 },
    );
    expect(times(history)).toEqual(range(1, 26));
    expect(history.segments.map((segment) => segment.reason)).toEqual([
      "another run, older than the one used",
      "start of the run",
      "continues 0/coefficient.dat, an older run, although its folder is later",
    ]);
  });

  test("a later folder continues the run whose values it takes up", () => {
    const parts: Part[] = [
      { folder: 0, from: 1, to: 60, shift: 0.4 },
      { folder: 0, from: 1, to: 60, suffixed: true },
    ];
    expect(times(join(...parts, { folder: 50, from: 51, to: 80 }))).toEqual(range(1, 80));
    // Here the folder goes on from the older run, so the newest run is what the suffixed file alone holds.
    expect(times(join(...parts, { folder: 50, from: 51, to: 80, shift: 0.4 }))).toEqual(range(1, 60));
  });

  test("a folder that starts afresh from the initial field is another run", () => {
    const fresh: Table = tableOf({ folder: 0, from: 1, to: 60 });
    fresh.columns[0]!.values.forEach((time, row, all) => {
      all[row] = time + 30;
    });
    const history = splice("total", "coefficient", [
      piece({ folder: 0, from: 1, to: 60 }),
      pieceOf(fresh, "30/coefficient.dat", 30, false),
    ]);
    expect(times(history)).toEqual(range(31, 90));
    expect(codes(history)).toEqual(["several-runs"]);
  });

  test("a folder 1 beside folder 0 that covers the same rows is another run", () => {
    const history = join({ folder: 0, from: 0, to: 50 }, { folder: 1, from: 1, to: 40 });
    expect(times(history)).toEqual(range(1, 40));
    expect(codes(history)).toEqual(["several-runs"]);
  });

  test("other reference values are not joined, and the finding names them", () => {
    const history = join({ folder: 0, from: 1, to: 50 }, { folder: 50, from: 51, to: 70, area: 1.05 });
    expect(times(history)).toEqual(range(51, 70));
    expect(history.findings[0]).toMatchObject({
      code: "reference-changes",
      severity: "warning",
      message: "50/coefficient.dat was not joined to 0/coefficient.dat: Aref is 2.1 in the one and 1.05 in the other",
    });
  });

  test("a value that only was printed with fewer digits is no other reference", () => {
    expect(join({ folder: 0, from: 1, to: 50, area: 2.1234567 }, { folder: 50, from: 51, to: 70, area: 2.123457 }).rows).toBe(70);
  });

  test("other columns are not joined", () => {
    const other = tableOf({ folder: 50, from: 51, to: 70 });
    other.columns[2]!.name = "Cs";
    const history = splice("total", "coefficient", [
      piece({ folder: 0, from: 1, to: 50 }),
      pieceOf(other, "50/coefficient.dat", 50, false),
    ]);
    expect(history.rows).toBe(20);
    expect(history.findings[0]!.message).toContain("their columns differ");
  });

  test("a branch that was given up is named", () => {
    const history = join({ folder: 0, from: 1, to: 100 }, { folder: 45, from: 46, to: 50 }, { folder: 100, from: 101, to: 110 });
    expect(times(history)).toEqual(range(1, 110));
    expect(history.segments[1]).toMatchObject({
      used: 0,
      reason: "a branch of the run that was given up: a later start took over",
    });
    expect(codes(history)).toEqual(["several-runs"]);
  });
});

describe("rows without a result", () => {
  const read = (rows: string[], title = "Force and moment coefficients"): History => {
    const text = `# ${title}\n# Time \tCm\tCd\tCl\tCl(f)\tCl(r)\n${rows.join("\n")}\n`;
    return splice("total", "forceCoeffs", [
      pieceOf(readTables(new TextEncoder().encode(text), "forceCoeffs.dat")[0]!, "0/forceCoeffs.dat", 0, false),
    ]);
  };
  const row = (time: number): string => `${time}\t0.1\t0.3\t0.2\t0.2\t0`;

  test("exact zeros before the first values are left out with a warning", () => {
    const history = read([...range(1, 40).map((time) => `${time}\t0\t0\t0\t0\t0`), ...range(41, 60).map(row)]);
    expect(times(history)).toEqual(range(41, 60));
    expect(history.findings[0]).toMatchObject({ code: "leading-zeros", severity: "warning", count: 40 });
  });

  test("all zeros is an error, not a drag of zero", () => {
    const history = read(range(1, 40).map((time) => `${time}\t0\t0\t0\t-0.000000e+00\t0`));
    expect(history.rows).toBe(40);
    expect(history.findings).toMatchObject([
      {
        code: "all-zero",
        severity: "error",
        message: "every value of total is exactly zero: its patch names match no patch of the mesh",
      },
    ]);
  });

  test("the row of the initial field is left out where the family writes one", () => {
    expect(times(read([0, 1, 2].map(row), "Force coefficients"))).toEqual([1, 2]);
    expect(times(read([0, 1, 2].map(row)))).toEqual([0, 1, 2]);
  });
});

describe("one file", () => {
  const lines = (all: number[]): Piece => {
    const text = `# Force and moment coefficients\n# Time \tCd\tCl\n${all.map((time, index) => `${time}\t${index}\t0.5`).join("\n")}\n`;
    return pieceOf(readTables(new TextEncoder().encode(text), "x.dat")[0]!, "x.dat", 0, false);
  };

  test("the time goes back: a run that was appended replaces the rows from there on", () => {
    const found = lines([1, 2, 3, 4, 2, 3]);
    expect([...found.table.columns[0]!.values]).toEqual([1, 2, 3]);
    expect([...found.table.columns[1]!.values]).toEqual([0, 4, 5]);
    expect(found.remark).toBe("the time goes back inside the file: 3 rows were replaced by later ones");
  });

  test("of rows with one printed time the last is kept", () => {
    expect([...lines([1, 2, 2, 3]).table.columns[1]!.values]).toEqual([0, 2, 3]);
  });

  test("rows per patch keep their repeated time, also when a run was appended", () => {
    const rows = [10, 10, 20, 20, 10, 10].map((time, index) => `${time}\tp${index % 2}\t${index}\t9\t5`).join("\n");
    const table = readTables(new TextEncoder().encode(`# y+ ()\n# Time \tpatch\tmin\tmax\taverage\n${rows}\n`), "yPlus.dat")[0]!;
    const found = pieceOf(table, "yPlus.dat", 0, false);
    expect([...found.table.columns[1]!.values]).toEqual([4, 5]);
    expect(found.table.words[0]!.values).toEqual(["p0", "p1"]);
  });
});

describe("a known run, torn into pieces at random", () => {
  test("restarts anywhere, with any overlap, give the known run (seed 7)", () => {
    fc.assert(
      fc.property(
        fc.integer({ min: 60, max: 300 }),
        fc.uniqueArray(fc.integer({ min: 20, max: 290 }), { maxLength: 5 }),
        fc.array(fc.integer({ min: 0, max: 40 }), { minLength: 6, maxLength: 6 }),
        (end, cuts, overlaps) => {
          const starts = [0, ...cuts.filter((cut) => cut < end - 1).sort((a, b) => a - b)];
          const parts = starts.map((folder, index): Part => {
            const next = starts[index + 1];
            return { folder, from: folder + 1, to: next === undefined ? end : Math.min(end, next + overlaps[index]!) };
          });
          const history = splice("total", "coefficient", [...parts].reverse().map(piece));
          expect(times(history)).toEqual(range(1, end));
          expect([...history.columns[1]!.values]).toEqual(range(1, end).map(drag));
          expect(used(history).reduce((sum, rows) => sum + rows, 0)).toBe(end);
          expect(history.findings).toEqual([]);
        },
      ),
      { seed: 7, numRuns: 150 },
    );
  });

  test("a text cut anywhere and runs appended anywhere: the rows that remain are the known ones, and what was lost is named (seed 8)", () => {
    const header = "# Force and moment coefficients\n# Aref : 2.1\n# Time \tCd\tCl\n";
    const rows = (from: number, to: number): string =>
      range(from, to)
        .map((time) => `${time}\t${drag(time)}\t${lift(time)}\n`)
        .join("");
    fc.assert(
      fc.property(
        fc.integer({ min: 5, max: 60 }),
        fc.integer({ min: 1, max: 60 }),
        fc.integer({ min: 1, max: 70 }),
        fc.integer({ min: 0, max: 3000 }),
        fc.boolean(),
        (first, back, second, cut, again) => {
          const whole =
            header + rows(1, first) + (again ? header : "") + rows(Math.min(back, first), Math.min(back, first) + second);
          const text = whole.slice(0, Math.max(header.length, whole.length - cut));
          const table = readTables(new TextEncoder().encode(text), "x.dat")[0]!;
          const found = pieceOf(table, "x.dat", 0, false);
          const kept = [...(found.table.columns[0]?.values ?? [])];
          expect(kept).toEqual(range(1, kept.length));
          expect([...(found.table.columns[1]?.values ?? [])]).toEqual(kept.map(drag));
          const ended = text.endsWith("\n");
          expect(table.remarks.some(({ code }) => code === "cut-last-line" || code === "no-rows")).toBe(!ended || table.rows === 0);
        },
      ),
      { seed: 8, numRuns: 400 },
    );
  });
});
