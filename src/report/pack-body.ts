import { createHash } from "node:crypto";
import { cornersOf, packMesh } from "../picture/pack-mesh.js";
import type { PackedMesh } from "../picture/packed-mesh.js";
import type { BodySection } from "./body-section.js";
import type { PackedScene } from "./packed.js";

/** The bodies for the viewer; parts that are alike in two variants travel once. */
export function packScene({ variants, largest }: BodySection): PackedScene {
  const meshes: PackedMesh[] = [];
  const known = new Map<string, number>();
  return {
    meshes,
    largest,
    variants: variants.map(({ name, set, parts }) => ({
      name,
      parts: parts.map((part, index) => {
        const corners = cornersOf(set, index);
        const key = createHash("sha256").update(new Uint8Array(corners.buffer)).digest("hex");
        const mesh = known.get(key) ?? meshes.push(packMesh(corners)) - 1;
        known.set(key, mesh);
        return { ...part, mesh };
      }),
    })),
  };
}
