import type { Part } from "../triangle-set.js";
import type { Vector3 } from "../vector.js";
import type { PartPair } from "./part-pairs.js";

/** A length in metres, as people say it: millimetres below a decimetre. */
export function lengthWords(metres: number): string {
  if (metres === 0) return "0 mm";
  return metres < 0.1 ? `${Number((1000 * metres).toPrecision(2))} mm` : `${Number(metres.toPrecision(3))} m`;
}

/** An area in m², as people say it: mm² below a square centimetre, cm² below a square decimetre. */
export function areaWords(squareMetres: number): string {
  if (squareMetres < 1e-4) return `${Number((1e6 * squareMetres).toPrecision(2))} mm²`;
  return squareMetres < 0.01 ? `${Number((1e4 * squareMetres).toPrecision(2))} cm²` : `${Number(squareMetres.toPrecision(2))} m²`;
}

/** A share as per cent: "under 1 %" rather than 0. */
export const shareWords = (share: number): string => (share > 0 && share < 0.01 ? "under 1 %" : `${Math.round(100 * share)} %`);

/** "1 triangle", "12 triangles". */
export const counted = (count: number, one: string, many = `${one}s`): string => `${count} ${count === 1 ? one : many}`;

/** The first few of a list and how many more there are. */
export function firstOf(items: string[], most = 5, more = "more"): string {
  return items.length > most ? `${items.slice(0, most).join(", ")} and ${items.length - most} ${more}` : items.join(", ");
}

/** In words where something was found, the parts with most first; `only`: the part's name when there is but one. */
export function partsOf(perPart: ArrayLike<number>, parts: Part[]): { text: string; only: string | null } {
  const ranked = parts
    .map(({ name }, k) => ({ name, count: perPart[k] }))
    .filter(({ count }) => count > 0)
    .sort((a, b) => b.count - a.count);
  return {
    text: firstOf(
      ranked.map(({ name, count }) => `${name} ${count}`),
      5,
      "more parts",
    ),
    only: ranked.length === 1 ? ranked[0].name : null,
  };
}

/** The names of a pair: "a and b", "a with itself". */
export const pairWords = ({ a, b }: Pick<PartPair, "a" | "b">, parts: Part[]): string =>
  a === b ? `${parts[a].name} with itself` : `${parts[a].name} and ${parts[b].name}`;

/** Places in metres. `scale`: metres per mesh unit. */
export const scaledPlaces = (places: Vector3[], scale: number): Vector3[] =>
  places.map((at) => at.map((value) => value * scale) as Vector3);

/** Up to ten places of several lists, taken in turn, so that each list is shown. */
export function placesInTurn(lists: Vector3[][], most = 10): Vector3[] {
  const places: Vector3[] = [];
  for (let k = 0; places.length < most && lists.some((list) => k < list.length); k++)
    for (const list of lists) if (k < list.length && places.length < most) places.push(list[k]);
  return places;
}
