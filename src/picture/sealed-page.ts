import { createHash } from "node:crypto";

/** A script that holds the end tag of its own element (in a text of its own) would be cut there. */
export const closedOff = (script: string): string => script.replaceAll(/<\/(script)/gi, "<\\/$1").replaceAll("<!--", "<\\!--");

/** The page's own policy: it lets run only the one script and the one style that it was written with, and load nothing. */
export const policyOf = (style: string, script: string): string =>
  [
    "default-src 'none'",
    `script-src 'sha256-${digest(script)}'`,
    `style-src 'sha256-${digest(style)}'`,
    "img-src data:",
    "base-uri 'none'",
    "form-action 'none'",
  ].join("; ");

const digest = (text: string): string => createHash("sha256").update(text).digest("base64");

/** JSON that holds no `<`, so that no text in it can close the element around it. */
export const inertJson = (value: unknown): string => JSON.stringify(value).replaceAll("<", "\\u003c");
