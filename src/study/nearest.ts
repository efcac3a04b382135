/**
 * The candidate that a misspelt word most likely means, or null. Case and separators do not count; a path such as `mesh.cells` is
 * also known by its last word. At most a third of the letters may differ.
 */
export function nearest(word: string, candidates: readonly string[]): string | null {
  const wanted = bare(word.slice(0, 60));
  if (wanted === "") return null;
  let best: string | null = null;
  let least = Math.floor(wanted.length / 3) + 1;
  for (const candidate of candidates) {
    const distance = editDistance(wanted, bare(candidate.slice(candidate.lastIndexOf(".") + 1)));
    if (distance < least) {
      least = distance;
      best = candidate;
    }
  }
  return best;
}

const bare = (text: string): string => text.toLowerCase().replace(/[^\p{L}\p{N}]/gu, "");

/** Letters to insert, remove, replace or swap with a neighbour (optimal string alignment; Damerau 1964). */
export function editDistance(a: string, b: string): number {
  let before: number[] = [];
  let above = Array.from({ length: b.length + 1 }, (_, k) => k);
  for (let i = 1; i <= a.length; i++) {
    const row = [i];
    for (let j = 1; j <= b.length; j++) {
      const same = a[i - 1] === b[j - 1] ? 0 : 1;
      row[j] = Math.min(above[j]! + 1, row[j - 1]! + 1, above[j - 1]! + same);
      if (i > 1 && j > 1 && a[i - 1] === b[j - 2] && a[i - 2] === b[j - 1]) row[j] = Math.min(row[j]!, before[j - 2]! + 1);
    }
    before = above;
    above = row;
  }
  return above[b.length]!;
}
