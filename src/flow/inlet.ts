/** Turbulence of the oncoming air as the two-equation models want it. */
export interface TurbulenceState {
  /** m²/s² */
  k: number;
  /** 1/s */
  omega: number;
  /** m²/s³: Cmu k omega, Cmu 0.09 */
  epsilon: number;
  /** m²/s: kinematic eddy viscosity, k / omega */
  nut: number;
  /** ratio: nut over the kinematic viscosity of the air */
  viscosityRatio: number;
  /** root-mean-square fluctuation over speed, isotropic */
  intensity: number;
  /** m: sqrt(k) / (Cmu^1/4 omega), Cmu 0.09 */
  lengthScale: number;
}

export interface InletTurbulence extends TurbulenceState {
  /** What is left of it at the nose when it has travelled `distance` in undisturbed flow; null when no distance was given. */
  atNose: TurbulenceState | null;
}

export interface InletOptions {
  /** m/s */
  speed: number;
  /** m²/s */
  kinematicViscosity: number;
  /** fluctuation over speed; 0.5 % unless given */
  intensity?: number;
  /** nut over kinematic viscosity; 10 unless given */
  viscosityRatio?: number;
  /** m: from the inlet to the nose */
  distance?: number;
  /** whose equations the turbulence decays by; k-omega SST unless given */
  model?: TwoEquationModel;
}

export type TwoEquationModel = "k-omega-SST" | "realizable-k-epsilon";

/** Both ran with the solver on a bluff body at 60 m/s without excess eddy viscosity. */
export const DEFAULT_INTENSITY = 0.005;
export const DEFAULT_VISCOSITY_RATIO = 10;

const BETA_STAR = 0.09;
/** Of the dissipation's own decay in the realizable k-epsilon model (Shih and others 1995). */
const C2 = 1.9;
/** Outer coefficient of k-omega SST (Menter 1994), the one that acts away from walls. */
const BETA = 0.0828;

/**
 * k, omega and epsilon at the inlet from an intensity and a ratio of eddy to molecular viscosity: k = 1.5 (U I)², omega = k / (ratio nu).
 *
 * The estimate at the nose integrates the free-stream form of the model, U dk/dx = -beta* k omega, U domega/dx = -beta omega²:
 * omega = omega0 / (1 + beta omega0 x / U), k = k0 (1 + beta omega0 x / U)^(-0.09/0.0828), with beta* 0.09 and the outer beta 0.0828.
 * For the realizable k-epsilon model U dk/dx = -epsilon, U d(epsilon)/dx = -C2 epsilon² / k, that is k = k0 (1 + t)^(-1/(C2-1)) and
 * epsilon = epsilon0 (1 + t)^(-C2/(C2-1)) with t = (C2-1) epsilon0 x / (k0 U); the model adds sqrt(nu epsilon) to k in the second
 * equation, a tenth of it at a viscosity ratio of 10, which the estimate leaves out.
 *
 * Source: Spalart and Rumsey, AIAA Journal 45 (2007) 2544-2553; coefficients Menter, AIAA Journal 32 (1994) 1598-1605, and Shih, Liou,
 * Shabbir, Yang and Zhu, Computers and Fluids 24 (1995) 227-238.
 *
 * @throws RangeError for values that are not positive.
 */
export function inletTurbulence(options: InletOptions): InletTurbulence {
  const {
    speed,
    kinematicViscosity,
    intensity = DEFAULT_INTENSITY,
    viscosityRatio = DEFAULT_VISCOSITY_RATIO,
    distance,
    model,
  } = options;
  for (const [name, value] of Object.entries({ speed, kinematicViscosity, intensity, viscosityRatio }))
    if (!(value > 0 && Number.isFinite(value))) throw new RangeError(`${name} is ${value}, must be positive`);
  if (distance !== undefined && !(distance >= 0 && Number.isFinite(distance)))
    throw new RangeError(`distance is ${distance}, must not be negative`);
  const k = 1.5 * (speed * intensity) ** 2;
  const omega = k / (viscosityRatio * kinematicViscosity);
  const stateOf = (kHere: number, omegaHere: number): TurbulenceState => ({
    k: kHere,
    omega: omegaHere,
    epsilon: BETA_STAR * kHere * omegaHere,
    nut: kHere / omegaHere,
    viscosityRatio: kHere / omegaHere / kinematicViscosity,
    intensity: Math.sqrt(kHere / 1.5) / speed,
    lengthScale: Math.sqrt(kHere) / (BETA_STAR ** 0.25 * omegaHere),
  });
  if (distance === undefined) return { ...stateOf(k, omega), atNose: null };
  if (model === "realizable-k-epsilon") {
    const decay = 1 + ((C2 - 1) * BETA_STAR * omega * distance) / speed;
    // epsilon / k is omega but for the constant, and falls as 1 / decay.
    return { ...stateOf(k, omega), atNose: stateOf(k * decay ** (-1 / (C2 - 1)), omega / decay) };
  }
  const decay = 1 + (BETA * omega * distance) / speed;
  return { ...stateOf(k, omega), atNose: stateOf(k * decay ** (-BETA_STAR / BETA), omega / decay) };
}
