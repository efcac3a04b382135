import { mkdir, mkdtemp, readdir, readFile, rm, utimes, writeFile } from "node:fs/promises";
import { tmpdir } from "node:os";
import { dirname, join } from "node:path";
import { parseHTML } from "linkedom";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { binaryStl } from "../../src/geometry/files/write-stl.js";
import { readCaseRecord } from "../../src/ledger/case-record.js";
import { readMesh } from "../../src/report/read-mesh.js";
import { readSolverBuild } from "../../src/report/read-solver.js";
import { writeStudyReport } from "../../src/report/study-report.js";
import { bodyOf, box } from "../geometry/shapes.js";
import { MinimalStandard } from "../helpers/random.js";

// Cases of another program on disk, as small as they can be, and what the report reads of them.

const header = `# Force coefficients
# liftDir         : (0.000000e+00 0.000000e+00 1.000000e+00)
# dragDir         : (1.000000e+00 0.000000e+00 0.000000e+00)
# pitchAxis       : (0.000000e+00 1.000000e+00 0.000000e+00)
# magUInf         : 3.000000e+01
# lRef            : 3.200000e+00
# Aref            : 2.860000e+00
# CofR            : (0.000000e+00 0.000000e+00 0.000000e+00)
#
# Time Cd Cs Cl CmRoll CmPitch CmYaw Cd(f) Cd(r) Cs(f) Cs(r) Cl(f) Cl(r)
`;

/** 300 rows that come to rest at a drag coefficient. */
function coefficients(cd: number, seed: number): string {
  const random = new MinimalStandard(seed);
  const rows = Array.from({ length: 300 }, (_, k) => {
    const start = Math.exp(-(k + 1) / 15);
    const [drag, lift, pitch] = [cd + start + 2e-4 * random.normal(), -0.05 - start + 2e-4 * random.normal(), 0.01 * start];
    const values = [drag, 0, lift, 0, pitch, 0, drag / 2, drag / 2, 0, 0, lift / 2 + pitch, lift / 2 - pitch];
    return `${k + 1} ${values.map((value) => value.toExponential(8)).join(" ")}`;
  });
  return `${header}${rows.join("\n")}\n`;
}

const checkMesh = `Mesh stats
    points:           51847
    faces:            133528
    cells:            41104

Checking patch topology for multiply connected surfaces...
    Patch               Faces    Points   Surface topology
    body                1023     1100     ok (closed singly connected)

Checking geometry...
    Mesh non-orthogonality Max: 64.8 average: 9.1
    Max skewness = 3.75 OK.

Mesh OK.

End
`;

const yPlus = (mean: number) => `# y+ ()
# Time patch min max average
100 body 1 2 3
200 body 4.5 190 ${mean}
200 ground 2.5 3000 310
`;

let folder: string;
beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), "dragledger-report-"));
  await write("a/postProcessing/forceCoeffs1/0/coefficient.dat", coefficients(0.385, 5));
  await write("b/postProcessing/forceCoeffs1/0/coefficient.dat", coefficients(0.371, 6));
  await write("a/log.checkMesh", checkMesh);
  await write("a/log.simpleFoam", "Build  : OPENFOAM=1912 patch=200626\nExec   : /usr/bin/simpleFoam -parallel\n");
  await write("a/constant/triSurface/body.stl", binaryStl(bodyOf({ body: box([-2, -0.9, 0.2], [2, 0.9, 1.4]) })));
  await write("b/constant/triSurface/body.stl", "no surface at all");
  await write("a/postProcessing/yPlus1/0/yPlus.dat", yPlus(61));
  await write("a/postProcessing/yPlus1/100/yPlus.dat", yPlus(72));
  await utimes(join(folder, "a/postProcessing/yPlus1/0/yPlus.dat"), 1000, 1000);
});
afterAll(() => rm(folder, { recursive: true, force: true }));

async function write(name: string, content: string | Uint8Array): Promise<void> {
  const path = join(folder, name);
  await mkdir(dirname(path), { recursive: true });
  await writeFile(path, content);
}

describe("a report of cases made elsewhere", () => {
  test("compares the second with the first; paths are as seen from the page", async () => {
    const records = [await readCaseRecord(join(folder, "a")), await readCaseRecord(join(folder, "b"))];
    const path = join(folder, "out.html");
    const written = await writeStudyReport({ study: null, records, path }, { viewerScript: "void 0" });
    const html = await readFile(path, "utf8");
    expect(written).toEqual({ path, bytes: Buffer.byteLength(html) });
    expect((await readdir(folder)).sort()).toEqual(["a", "b", "out.html"]);
    const { document } = parseHTML(html);
    expect(document.querySelector("h1")!.textContent).toBe("a, b");
    expect(document.querySelector(".delta .value")!.textContent).toMatch(/^−1[34]\.\d$/);
    const facts = [...document.querySelectorAll("#provenance .facts > div")].map((each) =>
      [...each.children].map(({ textContent }) => textContent),
    );
    expect(facts.slice(0, 3)).toEqual([
      ["case", "a"],
      ["case written by", "another program"],
      ["solver", "simpleFoam, OPENFOAM=1912 patch=200626"],
    ]);
    expect(document.querySelector("#setup")!.textContent).toContain("None of the cases was written by this program");
    // Of b neither surface nor mesh can be read: it is shown without them.
    const { variants } = JSON.parse(document.querySelector("#bodies")!.textContent!) as { variants: { name: string }[] };
    expect(variants.map(({ name }) => name)).toEqual(["a"]);
    expect(html).not.toContain(folder);
  });
});

describe("the mesh of a case", () => {
  const parts = [{ name: "Body in white", patch: "body" }];

  test("cells, check, and y+ at the last time of the newest table", async () => {
    expect(await readMesh(join(folder, "a"), parts)).toEqual({
      cells: 41104,
      ok: true,
      failures: [],
      maxNonOrthogonality: 64.8,
      maxSkewness: 3.75,
      parts: [{ part: "Body in white", faces: 1023, layers: null, layersAsked: null, yPlus: { least: 4.5, mean: 72, most: 190 } }],
    });
  });

  test("a case without logs has none", async () => {
    expect(await readMesh(join(folder, "b"), parts)).toBeNull();
    expect(await readMesh(join(folder, "nowhere"), parts)).toBeNull();
  });

  test("a damaged log is left out", async () => {
    await write("c/log.checkMesh", "");
    await write("c/log.snappyHexMesh", new Uint8Array([0, 1, 2, 3, 0, 255]));
    await write("c/postProcessing/yPlus1/0/yPlus.dat", "# y+ ()\n");
    expect(await readMesh(join(folder, "c"), parts)).toBeNull();
  });

  test("the solver's build comes from the banner of its log", async () => {
    expect(await readSolverBuild(join(folder, "a"))).toBe("simpleFoam, OPENFOAM=1912 patch=200626");
    expect(await readSolverBuild(join(folder, "b"))).toBeNull();
    expect(await readSolverBuild(join(folder, "nowhere"))).toBeNull();
    await write("d/log.simpleFoam", "");
    expect(await readSolverBuild(join(folder, "d"))).toBeNull();
  });
});
