import { grouped, number } from "./figures.js";
import type { MeshSummary, PartMesh, ReportedRun } from "./report-input.js";
import type { Naming } from "./run-names.js";
import { cell, numeric, type Row, type TableModel } from "./table-model.js";

/** The meshes side by side; null tables where no log was found. */
export interface MeshSection {
  whole: TableModel | null;
  layers: TableModel | null;
  yPlus: TableModel | null;
  /** failed checks, by run */
  failures: string[];
}

export function meshSection(runs: ReportedRun[], naming: Naming): MeshSection {
  const meshed = runs.filter((run): run is ReportedRun & { mesh: MeshSummary } => run.mesh !== null);
  const columns = meshed.map(({ ledger }) => numeric(naming.run(ledger.path)));
  const parts = [...new Set(meshed.flatMap(({ mesh }) => mesh.parts.map(({ part }) => part)))];
  const partTable = (
    caption: string,
    known: (mesh: PartMesh) => boolean,
    row: (mesh: PartMesh) => [string, string],
  ): TableModel | null => {
    const rows = parts.map((part): Row => {
      const cells = meshed.map(({ mesh }) => {
        const found = mesh.parts.find((each) => each.part === part);
        return found && known(found) ? cell(...row(found)) : cell("–");
      });
      return { head: part, part, cells };
    });
    if (rows.every(({ cells }) => cells.every(({ text }) => text === "–"))) return null;
    return { caption, corner: "part", columns, groups: [{ title: null, rows }] };
  };
  return {
    whole: meshed.length > 0 ? wholeTable(meshed, columns) : null,
    layers: partTable(
      "Wall layers by part: mean number over the faces, and what was asked",
      ({ layers }) => layers !== null,
      ({ layers, layersAsked, faces }) => [
        `${number(layers, 2)}${layersAsked === null ? "" : ` of ${layersAsked}`}`,
        faces === null ? "" : `${grouped(faces)} faces`,
      ],
    ),
    yPlus: partTable(
      "y+ by part: mean, and least to most",
      ({ yPlus }) => yPlus !== null,
      ({ yPlus }) => [number(yPlus!.mean, 0), `${number(yPlus!.least, 0)} to ${number(yPlus!.most, 0)}`],
    ),
    failures: meshed.flatMap(({ ledger, mesh }) => mesh.failures.map((text) => `${naming.run(ledger.path)}: ${text}`)),
  };
}

function wholeTable(meshed: (ReportedRun & { mesh: MeshSummary })[], columns: TableModel["columns"]): TableModel {
  const row = (head: string, of: (mesh: MeshSummary) => string): Row => ({
    head,
    cells: meshed.map(({ mesh }) => cell(of(mesh))),
  });
  return {
    caption: "The meshes",
    corner: "mesh",
    columns,
    groups: [
      {
        title: null,
        rows: [
          row("cells", ({ cells }) => (cells === null ? "–" : grouped(cells))),
          row("mesh check", ({ ok, failures }) =>
            ok === null ? "no result in its log" : ok ? "no failed check" : `${failures.length} failed`,
          ),
          row("greatest non-orthogonality, degrees", ({ maxNonOrthogonality }) => number(maxNonOrthogonality, 1)),
          row("greatest skewness", ({ maxSkewness }) => number(maxSkewness, 2)),
        ],
      },
    ],
  };
}
