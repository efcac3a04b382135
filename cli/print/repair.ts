import type { Repaired, RepairNote } from "../../src/geometry/repair/repair.js";
import type { Printer } from "./printer.js";

/** What a repair changed and what it left; `path` is the new file. */
export function printRepair(print: Printer, path: string, { changes, left }: Repaired): void {
  print.heading("Repair");
  const line = ({ part, message, places }: RepairNote): void => {
    print.line(`  ${part === null ? "" : `${part}: `}${message}`);
    const [first] = places;
    if (first !== undefined)
      print.line(`    ${print.colours.dim(`first at (${first.map((x) => x.toFixed(4)).join(", ")}), unit of the file`)}`);
  };
  if (changes.length === 0) print.line("  nothing to change");
  for (const note of changes) line(note);
  if (left.length > 0) print.line("  left as it is:");
  for (const note of left) line(note);
  print.line(`  written to ${path}; the files that were read are as they were`);
}
