import { bytes } from "../../src/number-text.js";
import { surveyEnvironment } from "../../src/openfoam/environment.js";
import type { CommandModule } from "../command.js";
import { exitCode } from "../context.js";

export const command: CommandModule = {
  arguments: "",
  description:
    "Show what this machine has for the job: solver, MPI, Slurm, browser, cores, memory, disk; what is missing and how to get it.",
  options() {},
  examples: [
    { call: "dragledger environment", does: "what is here, and what is missing" },
    { call: "dragledger environment --json", does: "the same for programs" },
  ],
  async run({ print }) {
    const found = await surveyEnvironment();
    print.document("environment", { ...found });
    const line = (name: string, text: string) => print.line(`  ${name.padEnd(10)}${text}`);
    const none = print.colours.yellow("not found");
    line("node", found.node);
    line("cores", String(found.cores));
    line("memory", bytes(found.memory));
    line("disk", `${bytes(found.disk)} free here`);
    line(
      "solver",
      found.solver.found ? `OpenFOAM ${found.solver.version} (${found.solver.lineage} line), ${found.solver.path}` : none,
    );
    line("mpi", found.mpi.found ? `${found.mpi.version}, ${found.mpi.path}` : none);
    line("slurm", found.slurm.found ? String(found.slurm.version) : none);
    line("browser", found.browser.found ? String(found.browser.path) : none);
    if (found.missing.length > 0) print.heading("Missing");
    for (const { what, how } of found.missing) print.line(`  ${what}: ${how}`);
    return exitCode.done;
  },
};
