import { fileURLToPath } from "node:url";
import writeFileAtomic from "write-file-atomic";
import { asciiStl } from "../../../src/geometry/files/write-stl.js";
import { ahmedBody } from "./body.js";

// Writes the bodies beside the study: npx tsx tests/published/ahmed/generate.ts
for (const slant of [25, 35])
  await writeFileAtomic(fileURLToPath(new URL(`slant-${slant}.stl`, import.meta.url)), Buffer.from(asciiStl(ahmedBody(slant))));
