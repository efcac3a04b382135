import type { Finding } from "../finding.js";
import type { Leak } from "./checks/leak.js";
import type { SurfaceFile } from "./triangle-set.js";
import type { Box, Vector3 } from "./vector.js";

export type LengthUnit = "m" | "mm" | "cm" | "in" | "ft";
export type SignedAxis = "+x" | "-x" | "+y" | "-y" | "+z" | "-z";

/** How a body's own numbers are to be understood: unit of length, direction of travel, up. */
export interface Orientation {
  unit: LengthUnit;
  /** The direction the vehicle drives, file axes. */
  travel: SignedAxis;
  up: SignedAxis;
}

export interface PartSurvey {
  name: string;
  patch: string;
  triangles: number;
  /** m² */
  area: number;
  /** metres, file axes */
  bounds: Box;
  /** m²: area of the union silhouette that this part owns when seen along the flow (the nearest part wins); the parts add up to the whole. */
  frontalVisible: number;
}

export interface Topology {
  openEdges: number;
  nonManifoldEdges: number;
  flippedEdges: number;
  degenerate: number;
  duplicate: number;
  shells: number;
  /** Pairs of triangles of one shell that pass through each other; null where the surface is too large to look. Shells may overlap. */
  selfIntersections: number | null;
}

export interface Wheel {
  part: string;
  /** metres, file axes */
  centre: Vector3;
  /** unit vector along the axle, file axes, pointing to the vehicle's right */
  axis: Vector3;
  /** metres: greatest radius of the tread about the axis */
  radius: number;
  /** metres */
  width: number;
  /** metres: root mean square deviation of the tread from the fitted circle */
  fitError: number;
}

/** All that is known of a body from its triangles alone. Lengths in metres, areas in m², file axes (not shifted, not turned). */
export interface Survey {
  files: SurfaceFile[];
  parts: PartSurvey[];
  triangles: number;
  vertices: number;
  bounds: Box;
  /** Length along travel, width across, height along up. */
  extents: { length: number; width: number; height: number };
  wettedArea: number;
  /** m³, signed by the divergence theorem; meaningful for a closed body. */
  volume: number;
  centroid: Vector3;
  /** Area of the union silhouette along the direction of travel, and its error. For a half body this is the half. */
  frontalArea: { value: number; error: number };
  unit: { value: LengthUnit; basis: string; certain: boolean };
  axes: { travel: SignedAxis; up: SignedAxis; basis: string; certain: boolean };
  topology: Topology;
  wheels: Wheel[];
  /** Distance of the mean front and rear axles along travel; null without two axles. */
  wheelbase: number | null;
  /**
   * Mirror symmetry about the vehicle's mid-plane: whole = the mirrored body meets itself; half = all of the body lies on one side
   * of a plane that it touches; none = neither. `deviation` in metres is the greatest mirror distance of a vertex.
   */
  symmetry: { kind: "whole" | "half" | "none"; plane: number; deviation: number };
  /**
   * Whether air gets into the inside through holes, and where, metres, file axes; holes narrower than `cell` count as closed. A
   * surface without open edges cannot leak; absent where there was nothing to look at.
   */
  leak?: Leak;
  findings: Finding[];
  verdict: "fit" | "fit-with-warnings" | "not-fit";
}
