import type { Finding } from "../finding.js";
import { type Cavities, enclosedCavities } from "./air/cavities.js";
import { type Cut, floodAir } from "./air/flood.js";
import { type KeepPointProof, provesKeepPoint } from "./air/keep-point.js";
import { type Leak, leakOf } from "./air/leak.js";
import { cavityFindings, keepPointFindings, leakFindings } from "./air/leak-findings.js";
import { type CellFit, cellFitOf } from "./checks/cell-fit.js";
import { gapFindings, inwardFindings, sheetFindings, thicknessFindings } from "./checks/fit-findings.js";
import { metresPer, vehicleAxes } from "./place.js";
import { type SurfaceMesh, surfaceMesh } from "./surface-mesh.js";
import type { Survey } from "./survey.js";
import { topologyOf } from "./topology.js";
import type { Part, TriangleSet } from "./triangle-set.js";
import { type TriangleTree, triangleTree } from "./triangle-tree.js";
import type { Box, Vector3 } from "./vector.js";

/** What a body is to a mesh of given cells. Mesh unit and axes; findings in metres. */
export interface FitAtCell {
  /** The leak test at the surface cell, and at half of it. Empty where there was nothing to test, or it was left out. */
  leaks: Leak[];
  /** Closed spaces at the surface cell; null where the leak test was not made. */
  cavities: Cavities | null;
  cells: CellFit;
  /** Whether a mesh that keeps what hangs together with the keep-point keeps the air about the body; null where none was given or the leak test was not made. */
  keepPoint: KeepPointProof | null;
  findings: Finding[];
}

/** A body as these checks want it. */
export interface BodyToFit {
  mesh: SurfaceMesh;
  bounds: Box;
  parts: Part[];
  /** 1 per part: open edges */
  openEdges: Uint32Array;
  /** whether any edge is open, of more than two triangles, or between triangles that face opposite ways: only there can air get in */
  mayLeak: boolean;
  /** the plane of a half body, and whether it is open there; null for a whole one */
  cut: (Cut & { open: boolean }) | null;
  /** metres per mesh unit */
  scale: number;
  /** of the mesh, where it is there already */
  tree?: TriangleTree;
}

/**
 * Checks a body against the cells it is to be meshed with: leaks at that size and at half of it, air that is closed off, thin parts,
 * narrow gaps, sheets.
 *
 * @param cell surface cell of the mesh, mesh unit
 * @param cellOfPart 1 per part: its own, where parts differ
 * @param keepPoint of the mesh, mesh unit and axes: it is proved by the same flood
 * @param leakTest false leaves out the flood, which takes longest
 */
export function fitAtCell(
  { mesh, bounds, parts, openEdges, mayLeak, cut, scale, tree = triangleTree(mesh) }: BodyToFit,
  cell: number,
  { cellOfPart, leakTest = true, keepPoint }: { cellOfPart?: ArrayLike<number>; leakTest?: boolean; keepPoint?: Vector3 } = {},
): FitAtCell {
  const cells = cellFitOf(mesh, openEdges, cellOfPart ?? new Float64Array(parts.length).fill(cell), cut?.open ? cut : null, tree);
  const findings = [
    ...sheetFindings(cells.open.sheets, parts, scale),
    ...inwardFindings(cells.open.inward, parts, scale),
    ...thicknessFindings(cells.thickness, parts, scale),
    ...gapFindings(cells.gaps, parts, scale),
  ];
  if (!leakTest || mesh.partOf.length === 0) return { leaks: [], cavities: null, cells, keepPoint: null, findings };
  const leaksAt = (edge: number): Leak[] => {
    const fine = floodAir(mesh, bounds, cut, edge, { tree });
    return fine === null ? [] : [leakOf(fine, mesh)];
  };
  const flood = floodAir(mesh, bounds, cut, cell, { tree });
  if (flood === null)
    return { leaks: [], cavities: null, cells, keepPoint: null, findings: [...leakFindings(null, scale), ...findings] };
  const leak = leakOf(flood, mesh);
  const cavities = enclosedCavities(flood);
  const proof = keepPoint === undefined ? null : provesKeepPoint(flood, keepPoint);
  // What lets a cell through lets half of it through, and where nothing is open nothing passes: the fine flood is the dearest.
  const finer = leak.reached || !mayLeak ? [{ cell: cell / 2, reached: leak.reached, holes: leak.holes }] : leaksAt(cell / 2);
  return {
    leaks: [leak, ...finer],
    cavities,
    cells,
    keepPoint: proof,
    findings: [
      ...(keepPoint === undefined || proof === null ? [] : keepPointFindings(keepPoint, proof, scale)),
      ...leaksInWords(leak, finer, scale),
      ...cavityFindings(cavities, scale),
      ...findings,
    ],
  };
}

/**
 * The same for a body that has been surveyed without cells, once they are known. Cells in metres.
 *
 * @param cellOf edge of the cells at each part, by name of its patch; the surface cell where it has none
 * @param keepPoint of the mesh, metres, file axes
 */
export function fitSurveyed(
  set: TriangleSet,
  { unit, symmetry, axes, topology }: Survey,
  cell: number,
  cellOf: ReadonlyMap<string, number> = new Map(),
  keepPoint?: Vector3,
): FitAtCell {
  const mesh = surfaceMesh(set);
  const tree = triangleTree(mesh);
  const scale = metresPer[unit.value];
  const open = topologyOf(mesh, set.parts.length).open.perPart;
  const axis = vehicleAxes(axes).right.findIndex((value) => value !== 0);
  return fitAtCell(
    {
      mesh,
      bounds: { min: [tree.low[0], tree.low[1], tree.low[2]], max: [tree.high[0], tree.high[1], tree.high[2]] },
      parts: set.parts,
      openEdges: open,
      mayLeak: topology.openEdges + topology.nonManifoldEdges + topology.flippedEdges > 0,
      cut: symmetry.kind === "half" ? { axis, plane: symmetry.plane / scale, open: topology.openEdges > 0 } : null,
      scale,
      tree,
    },
    cell / scale,
    {
      cellOfPart: set.parts.map(({ patch }) => (cellOf.get(patch) ?? cell) / scale),
      ...(keepPoint !== undefined && { keepPoint: keepPoint.map((value) => value / scale) as Vector3 }),
    },
  );
}

/** What the half cell lets through is worth knowing only where the cell itself lets nothing through. */
function leaksInWords(leak: Leak, finer: Leak[], scale: number): Finding[] {
  const own = leakFindings(leak, scale);
  if (leak.reached) return own;
  return [
    ...own,
    ...finer
      .flatMap((half) => leakFindings(half, scale))
      .map(
        (found): Finding =>
          found.code === "leak"
            ? {
                ...found,
                code: "leak-at-half-cell",
                severity: "note",
                remedy: `${found.remedy} At the cell itself it counts as closed.`,
              }
            : found,
      ),
  ];
}
