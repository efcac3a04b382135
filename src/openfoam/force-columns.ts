import type { Column } from "./table.js";

const axes = ["x", "y", "z"] as const;
const parts = ["pressure", "viscous", "porous"] as const;

/** How the numbers after Time of a `forces.dat` row are to be read. */
export interface ForceBlocks {
  /** 2: pressure, viscous; 3: also porous */
  parts: 2 | 3;
  /** The row also holds forces and moments in a local system. */
  local: boolean;
}

/** Shape of a `forces.dat` row with `numbers` numbers after Time (and after a rotation centre); null when it is no such row. */
export function forceBlocks(numbers: number): ForceBlocks | null {
  if (numbers === 12) return { parts: 2, local: false };
  if (numbers === 18) return { parts: 3, local: false };
  if (numbers === 24) return { parts: 2, local: true };
  if (numbers === 36) return { parts: 3, local: true };
  return null;
}

export const vectorNames = (prefix: string): string[] => axes.map((axis) => `${prefix}_${axis}`);

/** Names of the columns of `force.dat` and `moment.dat`: total, pressure, viscous and, with 12 numbers, porous. */
export function totalFirstNames(numbers: number): string[] | null {
  if (numbers !== 9 && numbers !== 12) return null;
  return ["total", ...parts.slice(0, numbers / 3 - 1)].flatMap(vectorNames);
}

/**
 * Columns total, pressure, viscous [, porous] made from the part columns of one block (3 per part, pressure first): `forces.dat`
 * has no total, it is the sum.
 */
export function blockColumns(cells: readonly Float64Array[], prefix = ""): Column[] {
  const rows = cells[0]!.length;
  const totals = axes.map((axis, index) => {
    const values = new Float64Array(rows);
    for (let part = index; part < cells.length; part += 3) {
      const share = cells[part]!;
      for (let row = 0; row < rows; row += 1) values[row]! += share[row]!;
    }
    return { name: `${prefix}total_${axis}`, values };
  });
  const shares = cells.map((values, index) => ({ name: `${prefix}${parts[Math.floor(index / 3)]!}_${axes[index % 3]!}`, values }));
  return [...totals, ...shares];
}
