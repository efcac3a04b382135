import { runCases } from "../../src/run/run-cases.js";
import { standInSolver } from "./stand-in.js";

// A process of its own that runs one case with the programs of a folder: process-end.test.ts ends it in several ways.
const [casePath, programs, ending] = process.argv.slice(2) as [string, string, "exit" | "throw" | "stay"];
const solver = standInSolver(programs, { STAND_IN_SOLVER: "hang" });
await runCases([casePath], { solver, cores: 1, pollMilliseconds: 10, minimumWindow: 40 }, (event) => {
  if (event.event !== "iteration" || event.iteration !== 25) return;
  if (ending === "exit") process.exit(0);
  if (ending === "throw") {
    setImmediate(() => {
      throw new Error("unforeseen");
    });
  }
  process.stdout.write("hanging\n");
});
