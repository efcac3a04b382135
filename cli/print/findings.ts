import type { Finding } from "../../src/finding.js";
import type { Printer } from "./printer.js";

/** Findings as lines: mark, part, what and why, then where and what to do; of brief notes the first sentence only. */
export function printFindings(print: Printer, findings: Finding[], { briefNotes = false } = {}): void {
  for (const found of findings) {
    const mark =
      found.severity === "error"
        ? print.colours.red("error  ")
        : found.severity === "warning"
          ? print.colours.yellow("warning")
          : print.colours.dim("note   ");
    const part = found.part === null ? "" : `${found.part}: `;
    if (briefNotes && found.severity === "note") {
      print.line(`  ${mark}  ${part}${/^.*?\.(?=\s[A-Z])|^.*$/s.exec(found.message)?.[0] ?? found.message}`);
      continue;
    }
    print.line(`  ${mark}  ${part}${found.message}`);
    for (const place of found.places.slice(0, 3)) print.line(`           at (${place.map((x) => x.toFixed(4)).join(", ")}) m`);
    if (found.remedy) print.line(`           ${print.colours.dim(found.remedy)}`);
  }
}
