import { existsSync } from "node:fs";
import { mkdtemp, readFile, rm, writeFile } from "node:fs/promises";
import { createRequire } from "node:module";
import { tmpdir } from "node:os";
import { join, resolve } from "node:path";
import { pathToFileURL } from "node:url";
import { build } from "esbuild";
import { type Browser, type BrowserContextOptions, chromium, type Page } from "playwright-core";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { type ReportModel, reportModel } from "../../src/report/model.js";
import type { TableModel } from "../../src/report/table-model.js";
import { writeReport } from "../../src/report/write-report.js";
import { exampleInput, hostileInput, markup } from "./example.js";

const program = ["/usr/bin/chromium", "/usr/bin/chromium-browser", "/usr/bin/google-chrome"].find((path) => existsSync(path));
const missing = program ? "" : " (no Chromium in /usr/bin)";
const root = resolve(import.meta.dirname, "../..");

let browser: Browser;
let folder: string;
let model: ReportModel;
/** One page that the tests on a desk look at in turn; each leaves it as it was. */
let desk: Opened;

interface Opened {
  page: Page;
  complaints: string[];
  requests: string[];
}
const address = (name: string): string => pathToFileURL(join(folder, name)).href;

describe.skipIf(!program)(`the page in a browser${missing}`, { timeout: 60_000 }, () => {
  beforeAll(async () => {
    folder = await mkdtemp(join(tmpdir(), "dragledger-report-"));
    const bundled = await build({
      entryPoints: [join(root, "src/report/viewer/main.ts")],
      bundle: true,
      format: "iife",
      platform: "browser",
      target: "es2022",
      minify: true,
      write: false,
    });
    const viewerScript = bundled.outputFiles[0]!.text;
    model = reportModel(exampleInput());
    await writeFile(join(folder, "page.html"), writeReport(model, { viewerScript }));
    await writeFile(join(folder, "hostile.html"), writeReport(reportModel(hostileInput()), { viewerScript }));
    browser = await chromium.launch({
      executablePath: program!,
      args: ["--use-angle=swiftshader", "--enable-unsafe-swiftshader", "--ignore-gpu-blocklist", "--no-sandbox"],
    });
  }, 60_000);

  beforeAll(async () => {
    desk = await opened("page.html");
  }, 60_000);

  afterAll(async () => {
    await browser?.close();
    await rm(folder, { recursive: true, force: true });
  });

  /** A page with all that it complained about and asked for. */
  async function opened(
    name: string,
    options: BrowserContextOptions = {},
    before: (page: Page) => Promise<void> = async () => {},
  ): Promise<Opened> {
    const page = await browser.newPage({ viewport: { width: 1280, height: 900 }, ...options });
    const complaints: string[] = [];
    const requests: string[] = [];
    page.on("console", (message) => {
      if (["error", "warning"].includes(message.type())) complaints.push(message.text());
    });
    page.on("pageerror", (error) => complaints.push(error.message));
    page.on("dialog", async (dialog) => {
      complaints.push(`dialog: ${dialog.message()}`);
      await dialog.dismiss();
    });
    page.on("request", (request) => requests.push(request.url()));
    await before(page);
    await page.goto(address(name));
    if (options.javaScriptEnabled !== false) {
      await page.waitForSelector("#viewer[data-drawn]", { state: "attached" });
      await settled(page);
    }
    return { page, complaints, requests };
  }

  /** Two frames of the screen later. */
  const settled = (page: Page) =>
    page
      .evaluate(() => new Promise<void>((done) => requestAnimationFrame(() => requestAnimationFrame(() => done()))))
      .catch(() => {});

  /** Pixels of the canvas that are not empty, and how many of them are of the colour of a picked part. */
  const drawn = (page: Page) =>
    page.evaluate(() => {
      const canvas = document.querySelector("canvas")!;
      const copy = document.createElement("canvas");
      [copy.width, copy.height] = [canvas.width, canvas.height];
      const context = copy.getContext("2d")!;
      context.drawImage(canvas, 0, 0);
      const { data } = context.getImageData(0, 0, copy.width, copy.height);
      const colours = new Set<number>();
      let [filled, picked, sum] = [0, 0, 0];
      for (let at = 0; at < data.length; at += 4) {
        if (data[at + 3]! < 128) continue;
        filled++;
        const [r, g, b] = [data[at]!, data[at + 1]!, data[at + 2]!];
        colours.add((r << 16) | (g << 8) | b);
        if (r > 1.7 * g && g > b && r > 100) picked++;
        sum = (sum * 31 + r * 7 + g * 5 + b + at) % 1_000_003;
      }
      return { all: data.length / 4, filled, picked, colours: colours.size, sum };
    });

  test("opens from a file without complaint and asks for nothing", async () => {
    const { page, complaints, requests } = desk;
    expect(complaints).toEqual([]);
    expect(requests.filter((url) => !url.startsWith("data:"))).toEqual([address("page.html")]);
    expect(await page.evaluate(() => document.querySelectorAll("img").length)).toBe(6);
    const loaded = await page.evaluate(() =>
      Promise.all([...document.images].map((image) => image.decode().then(() => image.naturalWidth))),
    );
    expect(loaded).toEqual(new Array(6).fill(520));
  });

  test("its tables hold what the model holds, cell by cell", async () => {
    const { page } = desk;
    const shown = await page.evaluate(() =>
      [...document.querySelectorAll("table")].map((table) => ({
        caption: table.caption!.textContent,
        rows: [...table.querySelectorAll("tbody tr:not(.group)")].map((row) => [...row.children].map((cell) => cell.textContent)),
      })),
    );
    const expected = (table: TableModel) => ({
      caption: table.caption,
      rows: table.groups.flatMap(({ rows }) =>
        rows.map(({ head, note, cells }) => [head + (note ?? ""), ...cells.map((cell) => cell.text + (cell.note ?? ""))]),
      ),
    });
    const { comparisons, matrix, runs, setUp, mesh } = model;
    expect(shown).toEqual(
      [
        ...comparisons.map(({ table }) => table),
        matrix!,
        ...comparisons.map(({ parts }) => parts!),
        ...runs.map(({ ledger }) => ledger),
        ...runs.flatMap(({ settling, partSettling }) => [settling, partSettling!]),
        setUp.references,
        setUp.differing!,
        ...setUp.plan,
        mesh.whole!,
        mesh.layers!,
        mesh.yPlus!,
      ].map(expected),
    );
  });

  test("draws the body; a row marks its part and every row of it, a click on the body marks the row", async () => {
    const { page, complaints } = desk;
    expect(await page.getAttribute("#viewer", "data-drawn")).toBe("scene");
    const before = await drawn(page);
    expect(before.filled).toBeGreaterThan(before.all * 0.1);
    expect(before.filled).toBeLessThan(before.all * 0.8);
    expect(before.colours).toBeGreaterThan(20);

    await page.click('tr[data-part="cab"] button');
    await settled(page);
    const marked = await drawn(page);
    expect(marked.picked).toBeGreaterThan(before.picked + before.filled * 0.05);
    const rows = () => page.$$eval("tr.picked", (found) => found.map((row) => (row as HTMLElement).dataset.part));
    const named = await page.$$eval('tr[data-part="cab"]', (found) => found.length);
    expect(named).toBeGreaterThan(5);
    expect(await rows()).toEqual(new Array(named).fill("cab"));
    expect(await page.textContent("[role=status]")).toBe("open-bed, cab");
    expect(await page.getAttribute('tr[data-part="cab"] button', "aria-pressed")).toBe("true");

    await page.click('tr[data-part="cab"] button');
    expect(await rows()).toEqual([]);
    await settled(page);

    // The middle of the picture is the middle of the body.
    const box = (await page.locator("canvas").boundingBox())!;
    await page.mouse.click(box.x + box.width / 2, box.y + box.height / 2);
    expect(new Set(await rows()).size).toBe(1);
    // Beside the body nothing is picked.
    await page.mouse.click(box.x + 4, box.y + box.height - 4);
    expect(await rows()).toEqual([]);
    // A drag turns and picks nothing.
    const still = await drawn(page);
    await page.mouse.move(box.x + box.width / 2, box.y + box.height / 2);
    await page.mouse.down();
    await page.mouse.move(box.x + box.width / 2 + 90, box.y + box.height / 2, { steps: 3 });
    await page.mouse.up();
    await settled(page);
    expect(await rows()).toEqual([]);
    expect((await drawn(page)).sum).not.toBe(still.sum);
    expect(complaints).toEqual([]);
  });

  test("keys turn, move, go nearer and take the views; variants and colours change the picture", async () => {
    const { page, complaints } = desk;
    await page.focus("canvas");
    let last = await drawn(page);
    for (const key of ["ArrowLeft", "ArrowUp", "Shift+ArrowRight", "1", "2", "3", "4", "0"]) {
      await page.keyboard.press(key);
      await settled(page);
      const now = await drawn(page);
      expect(now.sum, key).not.toBe(last.sum);
      last = now;
    }
    await page.keyboard.press("+");
    await settled(page);
    const nearer = await drawn(page);
    expect(nearer.filled).toBeGreaterThan(last.filled);
    await page.keyboard.press("-");
    await page.keyboard.press("-");
    await settled(page);
    expect((await drawn(page)).filled).toBeLessThan(last.filled);
    // A side view is longer than a front view is wide: more of the body is seen.
    await page.keyboard.press("1");
    await settled(page);
    const front = await drawn(page);
    await page.keyboard.press("2");
    await settled(page);
    expect((await drawn(page)).filled).toBeGreaterThan(1.2 * front.filled);
    expect(await page.evaluate(() => document.activeElement?.tagName)).toBe("CANVAS");

    const press = async (group: string, name: string) => {
      await page.click(`[data-choices="${group}"] button:text-is("${name}")`);
      await settled(page);
      return drawn(page);
    };
    const top = await press("view", "top");
    const covered = await press("variant", "covered-bed");
    expect(covered.sum).not.toBe(top.sum);
    expect(await page.textContent("[role=status]")).toBe("covered-bed");
    expect(await page.isVisible(".scale")).toBe(false);
    const painted = await press("paint", "drag difference");
    expect(painted.sum).not.toBe(covered.sum);
    expect(await page.textContent(".scale")).toContain("−23.5");
    expect(await page.isVisible(".scale")).toBe(true);
    await page.click('tr[data-part="bed-cover"] button');
    expect(await page.textContent("[role=status]")).toBe("covered-bed, bed-cover: +4.6 counts of drag");
    await press("variant", "open-bed");
    expect(await page.textContent("[role=status]")).toBe("open-bed has no part bed-cover");
    expect(complaints).toEqual([]);
  });

  /** What axe-core objects to; with `only`, by these rules. */
  async function objections(page: Page, only?: string[]): Promise<string[]> {
    // All that is folded is looked at as well.
    const folded = await page.$$("details:not([open])");
    for (const each of folded) await each.evaluate((details) => ((details as HTMLDetailsElement).open = true));
    await page.evaluate(await readFile(createRequire(import.meta.url).resolve("axe-core/axe.min.js"), "utf8"));
    const found = await page.evaluate(async (rules) => {
      interface Violation {
        id: string;
        impact: string;
        nodes: { html: string }[];
      }
      const { axe } = window as unknown as { axe: { run(options: object): Promise<{ violations: Violation[] }> } };
      const { violations } = await axe.run(rules ? { runOnly: rules } : {});
      return violations.map(({ id, impact, nodes }) => `${impact} ${id}: ${nodes[0]?.html.slice(0, 160)}`);
    }, only);
    for (const each of folded) await each.evaluate((details) => ((details as HTMLDetailsElement).open = false));
    return found;
  }

  test("nothing keeps readers out (axe-core, all rules)", async () => {
    expect(await objections(desk.page)).toEqual([]);
  });

  test("contrasts hold in the dark", async () => {
    await desk.page.emulateMedia({ colorScheme: "dark" });
    expect(await objections(desk.page, ["color-contrast"])).toEqual([]);
    await desk.page.emulateMedia({ colorScheme: null });
  });

  test("on a phone's width the page itself does not scroll sideways, and what scrolls can be reached", async () => {
    const { page } = desk;
    await page.setViewportSize({ width: 360, height: 800 });
    await settled(page);
    expect(await page.evaluate(() => document.documentElement.scrollWidth - document.documentElement.clientWidth)).toBe(0);
    expect(await objections(page, ["scrollable-region-focusable", "target-size", "meta-viewport"])).toEqual([]);
    await page.setViewportSize({ width: 1280, height: 900 });
  });

  test("only tables that scroll are stops of the keyboard", async () => {
    const { page } = desk;
    const stops = () => page.$$eval(".wide[tabindex]", (found) => found.length);
    // The page learns of a new width a frame or more after it was set, so each state is waited for.
    await page.waitForFunction(() => document.querySelectorAll(".wide[tabindex]").length === 0);
    await page.setViewportSize({ width: 360, height: 800 });
    await page.waitForFunction(() => document.querySelectorAll(".wide[tabindex]").length > 0);
    expect(await page.$$eval(".wide", (found) => found.filter((each) => each.scrollWidth > each.clientWidth + 1).length)).toBe(
      await stops(),
    );
    await page.setViewportSize({ width: 1280, height: 900 });
  });

  test("on paper: pictures instead of the canvas, everything unfolded, A4 pages", async () => {
    const { page, complaints } = desk;
    const paper = await page.pdf({ preferCSSPageSize: true });
    expect(paper.subarray(0, 5).toString()).toBe("%PDF-");
    // 210 x 297 mm in points.
    expect(paper.toString("latin1")).toMatch(/\/MediaBox \[0 0 59[45][.\d]* 84[12][.\d]*\]/);
    expect(await page.$$eval("details[open]", (found) => found.length)).toBe(0);
    await page.emulateMedia({ media: "print" });
    await page.evaluate(() => dispatchEvent(new Event("beforeprint")));
    expect(await page.$$eval("details:not([open])", (found) => found.length)).toBe(0);
    expect(await page.isVisible(".stills img")).toBe(true);
    for (const hidden of ["canvas", "nav", ".controls", ".hint"]) expect(await page.isVisible(hidden), hidden).toBe(false);
    await page.evaluate(() => dispatchEvent(new Event("afterprint")));
    expect(await page.$$eval("details[open]", (found) => found.length)).toBe(0);
    expect(complaints).toEqual([]);
    await page.emulateMedia({ media: null });
  });

  test("without WebGL, and without scripts at all, the pictures stay", async () => {
    const noWebGl = await opened("page.html", {}, (page) =>
      page.addInitScript(() => {
        HTMLCanvasElement.prototype.getContext = () => null;
      }),
    );
    expect(await noWebGl.page.getAttribute("#viewer", "data-drawn")).toBe("still");
    const noScripts = await opened("page.html", { javaScriptEnabled: false });
    for (const { page } of [noWebGl, noScripts]) {
      expect(await page.isVisible(".stills img")).toBe(true);
      expect(await page.isVisible("canvas")).toBe(false);
      expect(await page.isVisible(".controls")).toBe(false);
      await page.close();
    }
  });

  test("names that are markup run nothing, and work as names", async () => {
    const { page, complaints, requests } = await opened("hostile.html");
    expect(complaints).toEqual([]);
    expect(requests.filter((url) => !url.startsWith("data:"))).toEqual([address("hostile.html")]);
    expect(await page.textContent("h1")).toBe(markup);
    await page.click(`[data-choices="variant"] button >> nth=1`);
    await page.click("#body tr[data-part] button >> nth=1");
    expect(await page.textContent("[role=status]")).toBe(`${markup}&amp;, ${markup}: −23.5 counts of drag`);
    expect(complaints).toEqual([]);
    await page.close();
  });

  test("the page's policy stops a script that was slipped in", async () => {
    const { page, complaints } = desk;
    await page.evaluate(() => {
      const script = document.createElement("script");
      script.textContent = "window.slipped = true";
      document.body.append(script);
    });
    expect(await page.evaluate(() => "slipped" in window)).toBe(false);
    expect(complaints.join(" ")).toContain("Content Security Policy");
  });
});
