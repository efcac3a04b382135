import { bedEnd, bedRail } from "./dimensions.js";
import { roundedBox } from "./rounded-box.js";
import type { Surface } from "./surface.js";

/** A closed slab that lies on the rails and on the tailgate, sunk 15 mm into the rails and 40 mm into the rear wall of the cab. */
export function bedCover(): Surface {
  const box = {
    x: [0.79, bedEnd + 0.005] as [number, number],
    side: 0.868,
    z: [bedRail - 0.015, bedRail + 0.025] as [number, number],
    radius: 0.016,
    spacing: 0.09,
  };
  // A slight crown lets water run off.
  return roundedBox(box, ([x, y, z]) => [x, y, z + (z > bedRail ? 0.015 * (1 - (y / box.side) * (y / box.side)) : 0)]);
}
