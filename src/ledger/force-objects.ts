import type { Vector3 } from "../geometry/vector.js";
import type { History } from "../history/history.js";
import type { CaseDictionaries } from "./case-dictionaries.js";
import { cutHistory, onCommonRows } from "./common-rows.js";

/** x, y, z of a vector, one value per row each. */
export type VectorSeries = [Float64Array, Float64Array, Float64Array];

/** What one function object recorded of the forces on its patches. */
export interface ForceObject {
  name: string;
  /** Patches as the control dictionary names them; null when it does not. */
  patches: string[] | null;
  /** `rhoInf` of the object in the control dictionary as it stands now, kg/m³; null when it has none */
  statedDensity: number | null;
  time: Float64Array;
  /** N (times the density of the object), in the case's axes; moments about `centre` */
  forces: { total: VectorSeries; pressure: VectorSeries; viscous: VectorSeries } | null;
  moments: { total: VectorSeries; centre: Vector3 | null } | null;
  /** As written, on the reference values of `header`. Pitch about the header's own pitch axis. */
  coefficients: {
    cd: Float64Array;
    cl: Float64Array;
    cs: Float64Array | null;
    pitch: Float64Array | null;
    header: { area?: number; length?: number; speed?: number; centre?: Vector3; drag?: Vector3; lift?: Vector3; pitch?: Vector3 };
    file: string;
  } | null;
  histories: History[];
}

const column = (history: History, name: string): Float64Array | null =>
  history.columns.find((each) => each.name === name)?.values.subarray(0, history.rows) ?? null;

function vectorColumns(history: History, prefix: string): VectorSeries | null {
  const parts = ["x", "y", "z"].map((axis) => column(history, `${prefix}_${axis}`));
  return parts.every((part) => part !== null) ? (parts as VectorSeries) : null;
}

const numberIn = (history: History, key: string): number | undefined => {
  const value = history.header[key];
  return typeof value === "number" ? value : undefined;
};

const vectorIn = (history: History, key: string): Vector3 | undefined => {
  const value = history.header[key];
  return Array.isArray(value) ? value : undefined;
};

/** The force objects among the histories of a case, forces, moments and coefficients of one object together. Rows without a table are not objects. */
export function forceObjects(
  histories: readonly History[],
  dictionaries: Pick<CaseDictionaries, "patchesOf" | "densityOf">,
): ForceObject[] {
  const byName = new Map<string, History[]>();
  for (const history of histories)
    if (history.rows > 0 && ["forces", "moments", "coefficients"].includes(history.layout))
      byName.set(history.object, [...(byName.get(history.object) ?? []), history]);
  return [...byName]
    .map(([name, own]) => objectOf(name, own, dictionaries))
    .filter((object) => object.forces || object.coefficients);
}

function objectOf(name: string, own: History[], dictionaries: Pick<CaseDictionaries, "patchesOf" | "densityOf">): ForceObject {
  // A run that was killed leaves one table a row longer than the other.
  const { kept } = onCommonRows(own, timesOf, cutHistory);
  const force = kept.find((history) => history.layout === "forces");
  const moment = kept.find((history) => history.layout === "moments");
  const coefficient = kept.find((history) => history.layout === "coefficients");
  return {
    name,
    patches: dictionaries.patchesOf(name),
    statedDensity: dictionaries.densityOf(name),
    time: timesOf(kept[0]),
    forces: force ? forcesOf(force) : null,
    moments: moment ? momentsOf(moment) : null,
    coefficients: coefficient ? coefficientsOf(coefficient) : null,
    histories: own,
  };
}

const timesOf = (history: History): Float64Array => history.columns[0].values.subarray(0, history.rows);

function forcesOf(history: History): ForceObject["forces"] {
  const total = vectorColumns(history, "total");
  const pressure = vectorColumns(history, "pressure");
  const viscous = vectorColumns(history, "viscous");
  return total && pressure && viscous ? { total, pressure, viscous } : null;
}

function momentsOf(history: History): ForceObject["moments"] {
  const total = vectorColumns(history, "total");
  return total ? { total, centre: vectorIn(history, "CofR") ?? null } : null;
}

function coefficientsOf(history: History): ForceObject["coefficients"] {
  const cd = column(history, "Cd");
  const cl = column(history, "Cl");
  if (!cd || !cl) return null;
  return {
    cd,
    cl,
    cs: column(history, "Cs"),
    pitch: column(history, "CmPitch") ?? column(history, "Cm"),
    header: {
      area: numberIn(history, "Aref"),
      length: numberIn(history, "lRef"),
      speed: numberIn(history, "magUInf"),
      centre: vectorIn(history, "CofR"),
      drag: vectorIn(history, "dragDir"),
      lift: vectorIn(history, "liftDir"),
      pitch: vectorIn(history, "pitchAxis"),
    },
    file: history.segments.find((segment) => segment.used > 0)?.file ?? history.object,
  };
}
