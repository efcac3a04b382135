import { existsSync } from "node:fs";
import { mkdtemp, rm, writeFile } from "node:fs/promises";
import { createRequire } from "node:module";
import { tmpdir } from "node:os";
import { join, resolve } from "node:path";
import { pathToFileURL } from "node:url";
import { build } from "esbuild";
import { type Browser, chromium, type Page } from "playwright-core";
import { afterAll, beforeAll, describe, expect, test } from "vitest";
import { surveyBody } from "../../src/geometry/survey-body.js";
import type { TriangleSet } from "../../src/geometry/triangle-set.js";
import { bodyView } from "../../src/picture/body-view.js";
import { car } from "../geometry/car.js";
import { bodyOf, box, joined, shifted } from "../geometry/shapes.js";

const program = ["/usr/bin/chromium", "/usr/bin/chromium-browser", "/usr/bin/google-chrome"].find((path) => existsSync(path));
const root = resolve(import.meta.dirname, "../..");
const given = { unit: "m", travel: "-x", up: "+z", cell: null } as const;

/** A car whose roof has a hole, so that there is something to find and to fly to. */
function holed(): TriangleSet {
  const { set } = car(8000, 2);
  const roof = set.parts.findIndex(({ name }) => name === "roof");
  const first = set.partOf.indexOf(roof);
  const keep = [...set.partOf.keys()].filter((t) => t !== first + 20);
  return {
    ...set,
    positions: Float32Array.from(keep.flatMap((t) => [...set.positions.subarray(9 * t, 9 * t + 9)])),
    partOf: Uint16Array.from(keep, (t) => set.partOf[t]),
  };
}

const bait = `"><img src=x onerror=alert(1)></script><script>alert(2)</script>`;

let viewerScript: string;
let browser: Browser | undefined;
let folder: string;

beforeAll(async () => {
  folder = await mkdtemp(join(tmpdir(), "dragledger-view-"));
  const bundled = await build({
    entryPoints: [join(root, "src/picture/viewer/main.ts")],
    bundle: true,
    format: "iife",
    platform: "browser",
    target: "es2022",
    minify: true,
    write: false,
  });
  viewerScript = bundled.outputFiles[0]!.text;
  const set = holed();
  await writeFile(join(folder, "car.html"), bodyView(set, surveyBody(set, given), { viewerScript }));
  const hostile = bodyOf({
    [bait]: joined(box([0, 0, 0], [4, 1.6, 1.2]).slice(9), shifted(box([0, 0, 0], [1, 1, 1]), [1, 0.3, 1])),
  });
  await writeFile(join(folder, "hostile.html"), bodyView(hostile, surveyBody(hostile, given), { viewerScript }));
  if (program)
    browser = await chromium.launch({
      executablePath: program,
      args: ["--use-angle=swiftshader", "--enable-unsafe-swiftshader", "--ignore-gpu-blocklist", "--no-sandbox"],
    });
}, 120_000);

afterAll(async () => {
  await browser?.close();
  await rm(folder, { recursive: true, force: true });
});

test("the page holds no text as markup, and only its own script may run", () => {
  const set = bodyOf({ [bait]: box([0, 0, 0], [4, 1.6, 1.2]) });
  const page = bodyView(set, surveyBody(set, given), { viewerScript: "0;" });
  expect(page).not.toContain("<img src=x");
  expect(page).not.toContain("<script>alert");
  expect(page.match(/<script/g)).toHaveLength(2);
  expect(page).toMatch(/default-src &#39;none&#39;; script-src &#39;sha256-/);
});

describe.skipIf(!program)(
  `the page of a body in a browser${program ? "" : " (no Chromium in /usr/bin)"}`,
  { timeout: 60_000 },
  () => {
    async function opened(name: string, before: (page: Page) => Promise<void> = async () => {}) {
      const page = await browser!.newPage({ viewport: { width: 1280, height: 900 } });
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
      const address = pathToFileURL(join(folder, name)).href;
      await page.goto(address);
      await page.waitForSelector("#view[data-drawn]", { state: "attached" });
      return { page, complaints, requests: requests.filter((url) => url !== address && !url.startsWith("data:")) };
    }

    /** A number that changes when the drawn picture does. */
    const picture = (page: Page): Promise<number> =>
      page.evaluate(async () => {
        for (let frame = 0; frame < 3; frame++) await new Promise((done) => requestAnimationFrame(done));
        const canvas = document.querySelector("canvas")!;
        const copy = document.createElement("canvas");
        [copy.width, copy.height] = [canvas.width, canvas.height];
        const context = copy.getContext("2d")!;
        context.drawImage(canvas, 0, 0);
        const { data } = context.getImageData(0, 0, copy.width, copy.height);
        let sum = 0;
        for (let at = 0; at < data.length; at += 4)
          sum = (sum * 31 + data[at]! * 7 + data[at + 1]! * 5 + data[at + 2]! + data[at + 3]!) % 1_000_003;
        return sum;
      });

    test("opens from a file without complaint or request; a finding is marked and flown to; parts are picked and hidden", async () => {
      const { page, complaints, requests } = await opened("car.html");
      expect([complaints, requests]).toEqual([[], []]);
      expect(await page.getAttribute("#view", "data-drawn")).toBe("scene");
      const start = await picture(page);
      const place = page.getByRole("button", { name: /open-edges, place 1/ });
      await place.click();
      expect(await place.getAttribute("aria-pressed")).toBe("true");
      const flown = await picture(page);
      expect(flown).not.toBe(start);
      expect(await page.textContent("[role=status]")).toMatch(/^warning: open-edges, place 1 of 3$/);
      // The hole is in the roof: the eye is above it.
      const eye = (await page.getAttribute("#view", "data-eye"))!.split(" ").map(Number);
      expect(eye[2]).toBeGreaterThan(1.3);
      await page.getByRole("button", { name: "pick roof" }).click();
      const picked = await picture(page);
      expect(picked).not.toBe(flown);
      await page.getByRole("button", { name: "roof shown" }).click();
      expect(await picture(page)).not.toBe(picked);
      await page.getByRole("button", { name: "front", exact: true }).click();
      await page.locator("canvas").focus();
      await page.keyboard.press("ArrowLeft");
      expect(await picture(page)).not.toBe(flown);
      expect(complaints).toEqual([]);
      await page.close();
    });

    test("has no serious finding of axe, light or dark", async () => {
      const axe = createRequire(import.meta.url).resolve("axe-core/axe.min.js");
      for (const colorScheme of ["light", "dark"] as const) {
        const { page } = await opened("car.html", (fresh) => fresh.emulateMedia({ colorScheme }));
        // The page's own policy lets no script in; the checker comes by the debugger, which is not bound to it.
        const source = await import("node:fs/promises").then(({ readFile }) => readFile(axe, "utf8"));
        await page.evaluate(source);
        const found = await page.evaluate(async () => {
          const { violations } = await (
            window as unknown as { axe: { run(): Promise<{ violations: { id: string; impact: string }[] }> } }
          ).axe.run();
          return violations.filter(({ impact }) => impact === "serious" || impact === "critical").map(({ id }) => id);
        });
        expect([colorScheme, found]).toEqual([colorScheme, []]);
        await page.close();
      }
    });

    test("shows the still pictures where there is no WebGL", async () => {
      const { page } = await opened("car.html", (fresh) =>
        fresh.addInitScript(() => {
          HTMLCanvasElement.prototype.getContext = () => null;
        }),
      );
      expect(await page.getAttribute("#view", "data-drawn")).toBe("still");
      expect(await page.locator(".stills img").first().isVisible()).toBe(true);
      expect(await page.locator("canvas").isVisible()).toBe(false);
      await page.close();
    });

    test("names that are markup stay text", async () => {
      const { page, complaints, requests } = await opened("hostile.html");
      expect([complaints, requests]).toEqual([[], []]);
      expect(await page.textContent("[data-part]")).toContain(bait);
      await page.close();
    });
  },
);
