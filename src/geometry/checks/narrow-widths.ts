import type { Vector3 } from "../vector.js";

/** Widths below a limit, met on sampled area. */
export class NarrowWidths {
  private readonly widths: number[] = [];
  private readonly areas: number[] = [];
  area = 0;
  least = Infinity;
  place: Vector3 = [0, 0, 0];

  add(width: number, area: number, points: Float64Array, at: number): void {
    this.widths.push(width);
    this.areas.push(area);
    this.area += area;
    if (width >= this.least) return;
    this.least = width;
    this.place = [points[at], points[at + 1], points[at + 2]];
  }

  /** The width that half of the narrow area is below. */
  median(): number {
    const order = this.widths.map((_, k) => k).sort((a, b) => this.widths[a] - this.widths[b]);
    let below = 0;
    for (const k of order) {
      below += this.areas[k];
      if (below >= this.area / 2) return this.widths[k];
    }
    return Infinity;
  }
}
