import { NO_EDGE, nextInTriangle } from "./edges.js";
import type { SurfaceMesh } from "./surface-mesh.js";

/** What a triangle is to those before it: none has its corners; one has, and the same sense; one has, but only with the other sense. */
export const COPY = { none: 0, same: 1, opposite: 2 } as const;

/** Rings up to this long are compared pair by pair; longer ones through a table. */
const SHORT = 8;

/**
 * 1 per triangle: whether an earlier one has the same three corners (see `COPY`). Copies share all edges, so each ring of edges is looked
 * through once; time grows with the number of triangles, also where very many meet in one edge.
 */
export function copiesOf({ corners, ring }: Pick<SurfaceMesh, "corners" | "ring">): Uint8Array {
  const copies = new Uint8Array(corners.length / 3);
  const seen = new Uint8Array(ring.length);
  const third = (h: number): number => corners[nextInTriangle(nextInTriangle(h))];
  const mark = (h: number, same: boolean): void => {
    const t = (h / 3) | 0;
    if (same) copies[t] = COPY.same;
    else if (copies[t] === COPY.none) copies[t] = COPY.opposite;
  };
  const members: number[] = [];
  for (let h = 0; h < ring.length; h++) {
    const other = ring[h];
    if (other === NO_EDGE || other === h || seen[h] === 1) continue;
    if (ring[other] === h) {
      if (other > h && third(other) === third(h)) mark(other, corners[other] === corners[h]);
      continue;
    }
    // Half-edges are met in ascending order, and so they stand in their ring: this is its lowest.
    members.length = 0;
    for (let at = h; members.length === 0 || at !== h; at = ring[at]) {
      seen[at] = 1;
      members.push(at);
    }
    if (members.length <= SHORT) {
      for (let k = 1; k < members.length; k++)
        for (let j = 0; j < k; j++)
          if (third(members[j]) === third(members[k])) mark(members[k], corners[members[j]] === corners[members[k]]);
    } else {
      // Bit 0: seen in the direction of the first half-edge; bit 1: against it.
      const senses = new Map<number, number>();
      for (const member of members) {
        const before = senses.get(third(member)) ?? 0;
        const bit = corners[member] === corners[h] ? 1 : 2;
        if (before !== 0) mark(member, (before & bit) !== 0);
        senses.set(third(member), before | bit);
      }
    }
  }
  return copies;
}
