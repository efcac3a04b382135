import { inputProblem } from "../../errors.js";
import { edgeRings, NO_EDGE, nextInTriangle } from "../edges.js";
import type { SurfaceMesh } from "../surface-mesh.js";
import { across, type Vector3 } from "../vector.js";
import { weld } from "../weld.js";
import { type Pieces, sweep } from "./sweep.js";

/** Where so many edges, and so large a share of all, do not cancel out, the triangles do not share vertices as they should. */
const MANY_EDGES = 50_000;
const LOOSE_SHARE = 0.1;
/** Step of the grid, as a share of the greatest extent, that such vertices are moved to: 17 micrometres on a car. */
const SNAP = 2 ** -18;

export interface Silhouette {
  /** Area of the union of all triangles seen along the direction; the mesh's unit squared. */
  area: number;
  /** Bound of what the rounding of the coordinates (to 32 bits, and see below) can change about it. Facets of a curved body are not in it. */
  error: number;
  /** Length of the outline, holes included. Never too short: of edges along the lines of the sweep, hidden ones are counted too. */
  outline: number;
  /** Edges that were swept, and the places where they cross. */
  edges: number;
  crossings: number;
}

/**
 * Exact area of the union silhouette of a surface along a direction (any length but zero): what a parallel beam is cut out by. Correct
 * for overlapping, nested and hidden parts, and for surfaces that are open, not manifold or not oriented.
 *
 * Turn every triangle so that it faces the viewer, and add up their outlines as chains of directed edges: the number of times the
 * sum winds about a point is the number of triangles that cover it. Edges between two triangles that face the same way cancel out;
 * what remains are the silhouette edges (twice), open edges (once) and the like. Their plane is swept for the area they wind about.
 *
 * Of a large surface whose triangles hardly share vertices too many edges remain; its vertices are moved to a grid of 4 millionths of
 * the body's extent first, and the error says so.
 */
export function silhouette(mesh: Pick<SurfaceMesh, "vertices" | "corners" | "ring">, direction: Vector3): Silhouette {
  return silhouettesOf(mesh, unit(direction), null, 1)[0];
}

/**
 * The silhouette of each part by itself, seen along a direction, as `silhouette` of that part's triangles alone: what hides it or
 * lies behind it does not matter, so the parts' areas add up to more than that of the body where they cover each other.
 */
export function partSilhouettes(
  mesh: Pick<SurfaceMesh, "vertices" | "corners" | "ring" | "partOf">,
  parts: number,
  direction: Vector3,
): Silhouette[] {
  return silhouettesOf(mesh, unit(direction), mesh.partOf, parts);
}

function silhouettesOf(
  mesh: Pick<SurfaceMesh, "vertices" | "corners" | "ring">,
  along: Vector3,
  groupOf: Uint16Array | null,
  groups: number,
): Silhouette[] {
  const rounding = roundingOf(mesh.vertices);
  const most = LOOSE_SHARE * mesh.ring.length;
  const exact = silhouetteEdges(mesh, along, groupOf, groups);
  const edges = exact.reduce((sum, { weight }) => sum + weight.length, 0);
  const step = edges > MANY_EDGES && edges > most ? SNAP * extentOf(mesh.vertices) : 0;
  const pieces = step > 0 ? silhouetteEdges(snapped(mesh, step), along, groupOf, groups) : exact;
  return pieces.map((own) => {
    const { area, border, crossings } = sweep(own);
    const outline = border + levelLength(own);
    return { area, error: outline * (rounding + (Math.sqrt(3) / 2) * step), outline, edges: own.weight.length, crossings };
  });
}

/** Vertices moved to a grid of the given step, so that those nearly alike become one. */
function snapped(
  mesh: Pick<SurfaceMesh, "vertices" | "corners">,
  step: number,
): Pick<SurfaceMesh, "vertices" | "corners" | "ring"> {
  const { vertices, corners: vertexOf } = weld(mesh.vertices.map((value) => Math.round(value / step) * step));
  const corners = mesh.corners.map((vertex) => vertexOf[vertex]);
  return { vertices, corners, ring: edgeRings(corners, vertices.length / 3) };
}

function extentOf(vertices: Float32Array): number {
  const low = [Infinity, Infinity, Infinity];
  const high = [-Infinity, -Infinity, -Infinity];
  for (let at = 0; at < vertices.length; at++) {
    const axis = at % 3;
    if (vertices[at] < low[axis]) low[axis] = vertices[at];
    if (vertices[at] > high[axis]) high[axis] = vertices[at];
  }
  return Math.max(...high.map((value, axis) => value - low[axis]));
}

function unit(direction: Vector3): Vector3 {
  const length = Math.hypot(...direction);
  if (!(length > 0 && Number.isFinite(length)))
    throw inputProblem({
      code: "direction-zero",
      message: `The direction of view (${direction.join(" ")}) has no length.`,
      remedy: "Give a vector with a length, such as 1 0 0.",
    });
  return [direction[0] / length, direction[1] / length, direction[2] / length];
}

/** Length of the pieces that the sweep passes over because they lie level; those upon each other count once. */
function levelLength({ ax, ay, bx, by }: Pieces): number {
  const level: { height: number; from: number; to: number }[] = [];
  for (let k = 0; k < ay.length; k++)
    if (ay[k] === by[k]) level.push({ height: ay[k], from: Math.min(ax[k], bx[k]), to: Math.max(ax[k], bx[k]) });
  level.sort((a, b) => a.height - b.height || a.from - b.from);
  let length = 0;
  let height = Number.NaN;
  let end = 0;
  for (const piece of level) {
    const from = piece.height === height ? Math.max(piece.from, end) : piece.from;
    if (piece.to > from) length += piece.to - from;
    end = piece.height === height ? Math.max(end, piece.to) : piece.to;
    height = piece.height;
  }
  return length;
}

/** Directed edges of one group, by vertex number. */
interface Edges {
  from: number[];
  to: number[];
  weight: number[];
}

/**
 * The edges of each group of triangles that do not cancel out within the group (null: all triangles are one group), in a plane across
 * the direction whose second axis runs along the longer side of the group's silhouette.
 */
function silhouetteEdges(
  mesh: Pick<SurfaceMesh, "vertices" | "corners" | "ring">,
  along: Vector3,
  groupOf: Uint16Array | null,
  groups: number,
): Pieces[] {
  const { corners, ring } = mesh;
  const facing = facingOf(mesh, along);
  const seen = new Uint8Array(ring.length);
  const found = Array.from({ length: groups }, (): Edges => ({ from: [], to: [], weight: [] }));
  const add = (group: number, h: number, weight: number): void => {
    if (weight === 0) return;
    const { from, to, weight: weights } = found[group];
    from.push(corners[h]);
    to.push(corners[nextInTriangle(h)]);
    weights.push(weight);
  };
  for (let h = 0, t = 0; h < ring.length; t++) {
    const group = groupOf === null ? 0 : groupOf[t];
    for (let end = h + 3; h < end; h++) {
      const other = ring[h];
      if (other === NO_EDGE) continue;
      if (other === h) add(group, h, facing[t]);
      else if (ring[other] === h) {
        // The common case, two triangles: met at the lower half-edge.
        if (other < h) continue;
        const triangle = (other / 3) | 0;
        if (groupOf !== null && groupOf[triangle] !== group) {
          add(group, h, facing[t]);
          add(groupOf[triangle], other, facing[triangle]);
        } else add(group, h, corners[other] === corners[h] ? facing[t] + facing[triangle] : facing[t] - facing[triangle]);
      } else if (seen[h] === 0) for (const [each, sum] of ringSums(mesh, facing, groupOf, h, seen)) add(each, h, sum);
    }
  }
  return found.map((edges) => piecesOf(mesh.vertices, along, edges));
}

function piecesOf(vertices: Float32Array, along: Vector3, { from, to, weight }: Edges): Pieces {
  const { u, v, middle } = planeAcross(along, vertices, from);
  const at = (ids: number[], axis: Vector3, zero: number): Float64Array => {
    const values = new Float64Array(ids.length);
    for (let k = 0; k < ids.length; k++) {
      const id = 3 * ids[k];
      values[k] = vertices[id] * axis[0] + vertices[id + 1] * axis[1] + vertices[id + 2] * axis[2] - zero;
    }
    return values;
  };
  return {
    ax: at(from, u, middle[0]),
    ay: at(from, v, middle[1]),
    bx: at(to, u, middle[0]),
    by: at(to, v, middle[1]),
    weight: Int32Array.from(weight),
  };
}

/** 1 per triangle: 1 where the triangle's front is seen along the direction, -1 where its back is, 0 edge-on. */
function facingOf({ vertices, corners }: Pick<SurfaceMesh, "vertices" | "corners">, [dx, dy, dz]: Vector3): Int8Array {
  const facing = new Int8Array(corners.length / 3);
  for (let t = 0, h = 0; t < facing.length; t++, h += 3) {
    const a = 3 * corners[h];
    const b = 3 * corners[h + 1];
    const c = 3 * corners[h + 2];
    const ax = vertices[a];
    const ay = vertices[a + 1];
    const az = vertices[a + 2];
    const ux = vertices[b] - ax;
    const uy = vertices[b + 1] - ay;
    const uz = vertices[b + 2] - az;
    const vx = vertices[c] - ax;
    const vy = vertices[c + 1] - ay;
    const vz = vertices[c + 2] - az;
    const dot = dx * (uy * vz - uz * vy) + dy * (uz * vx - ux * vz) + dz * (ux * vy - uy * vx);
    facing[t] = dot < 0 ? 1 : dot > 0 ? -1 : 0;
  }
  return facing;
}

/**
 * The sums over an edge where three or more triangles meet, by group, in the direction of half-edge `h`, its lowest. Marks all
 * half-edges of the edge in `seen`.
 */
function ringSums(
  { corners, ring }: Pick<SurfaceMesh, "corners" | "ring">,
  facing: Int8Array,
  groupOf: Uint16Array | null,
  h: number,
  seen: Uint8Array,
): Map<number, number> {
  const sums = new Map<number, number>();
  let at = h;
  do {
    seen[at] = 1;
    const triangle = (at / 3) | 0;
    const group = groupOf === null ? 0 : groupOf[triangle];
    sums.set(group, (sums.get(group) ?? 0) + (corners[at] === corners[h] ? facing[triangle] : -facing[triangle]));
    at = ring[at];
  } while (at !== h);
  return sums;
}

interface Plane {
  u: Vector3;
  v: Vector3;
  /** Middle of the vertices along u and v: taken away, so that a body far from the origin loses no digits. */
  middle: [number, number];
}

/** A plane across the direction; along an axis of the coordinates it keeps their values. */
function planeAcross(along: Vector3, vertices: Float32Array, ids: number[]): Plane {
  const { u, v } = across(along);
  const ranges = [u, v].map((axis) => {
    let low = Infinity;
    let high = -Infinity;
    for (const id of ids) {
      const value = vertices[3 * id] * axis[0] + vertices[3 * id + 1] * axis[1] + vertices[3 * id + 2] * axis[2];
      low = Math.min(low, value);
      high = Math.max(high, value);
    }
    return { extent: high - low, middle: ids.length > 0 ? (low + high) / 2 : 0 };
  });
  return ranges[0].extent > ranges[1].extent
    ? { u: v, v: u, middle: [ranges[1].middle, ranges[0].middle] }
    : { u, v, middle: [ranges[0].middle, ranges[1].middle] };
}

/**
 * How far the rounding of three coordinates to 32 bits can move a vertex in any one direction: √3 times half the spacing of float32
 * numbers at the largest coordinate. Times the outline, this bounds the change of the area to first order.
 */
function roundingOf(vertices: Float32Array): number {
  let largest = 0;
  for (let k = 0; k < vertices.length; k++) {
    const size = Math.abs(vertices[k]);
    if (size > largest) largest = size;
  }
  return largest > 0 ? Math.sqrt(3) * 2 ** (Math.floor(Math.log2(largest)) - 24) : 0;
}
