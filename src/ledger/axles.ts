import type { Reference } from "./ledger.js";
import type { PartSeries } from "./part-series.js";

export interface AxleLift {
  front: Float64Array;
  rear: Float64Array;
}

/**
 * Lift on the front and rear axle as coefficients: CL/2 ± CM l/w, with the nose-up moment CM about the ground at mid-wheelbase on the
 * length l, and the wheelbase w (SAE J1594). Drag acts above the ground and shifts lift to the rear through CM; it is kept. Null without a
 * wheelbase or a moment.
 */
export function axleLift(
  { cl, cm }: Pick<PartSeries, "cl" | "cm">,
  { wheelbase, length }: Pick<Reference, "wheelbase" | "length">,
): AxleLift | null {
  if (cm === null || wheelbase === null || length === null) return null;
  const share = length / wheelbase;
  const [front, rear] = [new Float64Array(cl.length), new Float64Array(cl.length)];
  for (let row = 0; row < cl.length; row++) {
    front[row] = cl[row] / 2 + share * cm[row];
    rear[row] = cl[row] / 2 - share * cm[row];
  }
  return { front, rear };
}
