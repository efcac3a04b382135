import type { Part, TriangleSet } from "./triangle-set.js";

/** The triangles of the parts that `keep` holds for, with those parts only; order is kept, findings and files stay. */
export function keepParts(set: TriangleSet, keep: (patch: string) => boolean): TriangleSet {
  const newIndex = new Int32Array(set.parts.length).fill(-1);
  const parts: Part[] = [];
  for (const [index, part] of set.parts.entries()) if (keep(part.patch)) newIndex[index] = parts.push(part) - 1;
  let kept = 0;
  for (const part of set.partOf) if (newIndex[part] >= 0) kept++;
  const positions = new Float32Array(9 * kept);
  const partOf = new Uint16Array(kept);
  let to = 0;
  for (let from = 0; from < set.partOf.length; from++) {
    const part = newIndex[set.partOf[from]];
    if (part < 0) continue;
    positions.set(set.positions.subarray(9 * from, 9 * from + 9), 9 * to);
    partOf[to++] = part;
  }
  return { ...set, positions, partOf, parts };
}
