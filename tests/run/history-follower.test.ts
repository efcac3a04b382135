import { appendFile, mkdir, writeFile } from "node:fs/promises";
import { join } from "node:path";
import { expect, test } from "vitest";
import { HistoryFollower } from "../../src/run/history-follower.js";
import { temporaryFolder } from "./stand-in.js";

const header = "# Force coefficients\n# magUInf : 3.0e+01\n# Time            \tCd            \tCs            \tCl            \n";
const row = (time: number, cd: number | string, cl: number | string = 0) => `${time}               \t${cd}\t9\t${cl}\n`;

async function table(casePath: string, folder: string, name: string, text: string): Promise<string> {
  const path = join(casePath, "postProcessing/coefficients", folder);
  await mkdir(path, { recursive: true });
  await writeFile(join(path, name), text);
  return join(path, name);
}

test("reads only what is new, waits for the end of a line", async () => {
  const casePath = await temporaryFolder();
  const follower = new HistoryFollower(casePath);
  expect(await follower.poll()).toBe(0);
  expect(follower.iteration).toBe(0);
  const file = await table(casePath, "0", "coefficient.dat", `${header}${row(1, 0.5)}2  \t0.`);
  expect(await follower.poll()).toBe(1);
  await appendFile(file, "41\t9\t-0.25");
  expect(await follower.poll()).toBe(0);
  await appendFile(file, `\n${row(3, "4.0e-01", "1e-2")}`);
  expect(await follower.poll()).toBe(2);
  expect([...follower.time]).toEqual([1, 2, 3]);
  expect([...follower.cd]).toEqual([0.5, 0.41, 0.4]);
  expect([...follower.cl]).toEqual([0, -0.25, 0.01]);
});

test("columns are found by name, whatever their order", async () => {
  const casePath = await temporaryFolder();
  await table(casePath, "0", "coefficient.dat", "# Time\tCd\tCd(f)\tCl\tCl(f)\n1\t0.3\t7\t0.1\t7\n");
  await table(casePath, "1", "forceCoeffs.dat", "# Time\tCm\tCd\tCl\tCl(f)\tCl(r)\n2\t7\t0.4\t0.2\t7\t7\n");
  const follower = new HistoryFollower(casePath);
  await follower.poll();
  expect([...follower.cd]).toEqual([0.3, 0.4]);
  expect([...follower.cl]).toEqual([0.1, 0.2]);
});

test("a run continued from an earlier time replaces the rows from there on; folders are sorted as numbers", async () => {
  const casePath = await temporaryFolder();
  await table(casePath, "9", "coefficient.dat", `${header}${row(10, 3)}${row(11, 3)}`);
  await table(
    casePath,
    "0",
    "coefficient.dat",
    `${header}${[1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 11, 12].map((time) => row(time, 1)).join("")}`,
  );
  await table(casePath, "10", "coefficient.dat", `${header}${row(11, 4)}`);
  await table(casePath, "notes", "coefficient.dat", `${header}${row(99, 4)}`);
  const follower = new HistoryFollower(casePath);
  await follower.poll();
  expect([...follower.time]).toEqual([1, 2, 3, 4, 5, 6, 7, 8, 9, 10, 11]);
  expect([...follower.cd].slice(8)).toEqual([1, 3, 4]);
  follower.dropAfter(9);
  expect(follower.iteration).toBe(9);
});

test("a second start from the same time goes into a suffixed file that may be written anew", async () => {
  const casePath = await temporaryFolder();
  await table(casePath, "0", "coefficient.dat", `${header}${row(1, 1)}${row(2, 1)}`);
  await table(casePath, "0", "coefficient_0.dat", `${header}${row(1, 2)}${row(2, 2)}${row(3, 2)}`);
  const follower = new HistoryFollower(casePath);
  await follower.poll();
  expect([...follower.cd]).toEqual([2, 2, 2]);
  await table(casePath, "0", "coefficient_0.dat", `${header}${row(1, 5)}`);
  await follower.poll();
  expect([...follower.cd]).toEqual([5]);
});

test("not-a-numbers as the solver prints them, short rows left out", async () => {
  const casePath = await temporaryFolder();
  await table(casePath, "0", "coefficient.dat", `${header}${row(1, "-nan", "inf")}2\t1\n${row(3, "-inf", "nan")}`);
  const follower = new HistoryFollower(casePath);
  await follower.poll();
  expect([...follower.time]).toEqual([1, 3]);
  expect([...follower.cd]).toEqual([Number.NaN, -Infinity]);
  expect([...follower.cl]).toEqual([Infinity, Number.NaN]);
});

test("thousands of rows", async () => {
  const casePath = await temporaryFolder();
  const rows = Array.from({ length: 5000 }, (_, at) => row(at + 1, at / 1e4, -at));
  const file = await table(casePath, "0", "coefficient.dat", header + rows.slice(0, 2000).join(""));
  const follower = new HistoryFollower(casePath);
  await follower.poll();
  await appendFile(file, rows.slice(2000).join(""));
  await follower.poll();
  expect(follower.rows).toBe(5000);
  expect(follower.cd[4999]).toBe(0.4999);
  expect(follower.cl[3000]).toBe(-3000);
});
