import { MultiBar, type SingleBar } from "cli-progress";
import { duration, fixed } from "../../src/number-text.js";
import type { RunEvent } from "../../src/run/events.js";
import type { Printer } from "./printer.js";

/** Shows the events of a run: one bar per case on a terminal, one plain line per step and now and then per iteration elsewhere. */
export interface Progress {
  show(event: RunEvent): void;
  end(): void;
}

export function progress(print: Printer): Progress {
  if (print.quiet) return { show() {}, end() {} };
  return print.live ? barProgress(print) : lineProgress(print);
}

const label = (path: string): string => path.split("/").at(-1) ?? path;

/** A half-width as large as the mean itself tells nothing yet. */
const tellingWidth = (cd: number, halfWidth: number | null): string =>
  halfWidth === null || halfWidth > Math.abs(cd) ? "" : ` ± ${fixed(halfWidth, 4)}`;

function iterationText(event: Extract<RunEvent, { event: "iteration" }>): string {
  const cd = event.cd === null ? "" : `  Cd ${fixed(event.cd, 4)}${tellingWidth(event.cd, event.halfWidth)}`;
  const left = event.secondsLeft === null ? "" : `  ${duration(event.secondsLeft)} left at most`;
  const on = event.rung === undefined ? "" : `${event.rung} `;
  return `${on}iteration ${event.iteration} of ${event.most}${cd}${left}`;
}

function barProgress(print: Printer): Progress {
  const bars = new MultiBar({
    format: "{case}  [{bar}]  {text}",
    barsize: 24,
    barCompleteChar: "=",
    barIncompleteChar: " ",
    hideCursor: true,
    stream: print.errorStream as NodeJS.WritableStream,
  });
  const shown = new Map<string, SingleBar>();
  const names = new Map<string, { done: number; of: number }>();
  const bar = (path: string): SingleBar => {
    const known = shown.get(path);
    if (known) return known;
    const made = bars.create(1000, 0, { case: label(path), text: "" });
    shown.set(path, made);
    return made;
  };
  return {
    show(event) {
      const steps = names.get(event.case) ?? { done: 0, of: 1 };
      names.set(event.case, steps);
      if (event.event === "case-start") steps.of = Math.max(1, event.steps.length);
      if (event.event === "step-start") bar(event.case).update(Math.round((1000 * steps.done) / steps.of), { text: event.step });
      if (event.event === "step-end") steps.done += 1;
      if (event.event === "iteration")
        bar(event.case).update(Math.round((1000 * (steps.done + event.iteration / Math.max(1, event.most))) / steps.of), {
          text: iterationText(event),
        });
      if (event.event === "remark") bars.log(`${label(event.case)}: ${event.message}\n`);
      if (event.event === "case-end") {
        const ended = bar(event.case);
        ended.update(
          event.state === "settled" || event.state === "stopped-at-limit" ? 1000 : Math.round((1000 * steps.done) / steps.of),
          {
            text: `${event.state} after ${duration(event.seconds)}`,
          },
        );
        ended.stop();
      }
    },
    end: () => bars.stop(),
  };
}

/** Iterations are told at most every this many seconds when nobody watches live. */
const quietSeconds = 10;

function lineProgress(print: Printer): Progress {
  const told = new Map<string, number>();
  return {
    show(event) {
      const name = label(event.case);
      if (event.event === "step-start") print.note(`${name}: ${event.step}`);
      if (event.event === "step-end" && event.skipped) print.note(`${name}: ${event.step} was done already`);
      if (event.event === "step-end" && !event.skipped) print.note(`${name}: ${event.step} took ${duration(event.seconds)}`);
      if (event.event === "remark") print.note(`${name}: ${event.message}`);
      if (event.event === "case-end") print.note(`${name}: ${event.state} after ${duration(event.seconds)}`);
      if (event.event !== "iteration") return;
      const now = Date.now();
      if (now - (told.get(event.case) ?? 0) < 1000 * quietSeconds) return;
      told.set(event.case, now);
      print.note(`${name}: ${iterationText(event)}`);
    },
    end() {},
  };
}
