import { readFileSync } from "node:fs";
import ejs from "ejs";
import { place, placeDirection, placementOf } from "../geometry/place.js";
import type { Survey } from "../geometry/survey.js";
import type { TriangleSet } from "../geometry/triangle-set.js";
import type { Vector3 } from "../geometry/vector.js";
import { packageFile } from "../package-files.js";
import { bodyPicture } from "./body-picture.js";
import { cornersOf, packMesh } from "./pack-mesh.js";
import { closedOff, inertJson, policyOf } from "./sealed-page.js";
import { thinBody } from "./thin-body.js";
import { inkTone, severityTones, toneOf } from "./tones.js";
import type { ViewData } from "./view-data.js";

/** Triangles that a page carries; a browser on two cores turns them without a graphics card. */
const mostTriangles = 400_000;
const stillWidth = 1100;

/**
 * One body as a page that needs nothing else: in 3-D with its parts, and its findings marked in place; three still pictures where
 * there is no WebGL, and on paper. `set` in the unit and axes of its files, `survey` that of the same body. Every text is escaped by the
 * template; the page's own policy lets run only its one script. Reads files of the package only.
 *
 * @param viewerScript text of the bundled viewer; the one that ships with the package where it is not given
 */
export function bodyView(set: TriangleSet, survey: Survey, { viewerScript }: { viewerScript?: string } = {}): string {
  const placement = placementOf({ unit: survey.unit.value, travel: survey.axes.travel, up: survey.axes.up }, [0, 0, 0]);
  const { set: thin, moved } = thinBody(place(set, placement), mostTriangles);
  const turned = (at: Vector3): Vector3 => placeDirection(at, placement);
  const filled = thin.parts.flatMap(({ name }, part) => {
    const corners = cornersOf(thin, part);
    return corners.length === 0 ? [] : [{ name, tone: toneOf(part), corners }];
  });
  const data: ViewData = {
    meshes: filled.map(({ corners }) => packMesh(corners)),
    parts: filled.map(({ name, tone }, mesh) => ({ name, tone, mesh })),
    findings: survey.findings.map(({ places, severity }) => ({ places: places.map(turned), tone: severityTones[severity] })),
    axles: survey.wheels.flatMap(({ centre, axis, width }) =>
      [-0.8, 0.8].map((side) => turned(centre.map((value, k) => value + side * width * axis[k]) as Vector3)),
    ),
  };
  const style = readFileSync(packageFile("templates", "view", "page.css"), "utf8");
  const script = closedOff(viewerScript ?? readFileSync(packageFile("dist", "picture", "viewer.js"), "utf8"));
  const page = packageFile("templates", "view", "page.ejs");
  return ejs.render(
    readFileSync(page, "utf8"),
    {
      survey,
      title: titleOf(survey),
      parts: survey.parts.map((part, k) => ({ ...part, tone: toneOf(k) })),
      drawn: { triangles: thin.partOf.length, of: set.partOf.length, moved },
      stills: (["front", "side", "plan"] as const).map((seen) => ({
        seen,
        address: `data:image/png;base64,${Buffer.from(bodyPicture(set, survey, { seen, width: stillWidth })).toString("base64")}`,
      })),
      severityTones,
      inkTone,
      style,
      script,
      policy: policyOf(style, script),
      data: inertJson(data),
    },
    { filename: page },
  );
}

/** The names of the files, the first three of many. */
function titleOf({ files }: Survey): string {
  const names = files.map(({ path }) => path.split(/[\\/]/).at(-1));
  return names.length > 4 ? `${names.slice(0, 3).join(", ")} and ${names.length - 3} more files` : names.join(", ");
}
