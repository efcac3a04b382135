import type { Finding } from "../finding.js";
import type { Leak } from "./air/leak.js";
import type { PartTopology } from "./topology.js";
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

/** An area seen along a direction, and what the rounding of the coordinates can change about it. m² */
export interface ProjectedArea {
  value: number;
  error: number;
}

export interface PartSurvey {
  name: string;
  patch: string;
  triangles: number;
  /** m² */
  area: number;
  /** m³, signed by the divergence theorem; meaningful where the part is closed by itself. */
  volume: number;
  /** metres, file axes: of the surface */
  centroid: Vector3;
  /** metres, file axes */
  bounds: Box;
  /** m²: area of the union silhouette that this part owns when seen along the flow (the nearest part wins); the parts add up to the whole. */
  frontalVisible: number;
  /** m²: the part's own silhouette along the flow, as if it were alone; the parts add up to more than the whole where they cover each other. */
  frontalAlone: number;
  /** Edges and triangles of this part in the whole body, and its open edges if it were alone. */
  topology: PartTopology;
}

/** Triangles that hang together by edges. Metres, file axes. */
export interface ShellSurvey {
  triangles: number;
  /** names of the parts that it belongs to */
  parts: string[];
  closed: boolean;
  /** m² */
  area: number;
  /** m³, signed; meaningless where the shell is open */
  volume: number;
  centroid: Vector3;
  bounds: Box;
}

export interface Topology {
  openEdges: number;
  nonManifoldEdges: number;
  flippedEdges: number;
  degenerate: number;
  duplicate: number;
  shells: number;
  /** Pairs of triangles of one shell that pass through each other; null where the check was left out. Shells may overlap. */
  selfIntersections: number | null;
  /** Borders of open edges, the longest first, a hundred at most. Metres, file axes. */
  borders: BorderSurvey[];
  borderCount: number;
}

/** Open edges that hang together: the rim of a hole or of a sheet. Metres, file axes. */
export interface BorderSurvey {
  edges: number;
  length: number;
  /** diagonal of its box, and its middle */
  span: number;
  centre: Vector3;
  /** runs back into itself */
  closed: boolean;
  /** names of the parts along it */
  parts: string[];
}

/** How the body goes with the cells of a mesh. Metres, m², m³, file axes. */
export interface CellFitSurvey {
  /** edge of the surface cells */
  cell: number;
  /** the leak test at that cell and at half of it; empty where it was left out or had nothing to look at */
  leaks: Leak[];
  /** closed spaces that the cells cannot get into: the body's own insides, and air between parts; null without the leak test */
  enclosed: { inside: { count: number; volume: number }; air: { count: number; volume: number } } | null;
  /** parts thinner than two cells: share of their area, least and median thickness */
  thin: { part: string; share: number; least: number; median: number; cell: number; place: Vector3 }[];
  /** gaps narrower than two cells: area on both sides, least and median width */
  gaps: { parts: [string, string]; area: number; least: number; median: number; cell: number; place: Vector3 }[];
  /** open parts with air on both sides */
  sheets: { part: string; openEdges: number; exposed: number; place: Vector3 }[];
}

/** One entry per wheel and part: tyre and rim of one wheel have the same centre, axis, radius and width. */
export interface Wheel {
  part: string;
  /** which wheel it is: front-left, rear-right, axle-2-left; without a side for a wheel in the middle */
  position: string;
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
  /** metres: height of the axle above the ground */
  axleHeight: number;
  /** metres: from the ground to the wheel's lowest point */
  gap: number;
  /** Where the wheel is within a millimetre of the ground: metres and m², grooves included; null where it is nowhere. */
  contact: { centre: Vector3; length: number; width: number; area: number } | null;
}

/** How the body stands on the ground, which is at its lowest point. Metres. */
export interface StanceSurvey {
  /** coordinate of the ground on the file's up axis */
  ground: number;
  /** between the outermost wheels of the first and last axle; null where an axle has but one */
  track: { front: number | null; rear: number | null };
  /** from the first axle to the foremost point, from the last to the rearmost; null without two axles */
  overhangs: { front: number; rear: number } | null;
  /** the lowest point that is no wheel's, above the ground */
  clearance: { height: number; place: Vector3; part: string } | null;
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
  frontalArea: ProjectedArea;
  /** Areas of the union silhouette seen from the side and from above; of a half body, of the half. */
  sideArea: ProjectedArea;
  planArea: ProjectedArea;
  /** Frontal areas across the wind at the angles of yaw that were asked for, of the whole vehicle. Radians, positive with wind from the left. */
  yawed: ({ yaw: number } & ProjectedArea)[];
  /** What the whole vehicle has, for a half body (twice the half, a lid on the cut left out); null for any other. */
  doubled: { frontalArea: number; planArea: number; wettedArea: number; volume: number } | null;
  /** The largest shells, most triangles first, a hundred at most; `topology.shells` counts all. */
  shells: ShellSurvey[];
  unit: { value: LengthUnit; basis: string; certain: boolean };
  axes: { travel: SignedAxis; up: SignedAxis; basis: string; certain: boolean };
  topology: Topology;
  wheels: Wheel[];
  /** Distance of the mean front and rear axles along travel; null without two axles. */
  wheelbase: number | null;
  stance: StanceSurvey;
  /**
   * Mirror symmetry about the vehicle's mid-plane: whole = the mirrored body meets itself; half = all of the body lies on one side
   * of a plane that it touches; none = neither. `deviation` in metres is the greatest mirror distance of a vertex.
   */
  symmetry: { kind: "whole" | "half" | "none"; plane: number; deviation: number };
  /**
   * Whether air gets into the inside through holes, and where, metres, file axes; holes narrower than `cell` count as closed. The first
   * of `fit.leaks`; absent where there was nothing to look at.
   */
  leak?: Leak;
  /** Null where no cell was wanted. */
  fit: CellFitSurvey | null;
  /** Triangles more than a thousand times as long as high, and the worst of them. */
  slivers: { count: number; worst: number };
  /** Area of faces that lie on others, in pairs that face the same way and opposite ways; null where the check was left out. */
  coincident: { same: number; opposite: number } | null;
  /** Pairs of parts that reach into each other, with the pairs of triangles that cross; null where the check was left out. */
  overlaps: { parts: [string, string]; pairs: number; place: Vector3 }[] | null;
  findings: Finding[];
  verdict: "fit" | "fit-with-warnings" | "not-fit";
}
