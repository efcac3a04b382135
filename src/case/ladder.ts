import { coarserBoxes } from "./grid.js";
import type { CasePlan, PlannedRung } from "./plan.js";
import { planned, source } from "./planned.js";

/** Folder, in the grid that starts from uniform flow, for the iterations in first order. */
export const firstOrderFolder = "first-order";

/** Levels that the coarsest rung may be above the case's own grid. */
export const mostRungs = 3;
/** Below so many cells the flow has little to do with that on the case's own grid. */
const leastCells = 10_000;
/** Of rungs, as by default of cases. */
const relaxation = { velocity: 0.9, turbulence: 0.7 };
/** The coarsest rung comes from uniform flow, the others from the one before. */
const iterations = { first: 200, later: 100 };

/**
 * The coarser grids that a case is started from, the coarsest first: as many as have cells enough. `coarserCells`: what is predicted for
 * the grids one, two, ... levels coarser.
 */
export function ladderOf(coarserCells: number[]): PlannedRung[] {
  const rungs = coarserCells.findIndex((cells) => cells < leastCells);
  const count = rungs < 0 ? coarserCells.length : rungs;
  return Array.from({ length: count }, (_, k) => {
    const coarser = count - k;
    return {
      folder: `ladder/${k + 1}`,
      coarser: planned(
        coarser,
        "",
        `cells on and around the body ${2 ** coarser} times as large, the background as it is; no rung has fewer than ${leastCells} cells`,
        source.solver,
      ),
      predictedCells: planned(coarserCells[coarser - 1]!, "", "as for the case's own grid", source.cellCount),
      iterations: planned(
        k === 0 ? iterations.first : iterations.later,
        "",
        k === 0 ? "from uniform flow until the wake stands" : "from the flow of the rung before",
        source.solver,
      ),
    };
  });
}

/** The plan of a rung: that of its case but for the grid on and around the body and the iterations. */
export function rungPlan(plan: CasePlan, rung: PlannedRung): CasePlan {
  const coarser = rung.coarser.value;
  return {
    ...plan,
    mesh: {
      ...plan.mesh,
      surfaceLevel: { ...plan.mesh.surfaceLevel, value: plan.mesh.surfaceLevel.value - coarser },
      predictedCells: rung.predictedCells,
    },
    boxes: coarserBoxes(plan.boxes, coarser),
    // Layers are relative to the cells that they stand in: they grow with them, which the mesher and the solver take best.
    parts: plan.parts.map((part) => ({ ...part, level: part.level - coarser })),
    ladder: [],
    iterations: {
      ...plan.iterations,
      most: rung.iterations,
      writeEvery: { ...rung.iterations, reason: "at its end" },
      // The usual one, whatever that of the case: on rungs a small one kept the wrong state of a bluff body's wake.
      relaxation: { ...plan.iterations.relaxation, value: relaxation.velocity },
      turbulenceRelaxation: { ...plan.iterations.turbulenceRelaxation, value: relaxation.turbulence },
    },
  };
}
