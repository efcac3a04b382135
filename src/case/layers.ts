import { wallSpacing } from "../flow/wall.js";
import type { CasePlan } from "./plan.js";
import { millimetres, planned, source } from "./planned.js";

/** Outermost layer over the cell outside it that is aimed at: the step to the cells outside is mild and layers hold. */
const wantedFinal = 0.4;
/** Beyond this, layers press the mesh so far that they collapse. */
export const mostFinal = 0.6;
/** Below this, the step to the cell outside is no longer a boundary layer's. */
export const leastFinal = 0.1;
/** Growth from one layer to the next. */
const growth = { least: 1.15, most: 1.5 };

export interface LayerWish {
  /** wanted mean y+ of the wall cells' centres */
  yPlus: number;
  layers: number;
  /** m/s */
  speed: number;
  /** m: of the baseline along the flow */
  length: number;
  /** m²/s */
  kinematicViscosity: number;
  /** m: cells on the surface before layers are grown */
  surfaceCell: number;
}

export type LayerPlan = Pick<CasePlan["mesh"], "layers" | "firstCell" | "layerExpansion" | "finalLayer">;

/**
 * Layers that bring the centre of the wall cell to the wanted y+: the first is twice as high as that distance, the last is
 * first · expansion^(layers - 1), given to the mesher relative to the cell it stands in. The expansion is the one that ends near
 * 0.4 cells, between 1.15 and 1.5. Where the last layer would leave 0.1 to 0.6 cells it is held there, and the reason says
 * which y+ comes out.
 */
export function layersFor(wish: LayerWish): LayerPlan {
  const { layers, surfaceCell, yPlus } = wish;
  const wall = wallSpacing({
    speed: wish.speed,
    length: wish.length,
    kinematicViscosity: wish.kinematicViscosity,
    yPlus,
  });
  const steps = Math.max(0, layers - 1);
  const free = ((wantedFinal * surfaceCell) / wall.firstCell) ** (1 / Math.max(1, steps));
  const expansion = Number((steps === 0 ? growth.least : Math.min(growth.most, Math.max(growth.least, free))).toPrecision(3));
  const exact = (wall.firstCell * expansion ** steps) / surfaceCell;
  const final = Math.min(mostFinal, Math.max(leastFinal, exact));
  const firstCell = layers === 0 ? surfaceCell : (final * surfaceCell) / expansion ** steps;
  const reached = Number(((yPlus * firstCell) / wall.firstCell).toPrecision(2));
  const law = `skin friction of a plate of ${wish.length.toFixed(2)} m at Re ${wall.reynolds.toPrecision(3)}`;
  const held = final !== exact || layers === 0;
  return {
    layers: planned(layers, "", "asked for; the ground has none, it moves with the air or is far from the body", source.study),
    firstCell: planned(
      firstCell,
      "m",
      held
        ? `y+ ${yPlus} would need ${millimetres(wall.firstCell)}; ${
            layers === 0
              ? "without layers the wall cell is a surface cell"
              : `${layers} layers on cells of ${millimetres(surfaceCell)} allow y+ ${reached}`
          } (${law})`
        : `twice the distance of its centre, which lies at y+ ${yPlus} (${law}); local values spread from 0.4 to 1.7 times that`,
      "Schlichting, Boundary-Layer Theory: skin friction (2 log10 Re - 0.65)^-2.3",
    ),
    layerExpansion: planned(
      expansion,
      "",
      `growth from layer to layer that brings the outermost near ${wantedFinal} of the cell outside, within ${growth.least} and ${growth.most}`,
      source.practice,
    ),
    finalLayer: planned(
      Number(final.toPrecision(6)),
      "",
      `outermost layer over the cell it stands in: first cell times expansion^${steps}, over ${millimetres(surfaceCell)}`,
      source.definition,
    ),
  };
}

/** The outermost layer relative to the smaller cells of a part that is refined further: its wall cell stays as high as planned. */
export const finalOnLevel = (final: number, levelsFiner: number): number =>
  Number(Math.min(mostFinal, final * 2 ** levelsFiner).toPrecision(6));
