import { createHash } from "node:crypto";
import { readFileSync } from "node:fs";
import ejs from "ejs";
import { packageFile } from "../package-files.js";
import type { PageModel } from "./page-model.js";

export interface PageAssets {
  style: string;
  /** the bundled viewer */
  script: string;
}

/** The style sheet and the viewer that ship with the package. */
export function packagedAssets(): PageAssets {
  return {
    style: readFileSync(packageFile("templates", "report", "style.css"), "utf8"),
    script: readFileSync(packageFile("dist", "report", "viewer.js"), "utf8"),
  };
}

/**
 * The page as one HTML text that needs nothing else. All text from files is escaped by the template; bodies travel as JSON that cannot end
 * its element; the page's own policy lets run only the one script and style that it was written with.
 */
export function renderPage(model: PageModel, assets: PageAssets = packagedAssets()): string {
  const policy = [
    "default-src 'none'",
    `script-src 'sha256-${digest(assets.script)}'`,
    `style-src 'sha256-${digest(assets.style)}'`,
    "img-src data:",
    "base-uri 'none'",
    "form-action 'none'",
  ].join("; ");
  const template = readFileSync(packageFile("templates", "report", "page.ejs"), "utf8");
  return ejs.render(template, { model, policy, style: assets.style, script: assets.script, bodies: inertJson(model.bodies) });
}

const digest = (text: string): string => createHash("sha256").update(text).digest("base64");

/** JSON that holds no `<`, so that no text in it can close the element around it. */
const inertJson = (value: unknown): string => JSON.stringify(value).replaceAll("<", "\\u003c");
