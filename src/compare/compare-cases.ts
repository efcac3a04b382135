import type { CaseRecord } from "../ledger/case-record.js";
import { compareRuns } from "./compare.js";
import type { Comparison } from "./comparison.js";

/** The first case of each condition against every later one of the same condition. Two cases are compared whatever their conditions. */
export function compareCases(records: CaseRecord[]): Comparison[] {
  if (records.length === 2) return [compareRuns(records[0], records[1])];
  const firsts = new Map<string, CaseRecord>();
  const comparisons: Comparison[] = [];
  for (const record of records) {
    const first = firsts.get(record.condition);
    if (first) comparisons.push(compareRuns(first, record));
    else firsts.set(record.condition, record);
  }
  return comparisons;
}
