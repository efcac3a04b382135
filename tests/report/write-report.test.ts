import { createHash } from "node:crypto";
import { parseHTML } from "linkedom";
import { beforeAll, describe, expect, test } from "vitest";
import { reportModel } from "../../src/report/model.js";
import { cautions, countDefinition } from "../../src/report/statements.js";
import { writeReport } from "../../src/report/write-report.js";
import { exampleInput, hostileInput, markup } from "./example.js";

const viewerScript = `console.log("</script><!--");`;
let page: string;
let hostile: string;
beforeAll(() => {
  page = writeReport(reportModel(exampleInput()), { viewerScript });
  hostile = writeReport(reportModel(hostileInput()), { viewerScript });
});

const documentOf = (html: string) => parseHTML(html).document;

describe("the page", () => {
  test("is one text that loads nothing: no address but its own places and pictures within", () => {
    const document = documentOf(page);
    for (const element of document.querySelectorAll("[src], [href], [action], [data]")) {
      const address = element.getAttribute("src") ?? element.getAttribute("href") ?? "not allowed";
      expect(address).toMatch(/^(#[a-z]+|data:image\/png;base64,[A-Za-z0-9+/=]+)$/);
    }
    expect(page).not.toMatch(/url\((?!#)|@import|<link|<iframe|<object|<embed|<base/);
    // The name of the SVG language is no address.
    expect(page.replaceAll('xmlns="http://www.w3.org/2000/svg"', "")).not.toMatch(/https?:/);
  });

  test("its policy lets run the one script and the one style that it was written with, and nothing else", () => {
    const document = documentOf(page);
    const policy = document.querySelector('meta[http-equiv="Content-Security-Policy"]')!.getAttribute("content")!;
    const hash = (text: string) => createHash("sha256").update(text).digest("base64");
    const within = (name: string, attributes = "") => new RegExp(`<${name}${attributes}>([\\s\\S]*?)</${name}>`).exec(page)![1]!;
    expect(policy.split("; ")).toEqual([
      "default-src 'none'",
      `script-src 'sha256-${hash(within("script"))}'`,
      `style-src 'sha256-${hash(within("style"))}'`,
      "img-src data:",
      "base-uri 'none'",
      "form-action 'none'",
    ]);
    // It stands before anything that it governs.
    expect(page.indexOf("Content-Security-Policy")).toBeLessThan(page.indexOf("<style"));
    expect(document.querySelectorAll("[style]")).toHaveLength(0);
    expect(page).not.toMatch(/<[a-z][^>]*\son[a-z]+=/);
  });

  test("a script that holds the end of its own element is not cut", () => {
    const scripts = [...documentOf(page).querySelectorAll("script")];
    expect(scripts.map((script) => script.getAttribute("type"))).toEqual(["application/json", null]);
    expect(page).toContain('console.log("<\\/script><\\!--");');
  });

  test("the same model gives the same page", () => {
    expect(writeReport(reportModel(exampleInput()), { viewerScript })).toBe(page);
  });

  test("names are unique, and every reference to one is met", () => {
    const document = documentOf(page);
    const names = [...document.querySelectorAll("[id]")].map((element) => element.id);
    expect(names.filter((name, index) => names.indexOf(name) !== index)).toEqual([]);
    const wanted = [
      ...[...document.querySelectorAll("a[href]")].map((element) => element.getAttribute("href")!.slice(1)),
      ...[...document.querySelectorAll("[aria-labelledby]")].map((element) => element.getAttribute("aria-labelledby")!),
      ...[...document.querySelectorAll("[aria-describedby]")].map((element) => element.getAttribute("aria-describedby")!),
      ...[...page.matchAll(/url\(#([\w-]+)\)/g)].map(([, name]) => name!),
    ];
    expect(wanted.filter((name) => !names.includes(name))).toEqual([]);
  });

  test("headings go down one step at a time", () => {
    const levels = [...documentOf(page).querySelectorAll("h1, h2, h3, h4")].map(({ tagName }) => Number(tagName[1]));
    expect(levels[0]).toBe(1);
    expect(levels.filter((level) => level === 1)).toHaveLength(1);
    for (let k = 1; k < levels.length; k++) expect(levels[k]! - levels[k - 1]!).toBeLessThanOrEqual(1);
  });

  test("every heading cell of a table says what it heads", () => {
    for (const cell of documentOf(page).querySelectorAll("th")) expect(cell.getAttribute("scope")).toMatch(/^(col|row|rowgroup)$/);
  });

  test("a count is defined, once", () => {
    expect(page.split(countDefinition)).toHaveLength(2);
  });

  test("the answer comes first, the cautions are all there", () => {
    const text = documentOf(page).querySelector("main")!.textContent!;
    expect(text.indexOf("Drag falls")).toBeLessThan(text.indexOf("Ledgers"));
    for (const caution of cautions) expect(text).toContain(caution);
  });

  test("stays small: the example without the viewer is below 400 kB", () => {
    expect(page.length).toBeLessThan(400_000);
  });

  test("nothing is left of the template's language, no value is missing", () => {
    expect(page).not.toMatch(/<%|%>|\[object |undefined|NaN/);
  });

  test("nothing is compared: the whole vehicle stands first", () => {
    const input = exampleInput();
    const alone = documentOf(
      writeReport(reportModel({ ...input, runs: input.runs.slice(0, 1), comparisons: [], bodies: [] }), { viewerScript }),
    );
    expect(alone.querySelector("#answer table caption")!.textContent).toBe("The whole vehicle");
    expect(alone.querySelector("#viewer")).toBeNull();
    expect(alone.querySelector("#where table")).not.toBeNull();
  });

  test("without parts and bodies there is no place for them, and no link to it", () => {
    const input = exampleInput();
    const runs = input.runs.map((run) => ({ ...run, ledger: { ...run.ledger, parts: [] }, mesh: null }));
    const bare = documentOf(writeReport(reportModel({ ...input, runs, comparisons: [], bodies: [] }), { viewerScript }));
    expect(bare.querySelector("#where")).toBeNull();
    expect([...bare.querySelectorAll("nav a")].map((link) => link.textContent)).not.toContain("Where");
  });

  test("recorded results are said at the top, in the title and at the end", () => {
    const input = exampleInput();
    for (const run of input.runs) run.ledger.recorded = "a run of 2026 with OpenFOAM v1912";
    const document = documentOf(writeReport(reportModel(input), { viewerScript }));
    expect(document.querySelector("header .notice")!.textContent).toContain("a run of 2026 with OpenFOAM v1912");
    expect(document.querySelector("title")!.textContent).toBe("pickup-bed (recorded results)");
    expect(document.querySelector("footer")!.textContent).toContain("Recorded results");
    expect(page).not.toContain("Recorded results");
  });
});

describe("names and texts from files", () => {
  test("markup in them makes no element", () => {
    const document = documentOf(hostile);
    expect(document.querySelectorAll("script")).toHaveLength(2);
    for (const image of document.querySelectorAll("img")) expect(image.getAttribute("src")).toMatch(/^data:/);
    expect(document.querySelectorAll("[onerror]")).toHaveLength(0);
    expect(hostile.match(/<script/g)).toHaveLength(2);
  });

  test("they are shown as they are written", () => {
    const document = documentOf(hostile);
    expect(document.querySelector("h1")!.textContent).toBe(markup);
    expect(document.querySelector(".question")!.textContent).toBe(markup);
    const heads = [...document.querySelectorAll("tbody th .name")].map(({ textContent }) => textContent);
    expect(heads.filter((head) => head === markup).length).toBeGreaterThan(3);
    expect([...document.querySelectorAll("[data-part]")].some((row) => row.getAttribute("data-part") === markup)).toBe(true);
    expect([...document.querySelectorAll("thead th")].some(({ textContent }) => textContent === `${markup}&amp;`)).toBe(true);
  });

  test("bodies travel as JSON that cannot end its element, and come back as they are", () => {
    const json = /<script type="application\/json" id="bodies">([\s\S]*?)<\/script>/.exec(hostile)![1]!;
    expect(json).not.toContain("<");
    const { variants } = JSON.parse(json) as { variants: { name: string; parts: { name: string }[] }[] };
    expect(variants.map(({ name }) => name)).toEqual(["open-bed", `${markup}&amp;`, "tailgate-down"]);
    expect(variants[0]!.parts.map(({ name }) => name)).toContain(markup);
  });
});
