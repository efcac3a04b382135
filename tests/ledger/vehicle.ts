import { mkdir, writeFile } from "node:fs/promises";
import { dirname, join } from "node:path";
import type { Vector3 } from "../../src/geometry/vector.js";

/** A force that acts at a point, row by row: what a part of a made-up vehicle does. Newtons and metres in the case's axes. */
export interface ActingForce {
  name: string;
  at: Vector3;
  pressure: Vector3[];
  friction: Vector3[];
}

/** Reference values of a table. */
export interface TableReference {
  speed: number;
  area: number;
  length: number;
  density: number;
  centre: Vector3;
  drag: Vector3;
  lift: Vector3;
}

export const saeReference: TableReference = {
  speed: 30,
  area: 2.1,
  length: 2.7,
  density: 1.225,
  centre: [0, 0, 0],
  drag: [1, 0, 0],
  lift: [0, 0, 1],
};

export const add = (a: Vector3, b: Vector3): Vector3 => [a[0] + b[0], a[1] + b[1], a[2] + b[2]];
export const scale = (a: Vector3, factor: number): Vector3 => [a[0] * factor, a[1] * factor, a[2] * factor];
export const dot = (a: Vector3, b: Vector3): number => a[0] * b[0] + a[1] * b[1] + a[2] * b[2];
export const cross = (a: Vector3, b: Vector3): Vector3 => [
  a[1] * b[2] - a[2] * b[1],
  a[2] * b[0] - a[0] * b[2],
  a[0] * b[1] - a[1] * b[0],
];
const minus = (a: Vector3, b: Vector3): Vector3 => add(a, scale(b, -1));
const zero: Vector3 = [0, 0, 0];

/** Pressure and friction force of some parts together at a row, and their moments about a point. */
function loads(parts: readonly ActingForce[], row: number, centre: Vector3) {
  let [pressure, friction, pressureMoment, frictionMoment] = [zero, zero, zero, zero];
  for (const part of parts) {
    const arm = minus(part.at, centre);
    pressure = add(pressure, part.pressure[row]);
    friction = add(friction, part.friction[row]);
    pressureMoment = add(pressureMoment, cross(arm, part.pressure[row]));
    frictionMoment = add(frictionMoment, cross(arm, part.friction[row]));
  }
  return { pressure, friction, pressureMoment, frictionMoment };
}

const number = (value: number, digits: number): string => value.toExponential(digits - 1);
const bracketed = (vector: Vector3, digits: number): string => `(${vector.map((x) => number(x, digits)).join(" ")})`;

/** `force.dat` and `moment.dat` as v1912 writes them (layout F5), over the parts given. */
export function forceTables(parts: readonly ActingForce[], centre: Vector3, density: number, digits = 12, times = timesOf(parts)) {
  // The solver multiplies kinematic forces by rhoInf; the parts hold the forces of air with density 1.
  const table = (title: string, rowOf: (row: number) => Vector3[]) =>
    [
      `# ${title}`,
      `# CofR        : ${bracketed(centre, digits)}`,
      "#",
      "# Time        \t(total_x total_y total_z)\t(pressure_x pressure_y pressure_z)\t(viscous_x viscous_y viscous_z)",
      ...times.map((time, row) => {
        const [pressure, friction] = rowOf(row).map((each) => scale(each, density));
        return `${time}\t${[add(pressure, friction), pressure, friction].map((each) => bracketed(each, digits)).join("\t")}`;
      }),
      "",
    ].join("\n");
  return {
    force: table("Force", (row) => {
      const { pressure, friction } = loads(parts, row, centre);
      return [pressure, friction];
    }),
    moment: table("Moment", (row) => {
      const { pressureMoment, frictionMoment } = loads(parts, row, centre);
      return [pressureMoment, frictionMoment];
    }),
  };
}

export interface CoefficientLayout {
  columns: string[];
  /** the header's pitch axis points to the left */
  reversed?: boolean;
  title: string;
}

export const layouts = {
  /** Foundation 4 to 14, and ESI up to v1812 */
  C4: { title: "Force coefficients", columns: ["Cm", "Cd", "Cl", "Cl(f)", "Cl(r)"] },
  /** ESI v1906 to v2112 */
  C6: {
    title: "Force coefficients",
    columns: ["Cd", "Cs", "Cl", "CmRoll", "CmPitch", "CmYaw", "Cd(f)", "Cd(r)", "Cs(f)", "Cs(r)", "Cl(f)", "Cl(r)"],
  },
  /** ESI from v2206 on: alphabetical */
  C7: {
    title: "Force and moment coefficients",
    columns: ["Cd", "Cd(f)", "Cd(r)", "Cl", "Cl(f)", "Cl(r)", "CmPitch", "CmRoll", "CmYaw", "Cs", "Cs(f)", "Cs(r)"],
  },
} satisfies Record<string, CoefficientLayout>;

/** A coefficient table over the parts given, in one of the solver's layouts. */
export function coefficientTable(
  parts: readonly ActingForce[],
  reference: TableReference,
  layout: CoefficientLayout = layouts.C6,
  digits = 12,
  times = timesOf(parts),
): string {
  const { speed, area, length, centre, drag, lift } = reference;
  const side = cross(lift, drag);
  const pitchAxis = layout.reversed ? scale(side, -1) : side;
  const unit = 0.5 * speed ** 2 * area;
  const rows = times.map((time, row) => {
    const { pressure, friction, pressureMoment, frictionMoment } = loads(parts, row, centre);
    const [force, moment] = [add(pressure, friction), add(pressureMoment, frictionMoment)];
    const [cd, cl, cs] = [drag, lift, side].map((axis) => dot(force, axis) / unit);
    const pitch = dot(moment, pitchAxis) / (unit * length);
    const [roll, yaw] = [drag, lift].map((axis) => dot(moment, axis) / (unit * length));
    const values: Record<string, number> = {
      Cd: cd,
      Cl: cl,
      Cs: cs,
      Cm: pitch,
      CmPitch: pitch,
      CmRoll: roll,
      CmYaw: yaw,
      "Cd(f)": cd / 2 + roll,
      "Cd(r)": cd / 2 - roll,
      "Cs(f)": cs / 2 + yaw,
      "Cs(r)": cs / 2 - yaw,
      "Cl(f)": cl / 2 + pitch,
      "Cl(r)": cl / 2 - pitch,
    };
    return [time, ...layout.columns.map((column) => number(values[column], digits))].join("\t");
  });
  return [
    `# ${layout.title}`,
    `# dragDir     : ${bracketed(drag, digits)}`,
    `# liftDir     : ${bracketed(lift, digits)}`,
    `# pitchAxis   : ${bracketed(pitchAxis, digits)}`,
    `# magUInf     : ${number(speed, digits)}`,
    `# lRef        : ${number(length, digits)}`,
    `# Aref        : ${number(area, digits)}`,
    `# CofR        : ${bracketed(centre, digits)}`,
    `# ${["Time", ...layout.columns].join("\t")}`,
    ...rows,
    "",
  ].join("\n");
}

const timesOf = (parts: readonly ActingForce[]): number[] => (parts[0]?.pressure ?? []).map((_, row) => row + 1);

/** The same force in every row, with an optional disturbance of its drag. */
export function steady(
  name: string,
  at: Vector3,
  pressure: Vector3,
  friction: Vector3 = [0, 0, 0],
  rows = 60,
  disturbance: (row: number) => number = () => 0,
): ActingForce {
  const every = <T>(value: (row: number) => T): T[] => Array.from({ length: rows }, (_, row) => value(row));
  return {
    name,
    at,
    pressure: every((row) => add(pressure, [disturbance(row), 0, 0])),
    friction: every(() => friction),
  };
}

/** Writes files of a case: path below the folder, and text. */
export async function writeCase(folder: string, files: Record<string, string>): Promise<void> {
  for (const [path, text] of Object.entries(files)) {
    await mkdir(dirname(join(folder, path)), { recursive: true });
    await writeFile(join(folder, path), text);
  }
}

/** Tables of a forces object, as files of a case. */
export function forcesObject(name: string, parts: readonly ActingForce[], centre: Vector3, density: number, digits = 12) {
  const { force, moment } = forceTables(parts, centre, density, digits);
  return { [`postProcessing/${name}/0/force.dat`]: force, [`postProcessing/${name}/0/moment.dat`]: moment };
}

export const coefficientsObject = (name: string, table: string) => ({ [`postProcessing/${name}/0/coefficient.dat`]: table });

/** `constant/polyMesh/boundary` with wall patches, and others by type. */
export function boundaryFile(walls: string[], others: Record<string, string> = {}, groups: Record<string, string[]> = {}): string {
  const entry = (name: string, type: string) =>
    `    ${name} { type ${type}; inGroups ${(groups[name] ?? []).length}(${(groups[name] ?? []).join(" ")}); nFaces 1; startFace 1; }`;
  const entries = [...walls.map((name) => entry(name, "wall")), ...Object.entries(others).map(([name, type]) => entry(name, type))];
  return `FoamFile { version 2.0; format ascii; class polyBoundaryMesh; object boundary; }\n${entries.length}\n(\n${entries.join("\n")}\n)\n`;
}

/** `system/controlDict` with force objects: patches as they stand in the dictionary, and a density. */
export function controlDict(objects: Record<string, { patches: string; density?: number }>): string {
  const entries = Object.entries(objects).map(
    ([name, { patches, density }]) =>
      `    ${name} { type forces; patches (${patches}); ${density === undefined ? "" : `rho rhoInf; rhoInf ${density}; `}}`,
  );
  return `FoamFile { version 2.0; format ascii; class dictionary; object controlDict; }\nfunctions\n{\n${entries.join("\n")}\n}\n`;
}
