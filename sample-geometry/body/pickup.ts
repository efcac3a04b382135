import { bedCover } from "./bed-cover.js";
import { rightMirror } from "./mirrors.js";
import { shellParts } from "./shell.js";
import type { Surface } from "./surface.js";
import { tailgateDown, tailgateUp } from "./tailgate.js";
import { underbody } from "./underbody.js";
import { wheelParts } from "./wheels.js";

/** One part as it is written: the stem of its file, its name, and whether the file is text (which can carry another name than its own). */
export interface SamplePart {
  file: string;
  name: string;
  format: "binary" | "text";
  surface: Surface;
}

/** All parts of all variants of the sample body. */
export function pickup(): SamplePart[] {
  const binary = (name: string, surface: Surface): SamplePart => ({ file: `${name}.stl`, name, format: "binary", surface });
  const { hood, cab, bed } = shellParts();
  const mirror = rightMirror();
  return [
    binary("hood", hood),
    binary("cab", cab),
    binary("bed", bed),
    binary("tailgate", tailgateUp()),
    { file: "tailgate-down.stl", name: "tailgate", format: "text", surface: tailgateDown() },
    binary("bed-cover", bedCover()),
    binary("underbody", underbody()),
    binary("mirror-left", mirror.mirrored()),
    binary("mirror-right", mirror),
    ...Object.entries(wheelParts()).map(([name, surface]) => binary(name, surface)),
  ];
}
