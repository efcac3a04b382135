import type { Survey } from "../../src/geometry/survey.js";
import type { Box } from "../../src/geometry/vector.js";
import { fixed, thousands } from "../../src/number-text.js";
import { printFindings } from "./findings.js";
import type { Printer } from "./printer.js";
import { table } from "./table.js";

const range = (box: Box, i: 0 | 1 | 2): string => `${fixed(box.min[i], 3)} … ${fixed(box.max[i], 3)}`;

/** Everything `inspect` says, for people. */
export function printSurvey(print: Printer, survey: Survey, domain: Box & { blockage: number }): void {
  const bold = print.colours.bold;
  print.line(`${survey.files.map((file) => `${file.path} (${file.format}, ${thousands(file.triangles)} triangles)`).join("\n")}`);

  print.heading("Body");
  const { length, width, height } = survey.extents;
  const certainty = (certain: boolean) => (certain ? "" : print.colours.yellow("  guess: confirm it"));
  print.line(`  unit            ${survey.unit.value}: ${survey.unit.basis}${certainty(survey.unit.certain)}`);
  print.line(
    `  axes            travels ${survey.axes.travel}, up ${survey.axes.up}: ${survey.axes.basis}${certainty(survey.axes.certain)}`,
  );
  print.line(`  length × width × height   ${fixed(length, 3)} × ${fixed(width, 3)} × ${fixed(height, 3)} m`);
  print.line(`  bounds          x ${range(survey.bounds, 0)}, y ${range(survey.bounds, 1)}, z ${range(survey.bounds, 2)} m`);
  print.line(
    `  frontal area    ${fixed(survey.frontalArea.value, 5)} m² ± ${survey.frontalArea.error.toExponential(1)} (union silhouette along travel)`,
  );
  print.line(`  wetted area     ${fixed(survey.wettedArea, 4)} m²`);
  print.line(`  volume          ${fixed(survey.volume, 4)} m³, centroid (${survey.centroid.map((x) => fixed(x, 3)).join(", ")}) m`);
  print.line(`  symmetry        ${symmetryText(survey)}`);
  if (survey.wheelbase !== null) print.line(`  wheelbase       ${fixed(survey.wheelbase, 4)} m`);
  print.line(
    `  domain          ${[0, 1, 2].map((i) => fixed(domain.max[i] - domain.min[i], 2)).join(" × ")} m, blockage ${fixed(100 * domain.blockage, 2)} %`,
  );

  print.heading("Parts");
  const renamed = survey.parts.some((part) => part.patch !== part.name);
  print.line(
    table(
      [
        { title: "part" },
        ...(renamed ? [{ title: "solver's name" }] : []),
        { title: "triangles", align: "right" as const },
        { title: "area m²", align: "right" as const },
        { title: "seen from the front m²", align: "right" as const },
      ],
      [
        ...survey.parts.map((part) => [
          part.name,
          ...(renamed ? [part.patch] : []),
          thousands(part.triangles),
          fixed(part.area, 4),
          fixed(part.frontalVisible, 4),
        ]),
        [
          "whole",
          ...(renamed ? [""] : []),
          thousands(survey.triangles),
          fixed(survey.wettedArea, 4),
          fixed(survey.frontalArea.value, 4),
        ],
      ],
      bold,
    ),
  );

  if (survey.wheels.length > 0) {
    print.heading("Wheels");
    print.line(
      table(
        [
          { title: "part" },
          { title: "centre m" },
          ...["radius m", "width m", "fit error mm"].map((title) => ({ title, align: "right" as const })),
        ],
        survey.wheels.map((wheel) => [
          wheel.part,
          wheel.centre.map((x) => fixed(x, 3)).join(", "),
          fixed(wheel.radius, 4),
          fixed(wheel.width, 3),
          fixed(1000 * wheel.fitError, 2),
        ]),
        bold,
      ),
    );
  }

  print.heading("Topology");
  const t = survey.topology;
  print.line(
    `  ${thousands(survey.vertices)} vertices, ${t.shells} shells; ${t.openEdges} open, ${t.nonManifoldEdges} non-manifold, ${t.flippedEdges} flipped edges; ` +
      `${t.degenerate} degenerate, ${t.duplicate} duplicate triangles`,
  );

  if (survey.findings.length > 0) {
    print.heading("Findings");
    printFindings(print, survey.findings);
  }
  print.line();
  print.line(verdictLine(print, survey));
}

function symmetryText({ symmetry }: Survey): string {
  if (symmetry.kind === "whole")
    return `mirror symmetric about ${fixed(symmetry.plane, 4)} m (deviation ${symmetry.deviation.toExponential(1)} m)`;
  if (symmetry.kind === "half")
    return `half body: all of it on one side of ${fixed(symmetry.plane, 4)} m; areas and volume are those of the half`;
  return "not mirror symmetric";
}

function verdictLine(print: Printer, survey: Survey): string {
  if (survey.verdict === "fit") return print.colours.green("fit to mesh");
  if (survey.verdict === "fit-with-warnings") return print.colours.yellow("fit to mesh, with warnings");
  return print.colours.red("not fit to mesh: mend the errors above first");
}
