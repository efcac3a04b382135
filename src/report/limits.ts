import type { Comparison } from "../compare/comparison.js";
import type { Finding } from "../finding.js";
import { counts, number, typesetSentence } from "./figures.js";
import type { ReportedRun } from "./report-input.js";
import type { Naming } from "./run-names.js";

/** Share of the layers asked for by which two meshes may differ on a part before the mesh is likely to show in the difference. */
const layerShare = 0.05;

/**
 * What limits the answers, each said once, the gravest first: findings of the comparisons and of the runs that are errors or warnings,
 * what the pairs can resolve, layers that differ between the meshes.
 */
export function limitsOf(comparisons: Comparison[], runs: ReportedRun[], naming: Naming): string[] {
  const said = new Map<string, { finding: Finding; about: string[] }>();
  const say = (finding: Finding, about: string) => {
    if (finding.severity === "note") return;
    const key = `${finding.part ?? ""}\n${finding.message}`;
    const known = said.get(key);
    if (known) known.about.push(about);
    else said.set(key, { finding, about: [about] });
  };
  const pair = ({ a, b }: Comparison) => `${naming.run(b.path)} minus ${naming.run(a.path)}`;
  for (const comparison of comparisons) for (const finding of comparison.findings) say(finding, pair(comparison));
  for (const { ledger } of runs) for (const finding of ledger.findings) say(finding, naming.run(ledger.path));
  const ordered = [...said.values()].sort((one, other) => weight(one.finding) - weight(other.finding));
  return [
    ...ordered.map(({ finding: { part, message, remedy }, about }) => {
      // Names are left out where the sentence holds for all there is.
      const general = [comparisons.length, runs.length].includes(about.length) && about.length > 0;
      const of = general ? "" : `${about.join(", ")}: `;
      return typesetSentence([`${of}${part === null ? "" : `${part}: `}${message}`, remedy].filter(Boolean).join(" "));
    }),
    ...resolvable(comparisons, naming),
    ...comparisons.flatMap((comparison) => layerLimits(comparison, runs, comparisons.length > 1 ? `${pair(comparison)}: ` : "")),
  ];
}

function resolvable(comparisons: Comparison[], naming: Naming): string[] {
  const known = comparisons.filter(({ smallestResolvable }) => smallestResolvable !== null);
  if (known.length === 0) return [];
  const [first] = known as [Comparison];
  const size = ({ smallestResolvable }: Comparison) => `${number(counts(smallestResolvable!), 1)} counts`;
  const each = known.map((comparison) => `${size(comparison)} for ${naming.run(comparison.b.path)}`);
  return [
    `Smaller drag differences than ${known.length === 1 ? size(first) : each.join(", ")} cannot be told from the noise of the histories.`,
  ];
}

const weight = ({ severity }: Finding): number => (severity === "error" ? 0 : 1);

/** Layers that cover a part differently in A and B make a difference that is not one of shape. */
function layerLimits({ a, b }: Comparison, runs: ReportedRun[], pair: string): string[] {
  const meshOf = (path: string) => runs.find(({ ledger }) => ledger.path === path)?.mesh?.parts ?? [];
  const other = new Map(meshOf(b.path).map((each) => [each.part, each]));
  const parts = meshOf(a.path).filter(({ part, layers, layersAsked }) => {
    const match = other.get(part);
    if (!match || layers === null || match.layers === null || !layersAsked) return false;
    return Math.abs(layers - match.layers) > layerShare * layersAsked;
  });
  if (parts.length === 0) return [];
  const list = parts.map(({ part, layers }) => `${part} ${number(layers, 2)} and ${number(other.get(part)!.layers, 2)}`);
  return [
    `${pair}the wall layers of the two meshes differ by more than 5 % of what was asked (mean number in A and B: ${list.join("; ")}), so part of the difference there may be one of mesh.`,
  ];
}
