import { across, normalised, type Vector3 } from "../vector.js";
import { placeAt } from "./bit-lattice.js";
import type { AirFlood } from "./flood.js";
import { INSIDE } from "./membranes.js";
import type { SurfaceAbout } from "./winding.js";

/** Of a film's points those count as its middle that are nearly as far from the surface as the farthest. */
const NEARLY = 0.97;
/** The film's widest place is searched to this share of a step. */
const FINEST = 1 / 32;
/** Distances along the film's normal, in steps, over which the surface may come nearer than at the film. */
const BESIDE = [-1.5, -1.25, -1, -0.75, -0.5, -0.25, 0, 0.25, 0.5, 0.75, 1, 1.25, 1.5];
/** Times that the film's normal is taken, and how many steps the search may go from where it began. */
const ROUNDS = 4;
const FARTHEST = 4;
const THROUGH = 1.5;
/** The film across a wide opening is bent, and how wide it is depends on where one looks: beyond so many steps, by such a share. */
const WIDE = 12;
const WIDE_DOUBT = 0.2;
/** Points of a film that are looked at. */
const MOST_POINTS = 4000;

/**
 * The largest ball that passes through the film of a hole: the place on the film that is farthest from the surface, sought first among
 * its points on the lattice and from there by ever smaller steps along the film, taking at each place the least distance on the
 * film's normal. `width` is its diameter there, so the hole is at least so wide; `doubt` what the last step can have missed.
 */
export function narrowestAt({ lattice, about }: AirFlood, points: number[]): { centre: Vector3; width: number; doubt: number } {
  const { size, step } = lattice;
  const stride = Math.ceil(points.length / MOST_POINTS);
  const places: Vector3[] = [];
  for (let at = 0; at < points.length; at += stride) {
    const point = points[at];
    places.push(placeAt(lattice, point % size[0], Math.floor(point / size[0]) % size[1], Math.floor(point / (size[0] * size[1]))));
  }
  const far = places.map((place) => about.distance(place));
  const most = Math.max(...far);
  const middle = [0, 1, 2].map((axis) => places.reduce((sum, place) => sum + place[axis], 0) / places.length);
  let centre = places[0];
  let least = Infinity;
  places.forEach((place, at) => {
    if (far[at] < NEARLY * most) return;
    const off = Math.hypot(place[0] - middle[0], place[1] - middle[1], place[2] - middle[2]);
    if (off >= least) return;
    least = off;
    centre = place;
  });
  return widestNear({ about, step }, centre);
}

/** The search from a place near the film; it stays within some steps of it. */
function widestNear(
  { about, step }: { about: SurfaceAbout; step: number },
  start: Vector3,
): { centre: Vector3; width: number; doubt: number } {
  let centre = start;
  let radius = 0;
  let length = step;
  // A film near its rim faces another way than in its middle, so normal and film are taken anew from the place that is best so far.
  for (let round = 0; round < ROUNDS; round++) {
    const normal = normalAt(about, centre, step / 2);
    centre = ontoFilm(about, centre, normal, 2 * step);
    const { u, v } = across(normal);
    const ball = (place: Vector3): number => {
      // A line that does not lead from outside to inside says nothing of the hole.
      if (about.depth(moved(place, normal, -THROUGH * step)) > INSIDE || about.depth(moved(place, normal, THROUGH * step)) < INSIDE)
        return 0;
      let distance = Infinity;
      for (const by of BESIDE) distance = about.distance(moved(place, normal, by * step), distance);
      return distance;
    };
    radius = ball(centre);
    const least = round < ROUNDS - 1 ? length / 4 : FINEST * step;
    while (length >= least) {
      let better = false;
      for (const [along, by] of [
        [u, length],
        [u, -length],
        [v, length],
        [v, -length],
      ] as [Vector3, number][]) {
        const next = moved(centre, along, by);
        if (apart(next, start) > FARTHEST * step) continue;
        const there = ball(next);
        if (there <= radius) continue;
        radius = there;
        centre = next;
        better = true;
      }
      if (!better) length /= 2;
    }
    length = Math.max(length, 4 * FINEST * step);
  }
  // Where no line was found that leads through, the film's point itself has to do.
  if (radius === 0) return { centre: start, width: 2 * about.distance(start), doubt: step };
  const width = 2 * radius;
  return { centre, width, doubt: width > WIDE * step ? WIDE_DOUBT * width : 4 * FINEST * step };
}

const moved = (from: Vector3, along: Vector3, by: number): Vector3 => [
  from[0] + by * along[0],
  from[1] + by * along[1],
  from[2] + by * along[2],
];

const apart = (a: Vector3, b: Vector3): number => Math.hypot(a[0] - b[0], a[1] - b[1], a[2] - b[2]);

/** Up the winding number: from outside to inside. */
function normalAt(about: SurfaceAbout, place: Vector3, by: number): Vector3 {
  const slope = (
    [
      [1, 0, 0],
      [0, 1, 0],
      [0, 0, 1],
    ] as Vector3[]
  ).map((axis) => about.depth(moved(place, axis, by)) - about.depth(moved(place, axis, -by))) as Vector3;
  return Math.hypot(...slope) > 0 ? normalised(slope) : [1, 0, 0];
}

/** The place on the normal where the winding number passes one half, if it does so within `reach` and the way there is free. */
function ontoFilm(about: SurfaceAbout, place: Vector3, normal: Vector3, reach: number): Vector3 {
  const room = Math.min(reach, about.distance(place, reach));
  let low = -room;
  let high = room;
  if (!(about.depth(moved(place, normal, low)) < INSIDE && about.depth(moved(place, normal, high)) > INSIDE)) return place;
  for (let k = 0; k < 12; k++) {
    const middle = (low + high) / 2;
    if (about.depth(moved(place, normal, middle)) > INSIDE) high = middle;
    else low = middle;
  }
  return moved(place, normal, (low + high) / 2);
}
