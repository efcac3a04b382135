import { Option } from "commander";
import { boundingDomain } from "../../src/flow/domain.js";
import { readSurfaces } from "../../src/geometry/files/read.js";
import type { LengthUnit, SignedAxis } from "../../src/geometry/survey.js";
import { surveyBody } from "../../src/geometry/survey-body.js";
import type { CommandModule } from "../command.js";
import { exitCode } from "../context.js";
import { printSurvey } from "../print/survey.js";

interface Options {
  unit?: LengthUnit;
  travel?: SignedAxis;
  up?: SignedAxis;
  wheels?: string[];
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
      .option("--wheels <part...>", "parts that are wheels, when their names do not say so");
  },
  examples: [
    { call: "dragledger inspect body.stl wheels.stl", does: "two files as one body" },
    { call: "dragledger inspect body.stl --unit mm --travel -x --json", does: "unit and direction given; the result as JSON" },
  ],
  async run({ args, options, print }) {
    const set = await readSurfaces(args[0] as string[]);
    const survey = surveyBody(set, { unit: options.unit, travel: options.travel, up: options.up, wheelParts: options.wheels });
    const domain = boundingDomain(survey);
    print.document("inspect", { ...survey, domain });
    printSurvey(print, survey, domain);
    return survey.verdict === "not-fit" ? exitCode.no : exitCode.done;
  },
};
