/**
 * Sums x_i x_{i+lag} for every lag 0 .. n - 1, through the power spectrum of the series padded with zeros to at least 2 n (Wiener
 * and Khinchin): O(n log n).
 */
export function powerCorrelation(values: Float64Array): Float64Array {
  let size = 1;
  while (size < 2 * values.length) size *= 2;
  const real = new Float64Array(size);
  const imaginary = new Float64Array(size);
  real.set(values);
  transform(real, imaginary);
  for (let index = 0; index < size; index += 1) {
    real[index] = real[index]! ** 2 + imaginary[index]! ** 2;
    imaginary[index] = 0;
  }
  // The power spectrum is real and even, so the forward transform is the inverse one but for the factor.
  transform(real, imaginary);
  return real.subarray(0, values.length).map((sum) => sum / size);
}

/** In-place transform of 2^k complex values (Cooley and Tukey 1965, radix 2). */
function transform(real: Float64Array, imaginary: Float64Array): void {
  const size = real.length;
  for (let index = 1, reversed = 0; index < size; index += 1) {
    let bit = size >> 1;
    for (; (reversed & bit) !== 0; bit >>= 1) reversed ^= bit;
    reversed ^= bit;
    if (index < reversed) {
      [real[index], real[reversed]] = [real[reversed]!, real[index]!];
      [imaginary[index], imaginary[reversed]] = [imaginary[reversed]!, imaginary[index]!];
    }
  }
  const { cosines, sines } = circleOf(size);
  for (let half = 1; half < size; half *= 2) {
    const stride = size / (2 * half);
    for (let start = 0; start < size; start += 2 * half) {
      for (let index = 0; index < half; index += 1) {
        const c = cosines[index * stride]!;
        const s = sines[index * stride]!;
        const low = start + index;
        const high = low + half;
        const r = real[high]! * c - imaginary[high]! * s;
        const i = real[high]! * s + imaginary[high]! * c;
        real[high] = real[low]! - r;
        imaginary[high] = imaginary[low]! - i;
        real[low]! += r;
        imaginary[low]! += i;
      }
    }
  }
}

let lastCircle: { cosines: Float64Array; sines: Float64Array } = { cosines: new Float64Array(0), sines: new Float64Array(0) };

/** cos and -sin of half a circle in `size / 2` steps. The last one is kept: one judgement transforms many series of one length. */
function circleOf(size: number): typeof lastCircle {
  if (lastCircle.cosines.length !== size / 2) {
    lastCircle = {
      cosines: Float64Array.from({ length: size / 2 }, (_, index) => Math.cos((2 * Math.PI * index) / size)),
      sines: Float64Array.from({ length: size / 2 }, (_, index) => -Math.sin((2 * Math.PI * index) / size)),
    };
  }
  return lastCircle;
}
