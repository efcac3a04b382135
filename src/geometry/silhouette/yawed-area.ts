import type { SurfaceMesh } from "../surface-mesh.js";
import { surfaceMesh } from "../surface-mesh.js";
import type { Vector3 } from "../vector.js";
import { silhouette } from "./silhouette.js";

/**
 * The area of the union silhouette across the wind at an angle of yaw (radians): the wind blows along cos(yaw) · rearward +
 * sin(yaw) · right, so at a positive angle it comes from the left. A half body is completed by its mirror image first, since at yaw
 * the two halves cover each other. Mesh unit squared.
 *
 * @param half axis and coordinate of the plane of a half body; null for a whole one
 */
export function yawedAreas(
  mesh: SurfaceMesh,
  yaws: number[],
  { rearward, right }: { rearward: Vector3; right: Vector3 },
  half: { axis: number; plane: number } | null,
): { yaw: number; area: number; error: number }[] {
  if (yaws.length === 0) return [];
  const whole = half === null ? mesh : completed(mesh, half.axis, half.plane);
  return yaws.map((yaw) => {
    const along = rearward.map((value, k) => value * Math.cos(yaw) + right[k] * Math.sin(yaw)) as Vector3;
    const { area, error } = silhouette(whole, along);
    return { yaw, area, error };
  });
}

/** A half body together with its mirror image about a plane across one axis of the file. */
function completed({ vertices, corners, partOf }: SurfaceMesh, axis: number, plane: number): SurfaceMesh {
  const own = 3 * corners.length;
  const positions = new Float32Array(2 * own);
  for (let h = 0; h < corners.length; h++) {
    // The second and third corners change places, so that the image faces outwards too.
    const image = own + 3 * (h % 3 === 0 ? h : h % 3 === 1 ? h + 1 : h - 1);
    for (let k = 0; k < 3; k++) {
      const value = vertices[3 * corners[h] + k];
      positions[3 * h + k] = value;
      positions[image + k] = k === axis ? 2 * plane - value : value;
    }
  }
  const both = new Uint16Array(2 * partOf.length);
  both.set(partOf);
  both.set(partOf, partOf.length);
  return surfaceMesh({ positions, partOf: both });
}
