import { gzipSync } from "node:zlib";
import { describe, expect, test } from "vitest";
import type { Problem } from "../../src/errors.js";
import { readTable, readTables } from "../../src/openfoam/read-table.js";
import type { Table } from "../../src/openfoam/table.js";

const bytes = (text: string): Uint8Array => new TextEncoder().encode(text);
const read = (text: string, name = "table.dat"): Table => readTable(bytes(text), name);
/** Columns as plain arrays by name. */
const columns = (table: Table): Record<string, number[]> =>
  Object.fromEntries(table.columns.map(({ name, values }) => [name, [...values]]));
const refusal = (content: Uint8Array): Problem => {
  try {
    readTables(content, "case/force.dat");
  } catch (problem) {
    return problem as Problem;
  }
  throw new Error("nothing was refused");
};

const vector = "(1.350000e+00 0.000000e+00 0.000000e+00)";
const axes = "# dragDir     : (1.000000e+00 0.000000e+00 0.000000e+00)\n# liftDir     : (0.000000e+00 0.000000e+00 1.000000e+00)\n";
const references = `# magUInf     : 3.300000e+01\n# lRef        : 2.700000e+00\n# Aref        : 2.100000e+00\n# CofR        : ${vector}\n`;

describe("coefficient tables", () => {
  test("C1: no title, no values, plain numbers", () => {
    const table = read("# Time\tCd\tCl\tCm\n0.5\t0.3\t-0.1\t1e-05\n", "forceCoeffs.dat");
    expect(table).toMatchObject({ layout: "coefficients", dialect: "C1", header: {}, rows: 1 });
    expect(columns(table)).toEqual({ Time: [0.5], Cd: [0.3], Cl: [-0.1], Cm: [1e-5] });
  });

  test("C2: the header glues its last two names", () => {
    const table = read("# Time        \tCm\tCd\tCl\tCl(f)Cl(r)\n2.500000e-01\t1\t2\t3\t4\t-1\n");
    expect(table.dialect).toBe("C2");
    expect(columns(table)).toEqual({ Time: [0.25], Cm: [1], Cd: [2], Cl: [3], "Cl(f)": [4], "Cl(r)": [-1] });
  });

  test("C3: every column is named twice, rows hold each once", () => {
    const names = "Cm           \tCd           \tCl           \tCl(f)        \tCl(r)        ";
    const table = read(
      `# Force coefficients\n${axes}${references}# Time       \t${names}\tCm\tCd\tCl\tCl(f)\tCl(r)\n1\t1\t2\t3\t4\t-1\n`,
    );
    expect(table).toMatchObject({ dialect: "C3", remarks: [] });
    expect(table.columns.map((column) => column.name)).toEqual(["Time", "Cm", "Cd", "Cl", "Cl(f)", "Cl(r)"]);
  });

  test.each([
    ["forceCoeffs.dat", "C4"],
    ["coefficient.dat", "C5"],
    ["copy.dat", "C4 or C5"],
  ])("C4 and C5 differ only in the file's name: %s", (name, dialect) => {
    const table = read(`# Force coefficients\n${axes}${references}# Time \tCm\tCd\tCl\tCl(f)\tCl(r)\n1\t1\t2\t3\t4\t-1\n`, name);
    expect(table).toMatchObject({ layout: "coefficients", dialect });
  });

  test("C6 and C7 have the same count in another order: names decide, not places", () => {
    const c6 = ["Cd", "Cs", "Cl", "CmRoll", "CmPitch", "CmYaw", "Cd(f)", "Cd(r)", "Cs(f)", "Cs(r)", "Cl(f)", "Cl(r)"];
    const c7 = [...c6].sort();
    const value = (name: string): number => c6.indexOf(name) + 0.5;
    const text = (title: string, names: string[]): string =>
      `# ${title}\n${axes}${references}#\n# Time        \t${names.map((name) => name.padEnd(16)).join("\t")}\n7             \t${names.map(value).join("\t")}\n`;
    const [older, newer] = [read(text("Force coefficients", c6)), read(text("Force and moment coefficients", c7))];
    expect([older.dialect, newer.dialect]).toEqual(["C6", "C7"]);
    for (const table of [older, newer]) for (const name of c6) expect(columns(table)[name]).toEqual([value(name)]);
  });

  test("C7 with a subset of columns", () => {
    const table = read(`# Force and moment coefficients\n${axes}${references}#\n# Time \tCd \tCl \n1 \t0.9\t-0.2\n2 \t0.4\t-0.1\n`);
    expect(columns(table)).toEqual({ Time: [1, 2], Cd: [0.9, 0.4], Cl: [-0.2, -0.1] });
    expect(table.header).toEqual({
      dragDir: [1, 0, 0],
      liftDir: [0, 0, 1],
      magUInf: 33,
      lRef: 2.7,
      Aref: 2.1,
      CofR: [1.35, 0, 0],
    });
  });

  test("a coefficient row with a number more than the header names is not given names that may be shifted", () => {
    const table = read(`# Force coefficients\n${axes}${references}# Time \tCd\tCl\n1\t2\t3\t4\n2\t3\t4\t5\n`);
    expect(table.layout).toBe("unknown");
    expect(table.columns.map((column) => column.name)).toEqual(["Time", "column 2", "column 3", "column 4"]);
    expect(table.remarks).toEqual([
      { code: "header-mismatch", message: "the header names 3 columns but the rows hold 4 numbers: the columns have no names" },
    ]);
  });
});

describe("forces and moments", () => {
  const sums = { total_x: [11], total_y: [22], total_z: [33] };
  const forces = { pressure_x: [1], pressure_y: [2], pressure_z: [3], viscous_x: [10], viscous_y: [20], viscous_z: [30] };
  const header = `# Forces      \n# CofR        : ${vector}\n`;

  test.each([
    ["F1", "# Time\tforces(pressure, viscous) moment(pressure, viscous)\n5\t(((1 2 3) (10 20 30)) ((4 5 6) (40 50 60)))\n"],
    ["F2", `${header}# Time\tforces(pressure, viscous) moment(pressure, viscous)\n5\t((1 2 3),(10 20 30)) ((4 5 6),(40 50 60))\n`],
    [
      "F4",
      `${header}# Time        forces(pressure viscous)\tmoments(pressure viscous)\n5 \t((1 2 3) (10 20 30)) ((4 5 6) (40 50 60))\n`,
    ],
  ])("%s holds both: two tables with the same columns, the total is the sum", (dialect, text) => {
    const [force, moment] = readTables(bytes(text), "forces.dat");
    expect(force).toMatchObject({ layout: "forces", dialect });
    expect(moment).toMatchObject({ layout: "moments", dialect });
    expect(columns(force!)).toEqual({ Time: [5], ...sums, ...forces });
    expect(columns(moment!)).toMatchObject({ Time: [5], total_x: [44], pressure_z: [6], viscous_y: [50] });
  });

  test("F3 has a porous part, which is in the total", () => {
    const text = `${header}# Time       forces(pressure viscous porous) moment(pressure viscous porous)\n1.0e+00\t((1 2 3) (10 20 30) (100 200 300)) ((4 5 6) (40 50 60) (0 0 0))\n`;
    const [force, moment] = readTables(bytes(text), "forces.dat");
    expect(force!.dialect).toBe("F3");
    expect(columns(force!)).toMatchObject({ total_x: [111], porous_z: [300] });
    expect(columns(moment!)).toMatchObject({ total_z: [66], porous_z: [0] });
  });

  test.each([
    ["Force", "forces"],
    ["Moment", "moments"],
  ])("F5 and F6, title %s: the total stands first, with and without brackets", (title, layout) => {
    const start = `# ${title}       \n# CofR        : ${vector}\n#\n`;
    const f5 = `${start}# Time        \t(total_x total_y total_z)\t(pressure_x pressure_y pressure_z)\t(viscous_x viscous_y viscous_z)\n5             \t(11 22 33)\t(1 2 3)\t(10 20 30)\n`;
    const f6 = `${start}# Time        \ttotal_x total_y total_z\tpressure_x pressure_y pressure_z\tviscous_x viscous_y viscous_z\n5              11 22 33 1 2 3 10 20 30\n`;
    for (const [text, dialect] of [
      [f5, "F5"],
      [f6, "F6"],
    ] as const) {
      const tables = readTables(bytes(text), "any.dat");
      expect(tables).toHaveLength(1);
      expect(tables[0]).toMatchObject({ layout, dialect, header: { CofR: [1.35, 0, 0] } });
      expect(columns(tables[0]!)).toEqual({ Time: [5], ...sums, ...forces });
    }
  });

  test("F6 with porosity keeps the names of the other dialects", () => {
    const text =
      "# Force\n#\n# Time \ttotal_x total_y total_z\tpressure_x pressure_y pressure_z\tviscous_x viscous_y viscous_z\tinternal_x internal_y internal_z\n5 111 222 333 1 2 3 10 20 30 100 200 300\n";
    expect(
      read(text)
        .columns.map((column) => column.name)
        .slice(-3),
    ).toEqual(["porous_x", "porous_y", "porous_z"]);
  });

  test("a local system on the same row", () => {
    const block = "((1 2 3) (10 20 30)) ((4 5 6) (40 50 60))";
    const [force, moment] = readTables(
      bytes(`${header}# Time  forces(pressure viscous)\tmoments(pressure viscous)\n5\t${block}\t${block}\n`),
      "forces.dat",
    );
    expect(columns(force!)).toMatchObject({ total_x: [11], local_total_x: [11], local_viscous_z: [30] });
    expect(columns(moment!)).toMatchObject({ total_x: [44], local_total_x: [44] });
  });

  test("a local system in a second row of the same time", () => {
    const rows = [5, 10, 15].flatMap((time) => [
      `${time}\t((${time} 2 3) (10 20 30)) ((4 5 6) (40 50 60))`,
      `${time}\t((7 2 3) (10 20 30)) ((4 5 6) (40 50 60))`,
    ]);
    const [force] = readTables(
      bytes(`${header}# Time  forces(pressure viscous) moment(pressure viscous)\n${rows.join("\n")}\n`),
      "forces.dat",
    );
    expect(columns(force!)).toMatchObject({ Time: [5, 10, 15], pressure_x: [5, 10, 15], local_pressure_x: [7, 7, 7] });
  });

  test("a moving body writes its rotation centre after the time", () => {
    const [force] = readTables(
      bytes(
        "# Forces\n# Time \tCofR\tforces(pressure viscous)\tmoments(pressure viscous)\n5\t(7 8 9)\t((1 2 3) (10 20 30)) ((4 5 6) (40 50 60))\n",
      ),
      "forces.dat",
    );
    expect(columns(force!)).toEqual({ Time: [5], CofR_x: [7], CofR_y: [8], CofR_z: [9], ...sums, ...forces });
  });

  test("rows of another width are left out and named with their line", () => {
    const table = read(
      "# Force\n#\n# Time \ttotal_x total_y total_z\tpressure_x pressure_y pressure_z\tviscous_x viscous_y viscous_z\n1 1 2 3 1 2 3 0 0 0\n2 1 2 3\n3 1 2 3 1 2 3 0 0 0\n",
    );
    expect(columns(table).Time).toEqual([1, 3]);
    expect(table.remarks).toEqual([{ code: "odd-rows", message: "1 row was left out: not 10 numbers (line 5 has 4 cells)" }]);
  });
});

describe("other tables", () => {
  test("residuals: N/A is missing, and one N/A can stand for all components of a vector", () => {
    const text =
      "# Residuals   \n# Time        \tp\tUx\tUz\tk\n0             \tN/A\tN/A\tN/A\n1\t0.5\tN/A\t0.25\n2\t0.1\t0.2\t0.3\tN/A\n";
    const table = read(text);
    expect(table).toMatchObject({ layout: "residuals", rows: 3, remarks: [] });
    expect(columns(table)).toEqual({
      Time: [0, 1, 2],
      p: [Number.NaN, 0.5, 0.1],
      Ux: [Number.NaN, Number.NaN, 0.2],
      Uz: [Number.NaN, Number.NaN, 0.3],
      k: [Number.NaN, 0.25, Number.NaN],
    });
  });

  const solverNames =
    "U_solver\tUx_initial\tUx_final\tUx_iters\tUy_initial\tUy_final\tUy_iters\tU_converged\tp_solver\tp_initial\tp_final\tp_iters\tp_converged";
  const u = "smoothSolver\t1\t0.1\t3\t2\t0.2\t4\tfalse";
  const p = "GAMG\t5\t0.5\t6\ttrue";
  const solver = (rows: string[]): Table => read(`# Solver information\n# Time        \t${solverNames}\n${rows.join("\n")}\n`);

  test("solver information: words apart from numbers", () => {
    const table = solver([`1\t${u}\t${p}`]);
    expect(table.layout).toBe("solver-information");
    expect(columns(table)).toEqual({
      Time: [1],
      Ux_initial: [1],
      Ux_final: [0.1],
      Ux_iters: [3],
      Uy_initial: [2],
      Uy_final: [0.2],
      Uy_iters: [4],
      p_initial: [5],
      p_final: [0.5],
      p_iters: [6],
    });
    expect(table.words).toEqual([
      { name: "U_solver", values: ["smoothSolver"] },
      { name: "U_converged", values: ["false"] },
      { name: "p_solver", values: ["GAMG"] },
      { name: "p_converged", values: ["true"] },
    ]);
  });

  test("solver information: groups the header does not know, or fewer, are placed by their shape", () => {
    const table = solver([`1\tdiagonal\t0\t0\t0\ttrue\t${u}\t${p}`, `2\t${u}`, `3\t${p}`, `4\t${u}\t${p}`]);
    expect(columns(table).p_initial).toEqual([5, Number.NaN, 5, 5]);
    expect(columns(table).Uy_final).toEqual([0.2, 0.2, Number.NaN, 0.2]);
    expect(table.remarks).toEqual([]);
  });

  test("solver information: what cannot be told apart stays empty instead of being guessed", () => {
    const table = solver([`1\t${u}\tPCG\t9\t9\t9\ttrue\t${p}`, `2\t${u}\t${p}`]);
    expect(columns(table).p_initial).toEqual([Number.NaN, 5]);
    expect(table.remarks.map((remark) => remark.code)).toEqual(["unclear-groups"]);
  });

  test("y+: one row per patch, whatever the patch is called", () => {
    const table = read(
      "# y+ ()       \n# Time        \tpatch         \tmin           \tmax           \taverage       \n5\tbody_frame:016-shadow%13\t1\t9\t4\n5\t12\t2\t8\t3\n",
    );
    expect(table).toMatchObject({ layout: "y-plus", words: [{ name: "patch", values: ["body_frame:016-shadow%13", "12"] }] });
    expect(columns(table)).toEqual({ Time: [5, 5], min: [1, 2], max: [9, 8], average: [4, 3] });
  });

  test("wall shear: vectors per patch", () => {
    const table = read(
      "# Wall shear stress\n# Time        \tpatch         \tmin           \tmax           \n0.5\tplate\t(-1 -2 -3)\t(1 2 3)\n",
    );
    expect(table.layout).toBe("wall-shear");
    expect(columns(table)).toEqual({ Time: [0.5], min_x: [-1], min_y: [-2], min_z: [-3], max_x: [1], max_y: [2], max_z: [3] });
  });

  test("bins: values per bin, end points in the header", () => {
    const table = read(
      "# Force bins  \n# bins        : 2\n# start       : -5.000000e-01\n# direction   : (1 0 0)\n# x co-ords  :\t5.0e-01\t1.5e+00\n#\n# Time        \t0:(total_x total_y total_z)\t1:(total_x total_y total_z)\n7\t(1 2 3)\t(4 5 6)\n",
      "forceBin.dat",
    );
    expect(table).toMatchObject({
      layout: "bins",
      header: { bins: 2, start: -0.5, direction: [1, 0, 0], "x co-ords": "5.0e-01 1.5e+00" },
    });
    expect(columns(table)).toEqual({
      Time: [7],
      "0:total_x": [1],
      "0:total_y": [2],
      "0:total_z": [3],
      "1:total_x": [4],
      "1:total_y": [5],
      "1:total_z": [6],
    });
  });

  test("a table of another function object is read by its header line", () => {
    const table = read("# Field minima\n# Time \tfield\tmin\n1\tU\t0.5\n2\tp\tN/A\n");
    expect(table).toMatchObject({ layout: "unknown", rows: 2, words: [{ name: "field", values: ["U", "p"] }] });
    expect(columns(table).min).toEqual([0.5, Number.NaN]);
  });

  test("a header in the middle: from there on its columns apply", () => {
    const start = `# Force and moment coefficients\n${references}#\n`;
    const table = read(`${start}# Time \tCd \tCl \n1\t10\t20\n# ===\n# Time \tCl \tCs \n2\t21\t31\n`);
    expect(columns(table)).toEqual({ Time: [1, 2], Cd: [10, Number.NaN], Cl: [20, 21], Cs: [Number.NaN, 31] });
    expect(table.header.Aref).toBe(2.1);
  });

  test("a file put together from runs with other values says so", () => {
    const part = (speed: number): string =>
      `# Force coefficients\n# magUInf : ${speed}\n# Time \tCm\tCd\tCl\tCl(f)\tCl(r)\n1\t1\t2\t3\t4\t-1\n`;
    const table = read(part(30) + part(40));
    expect(table.remarks.map((remark) => remark.code)).toEqual(["header-changes"]);
    expect(table.header.magUInf).toBe(40);
  });
});

describe("damaged and unusual files", () => {
  const good = `# Force coefficients\n${references}# Time \tCm\tCd\tCl\tCl(f)\tCl(r)\n1\t1\t2\t3\t4\t-1\n2\t1\t2\t3\t4\t-1\n`;

  test("Windows line ends, a byte order mark and gzip change nothing", () => {
    const plain = read(good);
    for (const other of [bytes(good.replaceAll("\n", "\r\n")), bytes(`\ufeff${good}`), gzipSync(good)]) {
      expect(readTable(other, "coefficient.dat.gz").columns).toEqual(plain.columns);
    }
  });

  test("nan and inf are values", () => {
    const table = read(`${good}3\tnan\t-nan\tinf\t-inf\t1\n`);
    expect(table.columns.map((column) => column.values[2])).toEqual([
      3,
      Number.NaN,
      Number.NaN,
      Number.POSITIVE_INFINITY,
      Number.NEGATIVE_INFINITY,
      1,
    ]);
  });

  test.each([1, 3, 11])("a file cut %i characters before its end loses its last line and says so", (characters) => {
    const table = read(good.slice(0, -characters));
    expect(table.rows).toBe(1);
    expect(table.remarks).toEqual([{ code: "cut-last-line", message: "line 8 has no line end: cut while written, left out" }]);
  });

  test("a header without rows", () => {
    expect(read(good.slice(0, good.indexOf("\n1\t") + 1))).toMatchObject({
      layout: "coefficients",
      rows: 0,
      remarks: [{ code: "no-rows" }],
    });
  });

  test.each([
    [
      "no bytes",
      new Uint8Array(0),
      "empty-file",
      "the file has no bytes: the run was stopped before its first row, or the disk was full",
    ],
    [
      "NUL bytes",
      bytes(`${good}3\t1\0\0\0\n`),
      "nul-bytes",
      "the file holds NUL bytes where text is expected: a crash or a full disk damaged it, or it is no table",
    ],
    [
      "a storage pointer",
      bytes("version https://git-lfs.github.com/spec/v1\noid sha256:0\nsize 1\n"),
      "storage-pointer",
      "the file is a pointer of large-file storage, not the table itself",
    ],
    [
      "no table",
      bytes("solid body\n facet normal 0 0 1\n"),
      "no-table",
      "no header line starts with '# Time': this is no table of a function object",
    ],
    [
      "a lone number",
      bytes("            10\n"),
      "no-table",
      "no header line starts with '# Time': this is no table of a function object",
    ],
    ["blank lines", bytes("\n\n\n"), "no-table", "no header line starts with '# Time': this is no table of a function object"],
  ])("%s is refused", (_, content, code, message) => {
    const problem = refusal(content);
    expect(problem).toMatchObject({ kind: "input", code, message });
    expect(problem.where).toContain("case/force.dat");
    expect(problem.remedy.length).toBeGreaterThan(10);
  });

  test("damaged gzip is refused with its cause", () => {
    expect(refusal(gzipSync(good).subarray(0, 40))).toMatchObject({ code: "damaged-gzip" });
  });

  test("control characters in names and words cannot reach a terminal", () => {
    const table = read("# y+ ()\n# note : \u001b[2Jgone\n# Time \tpatch\tmin\tmax\taverage\n1\tbo\u001b[31mdy\u009b\t1\t2\t3\n");
    expect(table.words[0]!.values).toEqual(["bo\ufffd[31mdy\ufffd"]);
    expect(table.header.note).toBe("\ufffd[2Jgone");
  });

  test("hostile headers and rows take time that grows with their length", () => {
    const long = 100_000;
    const header = [
      `# ${"(".repeat(long)}`,
      `# x : ${")".repeat(long)}`,
      `# ${" ".repeat(long)}x`,
      `# ${"a ".repeat(long)}`,
      "# __proto__ : 5",
    ];
    const names = `${Array.from({ length: 5000 }, (_, index) => `(a${index} b)`).join("\t")}\t(${" ".repeat(long)}x\t(${"y ".repeat(long)})z`;
    expect(read(`${header.join("\n")}\n# Time \t${names}\n1 2 3\n`).rows).toBe(1);
    const solved = (count: number): string => Array.from({ length: count }, () => "PCG 1 1 1 true").join("\t");
    const fields = Array.from(
      { length: 40 },
      (_, index) => `f${index}_solver\tf${index}_initial\tf${index}_final\tf${index}_iters\tf${index}_converged`,
    ).join("\t");
    const table = read(
      `# Solver information\n# Time \t${fields}\tU_solver\tUx_initial\tUx_final\tUx_iters\tUy_initial\tUy_final\tUy_iters\tU_converged\n1\t${solved(80)}\n`,
    );
    expect(table.remarks.map((remark) => remark.code)).toEqual(["unclear-groups"]);
  });
});
