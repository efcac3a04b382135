export interface WallSpacing {
  /** Reynolds number on `length` */
  reynolds: number;
  /** Local skin-friction coefficient at the end of `length`, turbulent from the start. */
  skinFriction: number;
  /** m/s */
  frictionVelocity: number;
  /** m: distance of the cell centre from the wall that gives the asked y+ */
  centreDistance: number;
  /** m: height of the wall cell, twice the distance of its centre */
  firstCell: number;
  /** m: thickness of the turbulent boundary layer at the end of `length` */
  boundaryLayer: number;
}

/**
 * Local skin friction of a smooth flat plate with a turbulent boundary layer, (2 log10 Re - 0.65)^-2.3.
 *
 * Source: Schlichting, Boundary-Layer Theory, interpolation formula for the local coefficient, Re < 1e9. Within 7 % of the computed
 * plate of the NASA turbulence modelling resource at Re 5e6.
 *
 * @throws RangeError below Re 1e3, where the formula means nothing.
 */
export function skinFriction(reynolds: number): number {
  if (!(reynolds >= 1e3 && Number.isFinite(reynolds)))
    throw new RangeError(`Reynolds number is ${reynolds}, must be at least 1000`);
  return (2 * Math.log10(reynolds) - 0.65) ** -2.3;
}

/** m: 0.37 L Re^-1/5, turbulent from the start, one-seventh power law (Prandtl 1927; Schlichting, Boundary-Layer Theory). */
export const turbulentThickness = (length: number, reynolds: number): number => 0.37 * length * reynolds ** -0.2;

/**
 * Height of the wall cell that brings its centre to the asked y+ on a flat plate as long as the body. The solver keeps values at
 * cell centres, so the cell is twice as high as y+ nu / u_tau. On bodies the local y+ spreads from about 0.4 to 1.7 times its mean.
 *
 * `speed` m/s, `length` m (of the body along the flow), `kinematicViscosity` m²/s, `yPlus` the wanted mean at the cell centre.
 *
 * @throws RangeError for values that are not positive.
 */
export function wallSpacing(given: { speed: number; length: number; kinematicViscosity: number; yPlus: number }): WallSpacing {
  for (const [name, value] of Object.entries(given))
    if (!(value > 0 && Number.isFinite(value))) throw new RangeError(`${name} is ${value}, must be positive`);
  const { speed, length, kinematicViscosity, yPlus } = given;
  const reynolds = (speed * length) / kinematicViscosity;
  const friction = skinFriction(reynolds);
  const frictionVelocity = speed * Math.sqrt(friction / 2);
  const centreDistance = (yPlus * kinematicViscosity) / frictionVelocity;
  return {
    reynolds,
    skinFriction: friction,
    frictionVelocity,
    centreDistance,
    firstCell: 2 * centreDistance,
    boundaryLayer: turbulentThickness(length, reynolds),
  };
}
