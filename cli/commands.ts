import type { CommandModule } from "./command.js";

interface Listed {
  name: string;
  /** One line for the list of commands. */
  summary: string;
  // Each module is loaded only when its command is called, which keeps `--help` and every start quick.
  load(): Promise<{ command: CommandModule<never> }>;
}

/** The commands in the order of the job. */
export const commands: Listed[] = [
  {
    name: "inspect",
    summary: "check a body: parts, areas, bounds, wheels, units and axes, fit to mesh",
    load: () => import("./commands/inspect.js"),
  },
  {
    name: "new",
    summary: "write a study file filled in from the body, every guess marked",
    load: () => import("./commands/new.js"),
  },
  {
    name: "prepare",
    summary: "turn a study into OpenFOAM cases, or show the plan and its reasons",
    load: () => import("./commands/prepare.js"),
  },
  {
    name: "run",
    summary: "mesh, check and solve; stop when settled; go on where it ended",
    load: () => import("./commands/run.js"),
  },
  {
    name: "history",
    summary: "read any solver output: columns, segments, last values, means",
    load: () => import("./commands/history.js"),
  },
  {
    name: "converged",
    summary: "say whether each quantity has settled, and how well it is known",
    load: () => import("./commands/converged.js"),
  },
  {
    name: "ledger",
    summary: "drag and lift part by part, pressure and friction apart",
    load: () => import("./commands/ledger.js"),
  },
  {
    name: "compare",
    summary: "the difference of two cases part by part, with its uncertainty and a verdict",
    load: () => import("./commands/compare.js"),
  },
  {
    name: "report",
    summary: "write one self-contained HTML file for a study or for cases",
    load: () => import("./commands/report.js"),
  },
  {
    name: "environment",
    summary: "show what is installed, what is missing and how to get it",
    load: () => import("./commands/environment.js"),
  },
  { name: "demo", summary: "do the whole job on the sample pickup", load: () => import("./commands/demo.js") },
];
