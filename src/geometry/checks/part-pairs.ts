import type { Vector3 } from "../vector.js";

/** Two parts of a body (`a` not above `b`; equal for one part with itself) and how often and where something happens between them. */
export interface PartPair {
  a: number;
  b: number;
  count: number;
  /** Up to three, apart from each other; mesh unit and axes. */
  places: Vector3[];
}

/** Places of one list are at least this share of the body's extent apart, so that ten of them show more than one spot. */
const APART = 0.02;

/** Adds a place unless there are `most` already or one of them is near. */
export function addPlace(places: Vector3[], place: Vector3, extent: number, most = 10): void {
  if (places.length >= most) return;
  const apart = APART * extent;
  for (const [x, y, z] of places) if (Math.hypot(x - place[0], y - place[1], z - place[2]) < apart) return;
  places.push(place);
}

/** The entry of two parts in a table of pairs, made by `fresh` when it is not there yet. */
export function pairEntry<T extends PartPair>(table: Map<number, T>, a: number, b: number, fresh: (pair: PartPair) => T): T {
  const low = Math.min(a, b);
  const high = Math.max(a, b);
  const key = 65536 * low + high;
  const known = table.get(key);
  if (known !== undefined) return known;
  const made = fresh({ a: low, b: high, count: 0, places: [] });
  table.set(key, made);
  return made;
}
