import { mkdirSync, mkdtempSync, readFileSync, rmSync, symlinkSync, writeFileSync } from "node:fs";
import { tmpdir } from "node:os";
import { dirname, join } from "node:path";
import { gunzipSync } from "node:zlib";
import { afterEach, describe, expect, test } from "vitest";
import { readCaseHistories } from "../../src/history/read-case.js";
import { readHistoryFile, tablePath } from "../../src/history/read-file.js";

const fixtures = join(import.meta.dirname, "..", "fixtures", "histories");
const folders: string[] = [];
afterEach(() => {
  for (const folder of folders.splice(0)) rmSync(folder, { recursive: true });
});

/** A case folder with the given files. */
function caseWith(files: Record<string, string | Uint8Array>): string {
  const folder = mkdtempSync(join(tmpdir(), "histories-"));
  folders.push(folder);
  for (const [name, content] of Object.entries(files)) {
    mkdirSync(join(folder, dirname(name)), { recursive: true });
    writeFileSync(join(folder, name), content);
  }
  return folder;
}

const coefficients = (from: number, to: number, value = 0.3): string =>
  `# Force and moment coefficients\n# Aref : 2.1\n#\n# Time \tCd\tCl\n${Array.from({ length: to - from + 1 }, (_, row) => `${from + row}\t${value + 1 / (from + row)}\t${-1 / (from + row)}\n`).join("")}`;

describe("every history of a case", () => {
  test("recorded restarts: the newest run, what was left out and why", async () => {
    const path = join(fixtures, "restarts");
    const histories = await readCaseHistories(path);
    expect(histories.map(({ object, table, layout, rows }) => [object, table, layout, rows])).toEqual([
      ["bins", "CdBin", "bins", 20],
      ["bins", "forceBin", "bins", 20],
      ["wing", "coefficient", "coefficients", 14],
      ["wingForces", "force", "forces", 14],
    ]);
    const wing = histories[2]!;
    expect(
      wing.segments.map(({ file, rows, used, reason }) => [
        file.slice(path.length + 1),
        rows,
        used,
        reason.replaceAll(`${path}/`, ""),
      ]),
    ).toEqual([
      ["postProcessing/wing/0/coefficient.dat", 20, 0, "another run, older than the one used"],
      ["postProcessing/wing/0/coefficient_0.dat", 14, 14, "start of the run"],
      ["postProcessing/wing/10/coefficient.dat", 1, 0, "written afterwards from stored fields (-postProcess), not by the run"],
      [
        "postProcessing/wing/20/coefficient.dat",
        10,
        0,
        "continues postProcessing/wing/0/coefficient.dat, an older run, although its folder is later",
      ],
    ]);
    expect(wing.header).toMatchObject({ magUInf: 25.75, Aref: 1, CofR: [0.25, 0, 0], dragDir: [1, 0, 0] });
  });

  test("recorded case with parts, forces, solver information and y+", async () => {
    const histories = await readCaseHistories(join(fixtures, "micro"));
    expect(histories.map(({ object, table, layout, dialect, rows }) => [object, table, layout, dialect, rows])).toEqual([
      ["forcesTotal", "force", "forces", "F5", 200],
      ["forcesTotal", "moment", "moments", "F5", 200],
      ["part_base", "coefficient", "coefficients", "C6", 200],
      ["part_nose", "coefficient", "coefficients", "C6", 200],
      ["solverInfo", "solverInfo", "solver-information", "", 200],
      ["total", "coefficient", "coefficients", "C6", 200],
      ["yPlus", "yPlus", "y-plus", "", 7],
    ]);
    expect(histories.flatMap(({ findings }) => findings)).toEqual([]);
    expect(histories[6]!.words[0]!.values).toContain("body_nose");
  });

  test("recorded divergence and a patch that does not exist", async () => {
    const histories = await readCaseHistories(join(fixtures, "diverged"));
    expect(histories.map(({ object, findings }) => [object, findings.map(({ code, severity }) => `${severity} ${code}`)])).toEqual([
      ["nothing", ["error all-zero"]],
      ["wing", ["error not-finite"]],
    ]);
    expect(histories[1]!.findings[0]!.message).toContain("from time 127 on");
  });

  test("regions, old folders in the case root, brackets and blanks in names; other things are passed over", async () => {
    const forces = "# Time\tforces(pressure, viscous) moment(pressure, viscous)\n0.01\t(((1 0 0) (0 0 0)) ((0 0 0) (0 0 0)))\n";
    const path = caseWith({
      "postProcessing/air/total/0/coefficient.dat": coefficients(1, 60),
      "postProcessing/forceCoeffs(patches=(a b))/0/coefficient.dat": coefficients(1, 60),
      "postProcessing/total/0/coefficient.svg": "<svg/>",
      "postProcessing/total/copy/coefficient.dat": coefficients(1, 60),
      "postProcessing/total/0/notes.dat": "no table\n",
      "postProcessing/probes/0/values.dat": "# Time \ta\n1\t2\n",
      "forces/0/forces.dat": forces,
      "constant/forces/0/forces.dat": forces,
      "0/forces/0/forces.dat": forces,
      "processor0/forces/0/forces.dat": forces,
    });
    const found = await readCaseHistories(path);
    expect(found.map(({ object, table }) => `${object}: ${table}`)).toEqual([
      "air/total: coefficient",
      "forceCoeffs(patches=(a b)): coefficient",
      "forces: forces (forces)",
      "forces: forces (moments)",
    ]);
  });

  test("empty, damaged and header-only files beside good ones are named", async () => {
    const path = caseWith({
      "postProcessing/total/0/coefficient.dat": "",
      "postProcessing/total/0/coefficient_0.dat": coefficients(1, 60),
      "postProcessing/total/60/coefficient.dat": `${coefficients(61, 70)}71\t\0\0\n`,
      "postProcessing/total/70/coefficient.dat": coefficients(71, 70),
    });
    const [history] = await readCaseHistories(path);
    expect(history!.rows).toBe(60);
    expect(history!.segments.map(({ used, reason }) => [used, reason])).toEqual([
      [60, "start of the run"],
      [0, "no complete row"],
      [0, "the file has no bytes: the run was stopped before its first row, or the disk was full"],
      [0, "the file holds NUL bytes where text is expected: a crash or a full disk damaged it, or it is no table"],
    ]);
    expect(history!.findings.filter(({ code }) => code === "refused-file")).toHaveLength(2);
  });

  test("a damaged forces.dat is named in both histories of its neighbours", async () => {
    const good = "# Forces\n# Time  forces(pressure viscous)\tmoments(pressure viscous)\n1\t((1 2 3) (1 2 3)) ((1 2 3) (1 2 3))\n";
    const path = caseWith({ "postProcessing/f/0/forces.dat": good, "postProcessing/f/5/forces.dat": "" });
    const histories = await readCaseHistories(path);
    expect(histories.map(({ table, segments }) => [table, segments.length])).toEqual([
      ["forces (forces)", 2],
      ["forces (moments)", 2],
    ]);
  });

  test("a link that leads back up is followed once; a linked folder is read", async () => {
    const path = caseWith({
      "postProcessing/total/0/coefficient.dat": coefficients(1, 60),
      "store/more/0/coefficient.dat": coefficients(1, 60),
    });
    symlinkSync(join(path, "postProcessing"), join(path, "postProcessing", "loop"));
    symlinkSync(join(path, "store", "more"), join(path, "postProcessing", "linked"));
    expect((await readCaseHistories(path)).map(({ object }) => object)).toEqual(["linked", "total"]);
  });

  test("a case without tables has no histories; a missing folder is refused", async () => {
    expect(await readCaseHistories(caseWith({ "system/controlDict": "" }))).toEqual([]);
    await expect(readCaseHistories(join(fixtures, "absent"))).rejects.toMatchObject({
      kind: "input",
      code: "no-case",
      message: "there is no such folder",
    });
  });
});

describe("one file", () => {
  test("gives what stands in it, without splicing", async () => {
    const path = join(fixtures, "restarts", "postProcessing", "wing", "20", "coefficient.dat");
    const [history, ...more] = await readHistoryFile(path);
    expect(more).toEqual([]);
    expect(history).toMatchObject({
      object: "wing",
      table: "coefficient",
      rows: 10,
      segments: [{ file: path, from: 21, to: 30, rows: 10, used: 10, reason: "read on its own" }],
    });
  });

  test("every value of a recorded table is the one that stands in the text", async () => {
    const path = join(fixtures, "M25", "postProcessing", "total", "0", "coefficient.dat.gz");
    const [history] = await readHistoryFile(path);
    const rows = gunzipSync(readFileSync(path))
      .toString()
      .split("\n")
      .filter((line) => line !== "" && !line.startsWith("#"));
    expect(history!.rows).toBe(rows.length);
    rows.forEach((line, row) => {
      expect(history!.columns.map(({ values }) => values[row])).toEqual(line.split("\t").map(Number));
    });
  });

  test("a cut file keeps its findings; a missing one is refused", async () => {
    const path = join(caseWith({ "x.dat": coefficients(1, 60).slice(0, -3) }), "x.dat");
    const [history] = await readHistoryFile(path);
    expect(history!.findings).toMatchObject([{ code: "cut-last-line", severity: "warning" }]);
    await expect(readHistoryFile(`${path}x`)).rejects.toMatchObject({ kind: "input", code: "unreadable-file", where: `${path}x` });
  });

  test.each([
    ["a/forces/500/force_500.dat.gz", { object: "forces", table: "force", folderTime: 500, suffixed: true }],
    ["a/forces/1e-05/forces_5.dat", { object: "forces", table: "forces", folderTime: 1e-5, suffixed: true }],
    ["a/forces/0/forces_bins.dat", { object: "forces", table: "forces_bins", folderTime: 0, suffixed: false }],
    ["a/copy/force.dat", { object: "copy", table: "force", folderTime: Number.NaN, suffixed: false }],
    ["force.dat", { object: ".", table: "force", folderTime: Number.NaN, suffixed: false }],
  ])("path %s", (path, expected) => {
    expect(tablePath(path)).toEqual(expected);
  });
});
