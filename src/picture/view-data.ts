import type { PackedMesh } from "./packed-mesh.js";

/** What the page of one body carries for its viewer. Metres; x rearward, y right, z up, as in a case but not shifted. */
export interface ViewData {
  meshes: PackedMesh[];
  parts: { name: string; tone: string; mesh: number }[];
  findings: { places: [number, number, number][]; tone: string }[];
  /** Ends of the wheels' axles, two by two. */
  axles: [number, number, number][];
}
