import { studentQuantile } from "../history/student.js";

/** Mean, standard error and degrees of freedom of one history's window. */
export interface MeanWithError {
  mean: number;
  standardError: number;
  degreesOfFreedom: number;
}

export interface MeanDifference {
  delta: number;
  halfWidth: number;
  degreesOfFreedom: number;
}

/**
 * B minus A for two independent means with unequal variances: half-width t(v) sqrt(sA² + sB²), with the degrees of freedom of Welch and
 * Satterthwaite (Welch 1947, Satterthwaite 1946).
 */
export function differenceOf(a: MeanWithError, b: MeanWithError, confidence = 0.95): MeanDifference {
  const [va, vb] = [a.standardError ** 2, b.standardError ** 2];
  const delta = b.mean - a.mean;
  if (va + vb === 0) return { delta, halfWidth: 0, degreesOfFreedom: a.degreesOfFreedom + b.degreesOfFreedom };
  const degreesOfFreedom = (va + vb) ** 2 / (va ** 2 / a.degreesOfFreedom + vb ** 2 / b.degreesOfFreedom);
  const halfWidth = studentQuantile(0.5 + confidence / 2, degreesOfFreedom) * Math.sqrt(va + vb);
  return { delta, halfWidth, degreesOfFreedom };
}
