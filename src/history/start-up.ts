/** Rows per batch of the rule as it is used by name. */
const batchRows = 5;
/** Batches that must remain: two or three neighbours can agree by chance. */
const fewestBatches = 5;

export interface StartUp {
  /** Rows to cut from the start. */
  rows: number;
  /** The least value of the criterion. */
  criterion: number;
  /** The least value lies in the second half: the history has not left its start-up, no cut helps. */
  open: boolean;
}

/**
 * Length of the start-up by MSER-5 (White 1997; White, Cobb and Spratt 2000): of all cuts d the one with the least
 * sum of squares of the batches after d divided by (k - d)^2, with batches of five rows. When that lies in the second half the
 * rule says that there are too few rows.
 */
export function startUp(values: Float64Array): StartUp {
  const batches = Math.floor(values.length / batchRows);
  const origin = values[values.length - 1]!;
  const means = Float64Array.from({ length: batches }, (_, index) => {
    let sum = 0;
    for (let row = index * batchRows; row < (index + 1) * batchRows; row += 1) sum += values[row]! - origin;
    return sum / batchRows;
  });
  const cut = startUpBatches(means);
  return { ...cut, rows: cut.rows * batchRows };
}

/** The same rule on batch means that are given; `rows` counts batches. */
export function startUpBatches(means: Float64Array): StartUp {
  const batches = means.length;
  if (batches < 2 * fewestBatches) return { rows: 0, criterion: Number.NaN, open: true };
  // From the end on, mean and sum of squares grow by one batch at a time (Welford 1962).
  let centre = 0;
  let squares = 0;
  let best = 0;
  let least = Number.POSITIVE_INFINITY;
  for (let cut = batches - 1; cut >= 0; cut -= 1) {
    const count = batches - cut;
    const deviation = means[cut]! - centre;
    centre += deviation / count;
    squares += deviation * (means[cut]! - centre);
    if (count < fewestBatches) continue;
    const criterion = squares / (count * count);
    if (criterion <= least) {
      least = criterion;
      best = cut;
    }
  }
  return { rows: best, criterion: least, open: best > batches / 2 };
}
