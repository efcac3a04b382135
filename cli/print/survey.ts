import type { CellFitSurvey, ProjectedArea, Survey } from "../../src/geometry/survey.js";
import type { Box } from "../../src/geometry/vector.js";
import { fixed, significant, thousands } from "../../src/number-text.js";
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
  for (const [title, area] of areas(survey)) print.line(`  ${title.padEnd(15)} ${area}`);
  print.line(`  wetted area     ${fixed(survey.wettedArea, 4)} m²`);
  print.line(`  volume          ${fixed(survey.volume, 4)} m³, centroid (${survey.centroid.map((x) => fixed(x, 3)).join(", ")}) m`);
  print.line(`  symmetry        ${symmetryText(survey)}`);
  for (const line of stance(survey)) print.line(line);
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
        { title: "alone m²", align: "right" as const },
      ],
      [
        ...survey.parts.map((part) => [
          part.name,
          ...(renamed ? [part.patch] : []),
          thousands(part.triangles),
          fixed(part.area, 4),
          fixed(part.frontalVisible, 4),
          fixed(part.frontalAlone, 4),
        ]),
        [
          "whole",
          ...(renamed ? [""] : []),
          thousands(survey.triangles),
          fixed(survey.wettedArea, 4),
          fixed(survey.frontalArea.value, 4),
          "",
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
          { title: "wheel" },
          { title: "part" },
          { title: "centre m" },
          ...["radius m", "axle height m", "width m", "contact mm", "fit error mm"].map((title) => ({
            title,
            align: "right" as const,
          })),
        ],
        survey.wheels.map((wheel) => [
          wheel.position,
          wheel.part,
          wheel.centre.map((x) => fixed(x, 3)).join(", "),
          fixed(wheel.radius, 4),
          fixed(wheel.axleHeight, 4),
          fixed(wheel.width, 3),
          wheel.contact === null
            ? `none, gap ${fixed(1000 * wheel.gap, 1)}`
            : `${fixed(1000 * wheel.contact.length, 0)} × ${fixed(1000 * wheel.contact.width, 0)}`,
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

  for (const line of borders(survey)) print.line(line);
  if (survey.fit !== null) print.line(`  ${cellText(survey.fit)}`);

  if (survey.findings.length > 0) {
    print.heading("Findings");
    printFindings(print, survey.findings);
  }
  print.line();
  print.line(verdictLine(print, survey));
}

/** Silhouette areas, what the whole vehicle has where the body is a half, and areas at yaw. */
function areas(survey: Survey): [string, string][] {
  const text = ({ value, error }: ProjectedArea): string => `${fixed(value, 5)} m² ± ${error.toExponential(1)}`;
  const lines: [string, string][] = [["frontal area", `${text(survey.frontalArea)} (union silhouette along travel)`]];
  for (const seen of survey.yawed)
    lines.push([`  yaw ${fixed((180 / Math.PI) * seen.yaw, 1)} deg`, `${text(seen)} (across the wind, whole vehicle)`]);
  lines.push(["side, plan area", `${fixed(survey.sideArea.value, 4)} m², ${fixed(survey.planArea.value, 4)} m²`]);
  if (survey.doubled !== null)
    lines.push([
      "doubled",
      `frontal area ${fixed(survey.doubled.frontalArea, 5)} m², plan area ${fixed(survey.doubled.planArea, 4)} m², wetted area ${fixed(survey.doubled.wettedArea, 4)} m², volume ${fixed(survey.doubled.volume, 4)} m³: the whole vehicle, since the body is a half`,
    ]);
  return lines;
}

/** Wheelbase and how the body stands on its wheels. */
function stance({ wheelbase, stance: { track, overhangs, clearance } }: Survey): string[] {
  const lines: string[] = [];
  const metres = (value: number | null): string => (value === null ? "-" : fixed(value, 3));
  if (wheelbase !== null) lines.push(`  wheelbase       ${fixed(wheelbase, 4)} m`);
  if (track.front !== null || track.rear !== null)
    lines.push(`  track           front ${metres(track.front)} m, rear ${metres(track.rear)} m`);
  if (overhangs !== null) lines.push(`  overhangs       front ${metres(overhangs.front)} m, rear ${metres(overhangs.rear)} m`);
  if (clearance !== null && wheelbase !== null)
    lines.push(`  clearance       ${metres(clearance.height)} m above the ground (${clearance.part})`);
  return lines;
}

/** The longest open borders: where to look for holes. */
function borders({ topology: { borders: longest, borderCount } }: Survey): string[] {
  const lines = longest
    .slice(0, 3)
    .map(
      (border) =>
        `  open border of ${border.edges} edges, ${fixed(border.length, 3)} m long, ${fixed(border.span, 3)} m across, at (${border.centre.map((x) => fixed(x, 3)).join(", ")}) m: ${border.parts.slice(0, 3).join(", ")}`,
    );
  if (borderCount > lines.length) lines.push(`  and ${borderCount - lines.length} more borders`);
  return lines;
}

function cellText({ cell, leaks, enclosed }: CellFitSurvey): string {
  const mm = (metres: number): string => `${fixed(1000 * metres, 1)} mm`;
  if (leaks.length === 0) return `surface cell ${mm(cell)}: leak test left out`;
  const tests = leaks.map((leak) => `${leak.reached ? "air gets in" : "no air gets in"} at ${mm(leak.cell)}`).join(", ");
  const air =
    enclosed === null || enclosed.air.count === 0
      ? ""
      : `; ${significant(enclosed.air.volume, 2)} m³ of air closed off between parts`;
  return `surface cell ${mm(cell)}: ${tests}${air}`;
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
