import type { PackedMesh } from "../picture/packed-mesh.js";

/** What travels inside the page for the viewer. */
export interface PackedScene {
  /** Meshes that variants share are there once. */
  meshes: PackedMesh[];
  variants: { name: string; parts: PackedPart[] }[];
  /** greatest size of a part's drag difference, counts; 0 when nothing was compared */
  largest: number;
}

export interface PackedPart {
  name: string;
  /** ledger part that holds its forces; null when none does */
  row: string | null;
  tone: number;
  delta: number | null;
  /** index into `meshes` */
  mesh: number;
}
