import { Option } from "commander";
import { boundingDomain } from "../../src/flow/domain.js";
import { readSurfaces } from "../../src/geometry/files/read.js";
import { requireFree, writeRepaired } from "../../src/geometry/files/write-repaired.js";
import { repair } from "../../src/geometry/repair/repair.js";
import type { LengthUnit, SignedAxis } from "../../src/geometry/survey.js";
import { surveyBody } from "../../src/geometry/survey-body.js";
import { bodyPicture, viewNamed } from "../../src/picture/body-picture.js";
import { bodyView } from "../../src/picture/body-view.js";
import { writeWhole } from "../../src/write-whole.js";
import type { CommandModule } from "../command.js";
import { exitCode } from "../context.js";
import { printRepair } from "../print/repair.js";
import { printSurvey } from "../print/survey.js";
import { each, quantity } from "../values.js";

interface Options {
  unit?: LengthUnit;
  travel?: SignedAxis;
  up?: SignedAxis;
  wheels?: string[];
  yaw?: number[];
  cell?: number;
  full?: boolean;
  repair?: string;
  picture?: string[];
  view?: string;
}

const signedAxes = ["+x", "-x", "+y", "-y", "+z", "-z"];

export const command: CommandModule<Options> = {
  arguments: "<stl...>",
  description:
    "Check one body, given as one or more STL files (plain or gzip), before spending time on a mesh: parts, areas, bounds, wheels, unit and axes, topology,\n" +
    "frontal area and a bounding domain. Ends with 'fit', 'fit-with-warnings' or 'not-fit' (exit 3).",
  options(command) {
    command
      .addOption(
        new Option("--unit <unit>", "unit of the files' numbers, instead of a guess").choices(["m", "mm", "cm", "in", "ft"]),
      )
      .addOption(new Option("--travel <axis>", "direction the vehicle drives, such as -x").choices(signedAxes))
      .addOption(new Option("--up <axis>", "direction up, such as +z").choices(signedAxes))
      .option("--wheels <part...>", "parts that are wheels, when their names do not say so")
      .option("--yaw <angle...>", "frontal area across the wind at these angles of yaw too, such as 5deg", each(quantity("angle")))
      .option(
        "--cell <length>",
        "cell of the mesh at the surface to be fit for, such as 20mm; else a two-hundredth of the length",
        quantity("length"),
      )
      .option(
        "--picture <file.png...>",
        "pictures of the body with the findings marked; the end of the name says the view: front.png, side.png, plan.png",
      )
      .option("--view <file.html>", "one page with the body in 3-D and the findings marked in place; opens without a network")
      .option(
        "--repair <file.stl>",
        "write a repaired body to a new file: copies and cracks of rounding removed, triangles facing one way and outwards; lists each change",
      )
      .option("--full", "the slow checks (self-intersections, leak test) also above a million triangles");
  },
  examples: [
    { call: "dragledger inspect body.stl wheels.stl --cell 15mm --yaw 5deg", does: "two files as one body, for a finer mesh" },
    { call: "dragledger inspect body.stl --unit mm --travel -x --json", does: "unit and direction given; the result as JSON" },
  ],
  async run({ args, options, print }) {
    const pictures = (options.picture ?? []).map((path) => ({ path, seen: viewNamed(path) }));
    const set = await readSurfaces(args[0] as string[]);
    if (options.repair !== undefined) await requireFree(options.repair, set);
    const survey = surveyBody(set, {
      unit: options.unit,
      travel: options.travel,
      up: options.up,
      wheelParts: options.wheels,
      yaws: options.yaw,
      cell: options.cell,
      full: options.full,
    });
    const domain = boundingDomain(survey);
    for (const { path, seen } of pictures) await writeWhole(path, bodyPicture(set, survey, { seen }));
    if (options.view !== undefined) await writeWhole(options.view, bodyView(set, survey));
    const repaired = options.repair === undefined ? null : repair(set);
    if (repaired !== null) await writeRepaired(options.repair!, repaired.set);
    print.document("inspect", {
      ...survey,
      domain,
      ...(pictures.length > 0 && { pictures }),
      ...(options.view !== undefined && { view: options.view }),
      ...(repaired !== null && { repair: { path: options.repair, changes: repaired.changes, left: repaired.left } }),
    });
    printSurvey(print, survey, domain);
    for (const { path, seen } of pictures) print.line(`picture from the ${seen === "plan" ? "top" : seen}: ${path}`);
    if (options.view !== undefined) print.line(`page of the body: ${options.view}`);
    if (repaired !== null) printRepair(print, options.repair!, repaired);
    return survey.verdict === "not-fit" ? exitCode.no : exitCode.done;
  },
};
