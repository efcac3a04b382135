import type { TriangleSet } from "../../src/geometry/triangle-set.js";
import type { Vector3 } from "../../src/geometry/vector.js";
import { random } from "./shapes.js";

export interface Car {
  set: TriangleSet;
  /** What it was built with; metres, x rearward, y right, z up. */
  wheelbase: number;
  track: number;
  wheelRadius: number;
  wheelWidth: number;
}

/** Grows typed arrays by patches of a (rows + 1) x columns grid that closes around its columns. */
class Builder {
  positions: Float32Array;
  partOf: Uint16Array;
  triangles = 0;
  readonly names: string[] = [];

  constructor(room: number) {
    this.positions = new Float32Array(9 * room);
    this.partOf = new Uint16Array(room);
  }

  part(name: string): number {
    this.names.push(name);
    return this.names.length - 1;
  }

  add(part: number, a: Vector3, b: Vector3, c: Vector3): void {
    if (this.triangles === this.partOf.length) {
      const positions = new Float32Array(2 * this.positions.length + 9);
      positions.set(this.positions);
      const partOf = new Uint16Array(2 * this.partOf.length + 1);
      partOf.set(this.partOf);
      this.positions = positions;
      this.partOf = partOf;
    }
    this.positions.set(a, 9 * this.triangles);
    this.positions.set(b, 9 * this.triangles + 3);
    this.positions.set(c, 9 * this.triangles + 6);
    this.partOf[this.triangles++] = part;
  }

  /** `point` gives the same numbers for the same row and column every time, so that patches close exactly. */
  tube(
    rows: number,
    columns: number,
    partAt: (row: number, column: number) => number,
    point: (row: number, column: number) => Vector3,
  ): void {
    const line = (row: number): Vector3[] => Array.from({ length: columns }, (_, column) => point(row, column));
    let below = line(0);
    for (let row = 0; row < rows; row++) {
      const above = line(row + 1);
      for (let column = 0; column < columns; column++) {
        const next = (column + 1) % columns;
        const part = partAt(row, column);
        if (row > 0) this.add(part, below[column], below[next], above[next]);
        if (row < rows - 1) this.add(part, below[column], above[next], above[column]);
      }
      below = above;
    }
  }
}

/**
 * A car-like body of about `triangles` triangles: one closed shell in seven named regions (hood, roof, ...), two mirrors and four
 * wheels, seven shells in all, whose tyres are cut flat at the ground. Proportions follow from the seed.
 */
export function car(triangles: number, seed = 1): Car {
  const next = random(seed);
  const between = (low: number, high: number): number => low + (high - low) * next();
  const length = between(4, 4.8);
  const width = between(1.7, 1.9);
  const height = between(1.25, 1.5);
  const clearance = between(0.12, 0.18);
  const wheelRadius = between(0.29, 0.34);
  const wheelWidth = between(0.18, 0.24);
  const wheelbase = between(0.56, 0.62) * length;
  const frontAxle = between(0.17, 0.2) * length;
  const track = width - wheelWidth - 0.04;
  const hoodHeight = between(0.58, 0.66);
  const builder = new Builder(triangles + 4096);

  const share = Math.sqrt((0.72 * triangles) / 2);
  const rows = Math.max(16, 2 * Math.round(share / 2 / 1.5) * 1.5);
  const columns = Math.max(24, 2 * Math.round((0.72 * triangles) / rows / 4));
  const names = ["body-floor", "front-bumper", "hood", "windscreen", "roof", "rear-window", "trunk"].map((name) =>
    builder.part(name),
  );
  const bodyRows = Math.round(rows);
  const step = (x: number, at: number, over: number): number => 1 / (1 + Math.exp(-(x - at) / over));
  builder.tube(
    bodyRows,
    columns,
    (row, column) => {
      const x = (row + 0.5) / bodyRows;
      const angle = (2 * Math.PI * (column + 0.5)) / columns;
      if (Math.sin(angle) < 0) return names[0];
      if (x < 0.06) return names[1];
      if (x < 0.3) return names[2];
      if (x < 0.4) return names[3];
      if (x < 0.65) return names[4];
      return x < 0.82 ? names[5] : names[6];
    },
    (row, column) => {
      const x = row / bodyRows;
      // Blunt ends: half an ellipse over the first and last tenth.
      const end = Math.min(x, 1 - x) / 0.1;
      const taper = end >= 1 ? 1 : Math.sqrt(Math.max(0, 1 - (1 - end) ** 2));
      const top = height * (hoodHeight + (1 - hoodHeight) * step(x, 0.35, 0.03) * step(-x, -0.8, 0.04)) - clearance;
      // Mirror images exactly: the second half of the section is the first one with its side turned.
      const half = columns / 2;
      const quarter = half / 2;
      const right = column <= quarter || column >= half + quarter ? 1 : -1;
      const folded = column <= quarter ? column : column < half + quarter ? half - column : column - columns;
      const angle = (Math.PI * folded) / half;
      const c = Math.abs(Math.cos(angle)) ** 0.5;
      const s = Math.sign(Math.sin(angle)) * Math.abs(Math.sin(angle)) ** 0.5;
      const narrow = 1 - 0.18 * Math.max(0, s) ** 4;
      const middle = top * 0.45;
      const y = folded === quarter || folded === -quarter ? 0 : right * (width / 2) * taper * c * narrow;
      return [length * x, y, clearance + middle * (1 - 0.35 * (1 - taper)) + (s > 0 ? top - middle : middle) * taper * s];
    },
  );

  const each = Math.max(6, Math.round(Math.sqrt((0.02 * triangles) / 4)));
  for (const side of [-1, 1]) {
    const part = builder.part(side < 0 ? "mirror-left" : "mirror-right");
    builder.tube(
      each,
      2 * each,
      () => part,
      (row, column) => {
        const polar = (Math.PI * row) / each;
        const angle = (-2 * Math.PI * column * side) / (2 * each);
        const r = row === 0 || row === each ? 0 : Math.sin(polar);
        return [
          0.33 * length + 0.09 * r * Math.sin(angle),
          side * (width / 2 + 0.08 + 0.1 * r * Math.cos(angle)),
          0.68 * height - 0.07 * Math.cos(polar),
        ];
      },
    );
  }

  const around = Math.max(24, 2 * Math.round(Math.sqrt((0.06 * triangles) / 2 / 2) * 1.2));
  const across = Math.max(6, Math.round((0.06 * triangles) / 2 / around));
  for (const axle of [0, 1])
    for (const side of [-1, 1]) {
      const part = builder.part(`wheel-${axle === 0 ? "front" : "rear"}-${side < 0 ? "left" : "right"}`);
      const x0 = frontAxle + axle * wheelbase;
      builder.tube(
        across,
        around,
        () => part,
        (row, column) => {
          const s = row / across;
          // From the hub over the inner side, across the tread, and back to the hub.
          const out = s < 0.3 ? s / 0.3 : s > 0.7 ? (1 - s) / 0.3 : 1;
          const along = s < 0.3 ? -0.5 : s > 0.7 ? 0.5 : (s - 0.5) / 0.4;
          const angle = (2 * Math.PI * column) / around;
          const r = row === 0 || row === across ? 0 : wheelRadius * out;
          // The tyre is cut at the ground: a centimetre of it is missing.
          const z = Math.max(0, wheelRadius - 0.01 + r * Math.sin(-angle));
          return [x0 + r * Math.cos(angle), side * (track / 2) + along * wheelWidth, z];
        },
      );
    }
  return {
    set: {
      positions: builder.positions.subarray(0, 9 * builder.triangles),
      partOf: builder.partOf.subarray(0, builder.triangles),
      parts: builder.names.map((name) => ({ name, patch: name, file: 0 })),
      files: [{ path: "car.stl", format: "stl-ascii", triangles: builder.triangles }],
      findings: [],
    },
    wheelbase,
    track,
    wheelRadius,
    wheelWidth,
  };
}
