/** What happens while cases run, as data: printed as progress, or written as NDJSON. */
export type RunEvent =
  | { event: "case-start"; case: string; steps: string[] }
  | { event: "step-start"; case: string; step: string }
  | { event: "step-end"; case: string; step: string; seconds: number; skipped: boolean }
  | {
      event: "iteration";
      case: string;
      /** of the ladder, such as `ladder/1`, when it is not the case's own grid that is solved */
      rung?: string;
      iteration: number;
      most: number;
      /** latest drag coefficient of the whole vehicle; null before the first row */
      cd: number | null;
      /** half-width of its mean so far; null while unknown */
      halfWidth: number | null;
      secondsLeft: number | null;
    }
  | { event: "remark"; case: string; message: string }
  | { event: "case-end"; case: string; state: CaseState; seconds: number; reason: string };

export type CaseState =
  | "prepared"
  | "meshing"
  | "meshed"
  | "solving"
  | "settled"
  | "stopped-at-limit"
  | "diverged"
  | "failed"
  | "interrupted";

export interface CaseOutcome {
  path: string;
  state: CaseState;
  iterations: number;
  settled: boolean;
  seconds: number;
  /** Why it ended like this; for a failed step the step, its log and the cause found there. */
  reason: string;
}
