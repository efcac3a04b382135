/** x, y, z. The frame and unit are said where a vector is declared. */
export type Vector3 = [number, number, number];

export interface Box {
  min: Vector3;
  max: Vector3;
}
