import { kilometresPerHour } from "./figures.js";
import type { ReportedRun } from "./report-input.js";

/** What runs are called on the page, by the path of their case. */
export interface Naming {
  /** unique within the page: the variant, with its condition and its folder where that is needed */
  run(path: string): string;
  /** `108 km/h`; "" when it is not known */
  condition(path: string): string;
  /** Runs differ in condition, so that it must be said. */
  severalConditions: boolean;
}

/** The shortest names that keep the runs apart. */
export function namingOf(runs: ReportedRun[]): Naming {
  const conditions = new Map(runs.map((run) => [run.ledger.path, conditionText(run)]));
  const severalConditions = new Set(conditions.values()).size > 1;
  const names = new Map<string, string>();
  for (const { ledger } of runs) {
    const condition = conditions.get(ledger.path);
    names.set(ledger.path, severalConditions && condition ? `${ledger.variant}, ${condition}` : ledger.variant);
  }
  const shared = [...names.values()].filter((name, index, all) => all.indexOf(name) !== index);
  for (const { ledger, origin } of runs) {
    const name = names.get(ledger.path)!;
    if (shared.includes(name)) names.set(ledger.path, `${name} (${origin.path})`);
  }
  return {
    run: (path) => names.get(path) ?? path,
    condition: (path) => conditions.get(path) ?? "",
    severalConditions,
  };
}

function conditionText({ ledger, condition }: ReportedRun): string {
  const speed = condition?.speed ?? ledger.reference.speed;
  if (speed === null || speed === undefined) return ledger.condition;
  const yaw = condition && condition.yaw !== 0 ? `, yaw ${Number(((180 / Math.PI) * condition.yaw).toFixed(1))}°` : "";
  return `${kilometresPerHour(speed)}${yaw}`;
}
