import { settle } from "../history/settle.js";
import type { Settling } from "../history/settling.js";

export interface Targets {
  /** asked half-widths of the means of the drag and the lift coefficient */
  drag: number;
  lift: number;
  /** 0..1 */
  confidence: number;
}

export interface Watching {
  targets: Targets;
  /** Fewest rows that a mean is taken over before it may end a run. */
  minimumWindow: number;
  /** A test is made every so many rows. */
  testEvery: number;
}

export type Watched =
  | { kind: "going"; halfWidth: number | null; stillNeeded: number | null }
  | { kind: "settled"; halfWidth: number; reason: string }
  | { kind: "diverged"; reason: string }
  | { kind: "no-force"; reason: string };

/** A drag coefficient beyond this is no longer a solution; road vehicles lie below 2. */
const absurd = 1000;
/** The first iterations from a uniform start overshoot. */
const overshootRows = 10;
/** Rows of exact zeros after which no patch can have been found. */
const zeroRows = 20;

/** One coefficient and whether its mean is known as well as asked. */
interface Tested {
  met: boolean;
  settling: Settling;
}

/** Judges a coefficient history while it grows: a pure function of the rows but for remembering the last test. */
export class Watcher {
  private testedAt = 0;
  private metBefore = false;
  private last: { halfWidth: number | null; stillNeeded: number | null } = { halfWidth: null, stillNeeded: null };
  private seen = 0;

  constructor(private readonly watching: Watching) {}

  /**
   * `time`, `cd`, `cl`: equally long, one row per iteration. Ends a run only when both targets hold at two tests in a row: some histories
   * are calm for a while before they leave for good.
   */
  look(time: Float64Array, cd: Float64Array, cl: Float64Array): Watched {
    const flaw = this.flawOf(time, cd, cl);
    if (flaw) return flaw;
    if (cd.length < this.testedAt) this.testedAt = 0;
    if (cd.length < this.watching.minimumWindow || cd.length - this.testedAt < this.watching.testEvery)
      return { kind: "going", ...this.last };
    this.testedAt = cd.length;
    const result = testTargets(cd, cl, this.watching);
    this.last = { halfWidth: finite(result.drag.settling.halfWidth), stillNeeded: furthest(result.drag, result.lift) };
    const confirmed = result.met && this.metBefore;
    this.metBefore = result.met;
    return confirmed
      ? { kind: "settled", halfWidth: result.drag.settling.halfWidth, reason: result.reason }
      : { kind: "going", ...this.last };
  }

  private flawOf(time: Float64Array, cd: Float64Array, cl: Float64Array): Watched | null {
    const from = Math.min(this.seen, cd.length);
    this.seen = cd.length;
    for (let row = from; row < cd.length; row += 1) {
      if (!Number.isFinite(cd[row]!) || !Number.isFinite(cl[row]!))
        return { kind: "diverged", reason: `coefficients are not numbers from iteration ${time[row]}` };
      if (row >= overshootRows && Math.abs(cd[row]!) > absurd) {
        return { kind: "diverged", reason: `drag coefficient ${cd[row]!.toExponential(1)} at iteration ${time[row]}` };
      }
    }
    if (cd.length >= zeroRows && cd.every((value) => value === 0) && cl.every((value) => value === 0)) {
      return {
        kind: "no-force",
        reason: "all coefficients are exactly 0: no patch of the mesh matches the names in the function object",
      };
    }
    return null;
  }
}

export interface TargetTest {
  met: boolean;
  drag: Tested;
  lift: Tested;
  reason: string;
}

/** Are the means of drag and lift known to the asked half-widths, over a window that is long enough? */
export function testTargets(cd: Float64Array, cl: Float64Array, watching: Watching): TargetTest {
  const { targets } = watching;
  const drag = tested(cd, targets.drag, watching);
  const lift = tested(cl, targets.lift, watching);
  const said = (name: string, { settling }: Tested, target: number) =>
    Number.isFinite(settling.halfWidth)
      ? `${name} ${settling.mean.toFixed(4)} +- ${settling.halfWidth.toFixed(4)} (asked ${target})`
      : `${name} ${settling.verdict}`;
  const reason = `${said("cd", drag, targets.drag)}, ${said("cl", lift, targets.lift)} at ${Math.round(100 * targets.confidence)} %`;
  return { met: drag.met && lift.met, drag, lift, reason };
}

function tested(values: Float64Array, halfWidth: number, { targets, minimumWindow }: Watching): Tested {
  const settling = settle(values, { halfWidth, confidence: targets.confidence });
  // Both verdicts mean that the half-width is within the target.
  const usable = settling.verdict === "settled" || settling.verdict === "oscillating";
  return { settling, met: usable && settling.rows >= minimumWindow };
}

const finite = (value: number): number | null => (Number.isFinite(value) ? value : null);

/** The larger of what the two still need; null when one of them cannot say. */
function furthest(drag: Tested, lift: Tested): number | null {
  const needs = [drag, lift].filter(({ met }) => !met).map(({ settling }) => settling.stillNeeded);
  return needs.length === 0 ? 0 : needs.some((need) => need === null) ? null : Math.max(...(needs as number[]));
}
