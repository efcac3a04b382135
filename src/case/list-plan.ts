import type { CasePlan, Planned, PlannedNumber } from "./plan.js";
import { source } from "./planned.js";

/** All numbers of a plan as rows, in the plan's order; keys are paths such as `domain.min`. */
export function listPlan(plan: CasePlan): PlannedNumber[] {
  const { condition: _condition, placement: _placement, boxes, parts, ladder, study: _study, variant: _variant, ...numbers } = plan;
  const rows: PlannedNumber[] = [];
  collect(numbers, "", rows);
  for (const { name, box, level } of boxes)
    rows.push({
      key: `boxes.${name}`,
      value: [...box.min, ...box.max],
      unit: "m",
      reason: `from corner to corner: cells of ${edgeAt(plan, level)} m (level ${level}), around the baseline for all variants`,
      source: source.boxes,
    });
  for (const { name, level, wheel } of parts) {
    const finer = level > plan.mesh.surfaceLevel.value;
    rows.push({
      key: `parts.${name}.level`,
      value: level,
      unit: "",
      reason: `cells of ${edgeAt(plan, level)} m${finer ? ": a small part, one level more than the body" : ""}`,
      source: source.practice,
    });
    if (wheel !== null)
      rows.push({
        key: `parts.${name}.omega`,
        value: wheel.omega,
        unit: "rad/s",
        reason: `turns about (${wheel.centre.map((x) => x.toFixed(3)).join(" ")}) m, axis to the right, so that its lowest point moves with the road`,
        source: "speed over the height of the fitted axle",
      });
  }
  ladder.forEach(({ folder: _folder, ...numbers }, k) => {
    collect(numbers, `ladder.${k + 1}`, rows);
  });
  return rows;
}

const edgeAt = ({ domain }: CasePlan, level: number): number => Number((domain.baseCell.value / 2 ** level).toPrecision(3));

function collect(node: unknown, path: string, rows: PlannedNumber[]): void {
  if (node === null || typeof node !== "object") return;
  if (isPlanned(node)) {
    const { value, unit, reason, source } = node;
    rows.push({ key: path, value: typeof value === "boolean" ? (value ? "yes" : "no") : value, unit, reason, source });
    return;
  }
  for (const [key, child] of Object.entries(node)) collect(child, path === "" ? key : `${path}.${key}`, rows);
}

function isPlanned(node: object): node is Planned<number | string | number[] | boolean> {
  return "value" in node && "unit" in node && "reason" in node && "source" in node;
}
