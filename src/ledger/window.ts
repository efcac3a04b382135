import { settle } from "../history/settle.js";
import type { Settling } from "../history/settling.js";
import type { CaseRecord } from "./case-record.js";

/** The rows that all entries of a ledger are averaged over: [first, first + rows). */
export interface LedgerWindow {
  first: number;
  rows: number;
  from: number;
  to: number;
  drag: Settling;
  lift: Settling;
}

const usable = (settling: Settling): boolean => settling.verdict === "settled" || settling.verdict === "oscillating";

/**
 * One window for the whole ledger, so that means of parts add up to the mean of the whole: it begins where both total drag and total lift
 * are past their start-up, and holds the last rows, whole periods of the drag where it repeats.
 */
export function windowOf(record: CaseRecord): LedgerWindow {
  const { whole, card } = record;
  const confidence = 0.95;
  const drag = settle(whole.cd, { confidence, ...(card ? { halfWidth: card.stop.drag } : {}) });
  const lift = settle(whole.cl, { confidence, ...(card ? { halfWidth: card.stop.lift } : {}) });
  const total = whole.cd.length;
  // A history that has not settled may still be in its start-up: the last half is the least that must be cut to.
  let first = Math.max(drag.firstRow, usable(lift) ? lift.firstRow : 0, usable(drag) ? 0 : Math.floor(total / 2));
  if (first >= total) first = 0;
  if (drag.period !== null) first = total - Math.max(1, Math.round(Math.floor((total - first) / drag.period) * drag.period));
  first = Math.min(Math.max(0, first), Math.max(0, total - 1));
  return { first, rows: total - first, from: whole.time[first], to: whole.time[total - 1], drag, lift };
}
