import { frontAxle, rearAxle, wheel } from "./dimensions.js";

export interface ArchedPoint {
  x: number;
  z: number;
  /** 0 beside the arches and at their feet, 1 at their tops. */
  rise: number;
}

/**
 * A line in side view that runs along the body at a given height and climbs over both wheels in circles about the axles.
 *
 * `xs` (growing) are the stations of another line above. Each arch is given the stations nearest to it and cut into equal arcs; in
 * between, the line keeps the other's spacing. So the two can be joined to a grid.
 */
export function archedLine(xs: number[], radius: number, heightAt: (x: number) => number): ArchedPoint[] {
  const nearest = (x: number): number =>
    xs.reduce((best, value, k) => (Math.abs(value - x) < Math.abs(xs[best] - x) ? k : best), 0);
  const foot = (x: number): number => -Math.asin((wheel.height - heightAt(x)) / radius);
  const line: ArchedPoint[] = [];
  let from = 0;
  let fromX = xs[0];
  const along = (to: number, toX: number): void => {
    for (let k = from; k < to; k++) {
      const x = fromX + ((xs[k] - xs[from]) / (xs[to] - xs[from])) * (toX - fromX);
      line.push({ x, z: heightAt(x), rise: 0 });
    }
  };
  for (const axle of [frontAxle, rearAxle]) {
    const [first, last] = [nearest(axle - radius - 0.03), nearest(axle + radius + 0.03)];
    const [start, end] = [foot(axle - radius), Math.PI - foot(axle + radius)];
    along(first, axle - radius * Math.cos(start));
    for (let k = first; k < last; k++) {
      const angle = start + ((k - first) / (last - first)) * (end - start);
      line.push({
        x: axle - radius * Math.cos(angle),
        z: wheel.height + radius * Math.sin(angle),
        rise: Math.max(0, Math.sin(angle)),
      });
    }
    from = last;
    fromX = axle - radius * Math.cos(end);
  }
  const last = xs.length - 1;
  along(last, xs[last]);
  line.push({ x: xs[last], z: heightAt(xs[last]), rise: 0 });
  return line;
}
