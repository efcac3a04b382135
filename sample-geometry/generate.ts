import { mkdir } from "node:fs/promises";
import { fileURLToPath } from "node:url";
import writeFileAtomic from "write-file-atomic";
import { pickup } from "./body/pickup.js";
import { bytesOf } from "./body/write.js";

const folder = fileURLToPath(new URL("./geometry/", import.meta.url));
await mkdir(folder, { recursive: true });
for (const part of pickup()) {
  const bytes = bytesOf(part);
  await writeFileAtomic(`${folder}${part.file}`, Buffer.from(bytes));
  console.log(
    `${part.file.padEnd(24)} ${String(part.surface.positions.length / 9).padStart(6)} triangles ${String(bytes.length).padStart(8)} bytes`,
  );
}
