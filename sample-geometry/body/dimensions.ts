/**
 * The invented pickup's main dimensions, metres. x rearward from mid-wheelbase, y to the right from the mid-plane, z up from the
 * ground (SAE J1594 axes).
 */
export const wheelbase = 3.2;

/** x of the axles. */
export const frontAxle = -wheelbase / 2;
export const rearAxle = wheelbase / 2;

export const wheel = {
  radius: 0.39,
  width: 0.26,
  /** Height of the axle: less than the radius, so that the tyre is cut flat by the ground. */
  height: 0.375,
  /** |y| of the middle of the tyre. */
  side: 0.785,
};

/** Wheel arches are half circles about the axles at the height of the wheel centre. */
export const archRadius = 0.465;

/** z of the bed floor, of the top of the bed rails; x of the rear end of the bed. */
export const bedFloor = 0.9;
export const bedRail = 1.25;
export const bedEnd = 2.66;
