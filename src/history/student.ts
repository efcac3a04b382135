/**
 * Logarithm of the gamma function for x > 0, to about 1e-15 relative: Stirling's series (Abramowitz and Stegun 1964, 6.1.40)
 * after the argument has been raised above 10 by the recurrence.
 */
export function logGamma(x: number): number {
  let shift = 0;
  let z = x;
  while (z < 10) {
    shift += Math.log(z);
    z += 1;
  }
  const inverse = 1 / z;
  const square = inverse * inverse;
  const series =
    inverse *
    (1 / 12 -
      square *
        (1 / 360 - square * (1 / 1260 - square * (1 / 1680 - square * (1 / 1188 - square * (691 / 360360 - square / 156))))));
  return (z - 0.5) * Math.log(z) - z + 0.5 * Math.log(2 * Math.PI) + series - shift;
}

/**
 * Regularised incomplete beta function I_x(a, b), 0 <= x <= 1, a, b > 0: the continued fraction of Abramowitz and Stegun 26.5.8,
 * evaluated by the modified Lentz method (Thompson and Barnett 1986).
 *
 * @param complement 1 - x, given apart so that x near 1 loses no digits
 */
export function incompleteBeta(x: number, complement: number, a: number, b: number): number {
  if (x <= 0) return 0;
  if (complement <= 0) return 1;
  const logX = complement < 0.5 ? Math.log1p(-complement) : Math.log(x);
  const logComplement = x < 0.5 ? Math.log1p(-x) : Math.log(complement);
  const front = Math.exp(a * logX + b * logComplement - logBeta(a, b));
  // The fraction converges fast below the mean of the distribution; above it the mirrored one does.
  if (x < (a + 1) / (a + b + 2)) return (front * betaFraction(x, a, b)) / a;
  return 1 - (front * betaFraction(complement, b, a)) / b;
}

/**
 * ln B(a, b); where one argument is 1/2 and the other large the ratio of gamma functions comes from its own series (DLMF
 * 5.11.13).
 */
function logBeta(a: number, b: number): number {
  const [large, small] = a > b ? [a, b] : [b, a];
  if (small !== 0.5 || large < 20) return logGamma(a) + logGamma(b) - logGamma(a + b);
  const inverse = 1 / large;
  const square = inverse * inverse;
  return 0.5 * Math.log(Math.PI / large) + inverse * (1 / 8 - square * (1 / 192 - square * (1 / 640 - (square * 17) / 14336)));
}

function betaFraction(x: number, a: number, b: number): number {
  const tiny = 1e-300;
  const awayFromZero = (value: number): number => (Math.abs(value) < tiny ? tiny : value);
  let c = 1;
  let d = 1 / awayFromZero(1 - ((a + b) * x) / (a + 1));
  let fraction = d;
  for (let m = 1; m < 10_000; m += 1) {
    const even = (m * (b - m) * x) / ((a + 2 * m - 1) * (a + 2 * m));
    d = 1 / awayFromZero(1 + even * d);
    c = awayFromZero(1 + even / c);
    fraction *= d * c;
    const odd = (-(a + m) * (a + b + m) * x) / ((a + 2 * m) * (a + 2 * m + 1));
    d = 1 / awayFromZero(1 + odd * d);
    c = awayFromZero(1 + odd / c);
    const change = d * c;
    fraction *= change;
    if (Math.abs(change - 1) < 1e-16) break;
  }
  return fraction;
}

/** Probability that |T| exceeds t (t >= 0) for Student's T; degrees of freedom may be any positive number. */
export function studentTwoSided(t: number, degreesOfFreedom: number): number {
  const square = t * t;
  const sum = degreesOfFreedom + square;
  return incompleteBeta(degreesOfFreedom / sum, square / sum, degreesOfFreedom / 2, 0.5);
}

/** Probability that |T| is at most t. */
function studentInside(t: number, degreesOfFreedom: number): number {
  const square = t * t;
  const sum = degreesOfFreedom + square;
  return incompleteBeta(square / sum, degreesOfFreedom / sum, 0.5, degreesOfFreedom / 2);
}

/** From here on four terms of the expansion in 1/v are closer than 1e-12, and the incomplete beta function no longer is. */
const manyDegrees = 2e4;

/**
 * Quantile of Student's distribution: t with P(T <= t) = p. Degrees of freedom may be fractional (effective samples).
 *
 * Solved from the incomplete beta function by Halley steps inside a bracket, to about 1e-12 relative.
 *
 * @param p 0 < p < 1
 * @param degreesOfFreedom > 0; Infinity gives the normal quantile
 * @returns NaN for arguments outside these ranges
 */
export function studentQuantile(p: number, degreesOfFreedom: number): number {
  if (!(p > 0 && p < 1) || !(degreesOfFreedom > 0)) return Number.NaN;
  if (p === 0.5) return 0;
  const v = degreesOfFreedom;
  const sign = p > 0.5 ? 1 : -1;
  const outside = 2 * Math.min(p, 1 - p);
  const inside = 2 * Math.abs(p - 0.5);
  if (v === 1) return sign * (outside < 0.5 ? 1 / Math.tan((Math.PI * outside) / 2) : Math.tan((Math.PI * inside) / 2));
  if (v === 2) return sign * inside * Math.sqrt(2 / (outside * (2 - outside)));
  const z = normalQuantile(1 - outside / 2);
  // Cornish and Fisher's expansion in 1/v (Abramowitz and Stegun 26.7.5).
  const expanded =
    z +
    (z ** 3 + z) / (4 * v) +
    (5 * z ** 5 + 16 * z ** 3 + 3 * z) / (96 * v ** 2) +
    (3 * z ** 7 + 19 * z ** 5 + 17 * z ** 3 - 15 * z) / (384 * v ** 3);
  if (v > manyDegrees) return sign * expanded;
  // The smaller of the two probabilities is the one that keeps its digits.
  const excessAt = (t: number): number => (outside <= 0.5 ? studentTwoSided(t, v) - outside : inside - studentInside(t, v));
  const logDensity = -logBeta(v / 2, 0.5) - 0.5 * Math.log(v);
  let low = 0;
  let high = Math.max(2 * expanded, 1);
  while (excessAt(high) > 0) {
    low = high;
    high *= 4;
    if (high > 1e150) return sign * Number.POSITIVE_INFINITY;
  }
  let t = expanded > low && expanded < high ? expanded : (low + high) / 2;
  for (let step = 0; step < 200; step += 1) {
    const excess = excessAt(t);
    if (excess === 0) break;
    if (excess > 0) low = t;
    else high = t;
    const density = 2 * Math.exp(logDensity - ((v + 1) / 2) * Math.log1p((t * t) / v));
    const newton = excess / density;
    const curved = newton / (1 - (newton * (v + 1) * t) / (2 * (v + t * t)));
    let next = t + curved;
    // Far out the tail is nearly a power law; outside the bracket the middle (of the logarithms where it spans decades) is safe.
    if (!(next > low && next < high)) next = low > 0 && high / low > 4 ? Math.sqrt(low * high) : (low + high) / 2;
    if (Math.abs(next - t) <= 4e-16 * t) {
      t = next;
      break;
    }
    t = next;
  }
  return sign * t;
}

/** Wichura's coefficients, constant term first: numerator and denominator for the centre, the tail and the far tail. */
const centre = [
  [
    3.3871328727963665, 133.14166789178438, 1971.5909503065513, 13731.69376550946, 45921.95393154987, 67265.7709270087,
    33430.57558358813, 2509.0809287301227,
  ],
  [
    1, 42.31333070160091, 687.1870074920579, 5394.196021424751, 21213.794301586597, 39307.89580009271, 28729.085735721943,
    5226.495278852854,
  ],
] as const;
const tailParts = [
  [
    1.4234371107496835, 4.630337846156546, 5.769497221460691, 3.6478483247632045, 1.2704582524523684, 0.2417807251774506,
    0.022723844989269184, 0.0007745450142783414,
  ],
  [
    1, 2.053191626637759, 1.6763848301838038, 0.6897673349851, 0.14810397642748008, 0.015198666563616457, 0.0005475938084995345,
    1.0507500716444169e-9,
  ],
] as const;
const farTail = [
  [
    6.657904643501103, 5.463784911164114, 1.7848265399172913, 0.29656057182850487, 0.026532189526576124, 0.0012426609473880784,
    2.7115555687434876e-5, 2.0103343992922881e-7,
  ],
  [
    1, 0.599832206555888, 0.1369298809227358, 0.014875361290850615, 0.0007868691311456133, 1.8463183175100548e-5,
    1.421511758316446e-7, 2.0442631033899397e-15,
  ],
] as const;

/** Quantile of the normal distribution, 0 < p < 1: Wichura's rational approximation AS 241 (1988), about 1e-16 relative. */
export function normalQuantile(p: number): number {
  const q = p - 0.5;
  if (Math.abs(q) <= 0.425) return q * ratio(centre, 0.180625 - q * q);
  const r = Math.sqrt(-Math.log(q < 0 ? p : 1 - p));
  const value = r <= 5 ? ratio(tailParts, r - 1.6) : ratio(farTail, r - 5);
  return q < 0 ? -value : value;
}

const ratio = ([above, below]: readonly [readonly number[], readonly number[]], x: number): number =>
  polynomial(x, above) / polynomial(x, below);

const polynomial = (x: number, coefficients: readonly number[]): number =>
  coefficients.reduceRight((sum, coefficient) => sum * x + coefficient, 0);
