import { type BodySection, bodySection } from "./body-section.js";
import { type Answer, answerOf, type ComparisonSection, comparisonSection } from "./comparison-section.js";
import { limitsOf } from "./limits.js";
import { type MeshSection, meshSection } from "./mesh-section.js";
import { partMatrix } from "./part-matrix.js";
import { type Provenance, provenanceOf } from "./provenance.js";
import type { ReportInput } from "./report-input.js";
import { namingOf } from "./run-names.js";
import { type RunSection, runSection, totalsTable } from "./run-section.js";
import { type SetUpSection, setUpSection } from "./set-up-section.js";
import { cautions, type Method, methods } from "./statements.js";
import type { TableModel } from "./table-model.js";

/** All that the page shows, as plain data. Texts are not escaped; the page escapes every one of them. */
export interface ReportModel {
  title: string;
  question: string | null;
  /** Why results are not of a run made here; empty when they are. */
  recorded: string[];
  answers: Answer[];
  /** What limits the answers, the gravest first. */
  limits: string[];
  comparisons: ComparisonSection[];
  /** The whole vehicle, one column per run. */
  totals: TableModel;
  /** Drag by part and run; null without parts. */
  matrix: TableModel | null;
  bodies: BodySection | null;
  runs: RunSection[];
  setUp: SetUpSection;
  mesh: MeshSection;
  methods: Method[];
  cautions: string[];
  provenance: Provenance[];
  toolVersion: string;
}

/** The page's data from runs, comparisons and bodies. Pure: what it needs of files was read before. */
export function reportModel(input: ReportInput): ReportModel {
  const { title, question, runs, comparisons, bodies, toolVersion } = input;
  const naming = namingOf(runs);
  const drawn = bodySection(bodies, runs, comparisons, naming);
  return {
    title,
    question,
    recorded: [...new Set(runs.flatMap(({ ledger }) => (ledger.recorded ? [ledger.recorded] : [])))],
    answers: comparisons.map((comparison) => answerOf(comparison, naming)),
    limits: limitsOf(comparisons, runs, naming),
    comparisons: comparisons.map((comparison) => comparisonSection(comparison, runs, naming)),
    totals: totalsTable(runs, naming),
    matrix: partMatrix(runs, naming, drawn),
    bodies: drawn,
    runs: runs.map((run) => runSection(run, naming)),
    setUp: setUpSection(runs, naming),
    mesh: meshSection(runs, naming),
    methods,
    cautions,
    provenance: runs.map((run) => provenanceOf(run, naming)),
    toolVersion,
  };
}
