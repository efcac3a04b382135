import type { Vector3 } from "../../src/geometry/vector.js";

/**
 * A growing heap of triangles, metres, counter-clockwise seen from outside. Coordinates are rounded to float32 when they are added,
 * so corners that were computed alike are the same to the bit, and a mirror image is exact.
 */
export class Surface {
  /** 9 per triangle: x0 y0 z0 x1 y1 z1 x2 y2 z2. */
  readonly positions: number[] = [];

  /** @throws when two of the corners are the same float32 point: such a triangle is a mistake of the generator. */
  triangle(a: Vector3, b: Vector3, c: Vector3): void {
    const [p, q, r] = [a, b, c].map(rounded);
    if (same(p, q) || same(q, r) || same(r, p))
      throw new Error(`A triangle with two equal corners at ${p.join(" ")} / ${q.join(" ")}.`);
    this.positions.push(...p, ...q, ...r);
  }

  /** Two triangles over a, b, c, d (in turn), cut along the shorter diagonal. */
  quad(a: Vector3, b: Vector3, c: Vector3, d: Vector3): void {
    if (squaredDistance(a, c) <= squaredDistance(b, d)) {
      this.triangle(a, b, c);
      this.triangle(a, c, d);
    } else {
      this.triangle(b, c, d);
      this.triangle(b, d, a);
    }
  }

  /**
   * The quads of a grid. With rows running along +x and the points of a row from the bottom over y > 0 to the top, the outside is
   * where y grows; `inward` turns the surface over.
   */
  grid(rows: Vector3[][], inward = false): void {
    for (let i = 0; i + 1 < rows.length; i++) {
      for (let j = 0; j + 1 < rows[i].length; j++) {
        const corners: [Vector3, Vector3, Vector3, Vector3] = [rows[i][j], rows[i][j + 1], rows[i + 1][j + 1], rows[i + 1][j]];
        if (inward) corners.reverse();
        this.quad(...corners);
      }
    }
  }

  /** Adds a copy of all triangles, mirrored at y = 0. */
  addMirrorImage(): void {
    this.positions.push(...this.mirrored().positions);
  }

  /** A copy mirrored at y = 0, still turned outward. */
  mirrored(): Surface {
    const image = new Surface();
    for (let at = 0; at < this.positions.length; at += 9) {
      // Swapping two corners keeps the outside outside.
      for (const corner of [0, 2, 1]) {
        const from = at + 3 * corner;
        const y = this.positions[from + 1];
        image.positions.push(this.positions[from], y === 0 ? 0 : -y, this.positions[from + 2]);
      }
    }
    return image;
  }
}

function rounded(point: Vector3): Vector3 {
  // Adding 0 turns -0 into 0: the two are the same place and must be the same bits.
  return [Math.fround(point[0]) + 0, Math.fround(point[1]) + 0, Math.fround(point[2]) + 0];
}

function same(a: Vector3, b: Vector3): boolean {
  return a[0] === b[0] && a[1] === b[1] && a[2] === b[2];
}

function squaredDistance(a: Vector3, b: Vector3): number {
  const dx = a[0] - b[0];
  const dy = a[1] - b[1];
  const dz = a[2] - b[2];
  return dx * dx + dy * dy + dz * dz;
}
