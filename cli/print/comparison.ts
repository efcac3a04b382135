import type { Comparison, Difference } from "../../src/compare/comparison.js";
import { fixed, halfWidthText, signed } from "../../src/number-text.js";
import { printFindings } from "./findings.js";
import type { Printer } from "./printer.js";
import { table } from "./table.js";

const labels: Record<string, { label: string; decimals: number }> = {
  cd: { label: "Cd", decimals: 4 },
  cl: { label: "Cl", decimals: 4 },
  clFront: { label: "Cl front axle", decimals: 4 },
  clRear: { label: "Cl rear axle", decimals: 4 },
  cs: { label: "Cs", decimals: 4 },
  cm: { label: "Cm pitch", decimals: 4 },
  cda: { label: "CdA m²", decimals: 4 },
  drag: { label: "drag N", decimals: 1 },
  lift: { label: "lift N", decimals: 1 },
};

export function printComparison(print: Printer, comparison: Comparison): void {
  const { a, b } = comparison;
  print.heading(
    a.condition === b.condition
      ? `${b.variant} minus ${a.variant}  ${a.condition}`
      : `${b.variant} at ${b.condition} minus ${a.variant} at ${a.condition}`,
  );
  print.line(`  ${comparison.sentence}`);
  print.line();
  const row = (difference: Difference): string[] => {
    const { label, decimals } = labels[difference.name] ?? { label: difference.name, decimals: 4 };
    return [
      difference.part ?? "whole",
      label,
      fixed(difference.a, decimals),
      fixed(difference.b, decimals),
      `${signed(difference.delta, decimals)} ± ${difference.halfWidth === null ? "?" : halfWidthText(difference.halfWidth, decimals)}`,
      difference.verdict,
    ];
  };
  print.line(
    table(
      [
        { title: "part" },
        { title: "quantity" },
        { title: "A", align: "right" },
        { title: "B", align: "right" },
        { title: "B − A", align: "right" },
        { title: "verdict" },
      ],
      comparison.differences.map(row),
      print.colours.bold,
    ),
  );
  if (comparison.smallestResolvable !== null)
    print.line(`smallest drag difference this pair can resolve: ${fixed(1000 * comparison.smallestResolvable, 1)} counts`);
  printFindings(print, comparison.findings);
}
