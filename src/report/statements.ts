import type { DifferenceVerdict } from "../compare/comparison.js";

/** The fixed sentences of the page. */

export const countDefinition = "1 count = 0.001 of a coefficient.";

export const verdictMeaning: Record<DifferenceVerdict, string> = {
  resolved: "larger than what the histories and the mesh leave open together",
  "direction-only": "more or less can be told, but not by how much: the share of the mesh in it is unknown or as large",
  "not-resolved": "cannot be told from no difference at all",
};

export const cautions: string[] = [
  "These are numerical estimates of the forces on a simplified vehicle: the body as drawn, a smooth road, still and dry air, and no flow through the radiator, the engine bay or the cabin unless the body has it.",
  "The flow was computed as steady and as turbulent from the nose on. A real wake moves; a flow that is about to separate may settle in another state than the real one, and then a difference between two variants means little.",
  "A half-width says how well a mean is known from its history. The errors of mesh, turbulence model and geometry are not in it. They are usually larger than the half-width; in a difference of two variants on like meshes part of them cancels.",
  "Absolute values do not replace a test: wind tunnels differ among themselves by 0.005 to 0.007 in Cd, and the way the wheels are modelled alone can move it by 0.02.",
  "Lift at the axles changes how a vehicle holds the road. A change of axle lift can make it unstable at speed, in a side wind or under braking; nothing on this page assesses that.",
  "No number on this page is a sign-off. Whether a change may be built and driven is decided by local rules and by engineers who are licensed to do so.",
];

export interface Method {
  title: string;
  text: string;
  source: string;
}

export const methods: Method[] = [
  {
    title: "Start-up",
    text: "The rows cut away are those whose loss makes the standard error of the rest least, in batches of five rows. A cut that falls into the second half means that the history has not settled.",
    source: "MSER-5: White 1997; White, Cobb and Spratt 2000",
  },
  {
    title: "Half-width of a mean",
    text: "Neighbouring rows are alike, so the variance of the mean is taken from their autocovariances, by the initial monotone sequence or by overlapping batch means, whichever is larger, with Student's t for the effective number of samples. A history that repeats is averaged over whole periods.",
    source: "Geyer 1992; Meketon and Schmeiser 1984",
  },
  {
    title: "Difference and its half-width",
    text: "B minus A, the two means taken as independent, with degrees of freedom for unequal variances. A part that one variant does not have counts as zero there.",
    source: "Welch 1947; Satterthwaite 1946",
  },
  {
    title: "Verdict",
    text: `Resolved: ${verdictMeaning.resolved}. Direction-only: ${verdictMeaning["direction-only"]}. Not-resolved: ${verdictMeaning["not-resolved"]}.`,
    source: "rule of this program",
  },
  {
    title: "The ledger closes",
    text: "In every row the parts must add up to the whole in drag and lift, and pressure and friction to the drag of each part, within the digits that the solver prints.",
    source: "definition",
  },
  {
    title: "Axes and axle lift",
    text: "x rearward, y to the right, z up; origin on the ground at mid-wheelbase and mid-track. Drag is positive rearward, lift upward. Front and rear axle lift are Cl/2 ± Cm · l/w, with the nose-up moment Cm about that origin on the length l, and the wheelbase w. They add up to Cl.",
    source: "SAE J1594",
  },
  {
    title: "Frontal area",
    text: "Area of the union silhouette along the direction of travel, holes and hidden parts counted once, of the baseline; held for all variants, so that a difference of coefficients is one of forces.",
    source: "SAE J1594",
  },
];
