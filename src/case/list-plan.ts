import type { CasePlan, Planned, PlannedNumber } from "./plan.js";

/** All numbers of a plan as rows, in the plan's order; keys are paths such as `domain.min`. */
export function listPlan(plan: CasePlan): PlannedNumber[] {
  const rows: PlannedNumber[] = [];
  const collect = (node: unknown, path: string): void => {
    if (node === null || typeof node !== "object" || Array.isArray(node)) return;
    if (isPlanned(node)) {
      const { value, unit, reason, source } = node;
      rows.push({ key: path, value: typeof value === "boolean" ? (value ? "yes" : "no") : value, unit, reason, source });
      return;
    }
    for (const [key, child] of Object.entries(node)) collect(child, path ? `${path}.${key}` : key);
  };
  const { condition: _condition, placement: _placement, boxes, parts, ...numbers } = plan;
  collect(numbers, "");
  for (const { name, box, level } of boxes)
    rows.push({
      key: `boxes.${name}`,
      value: [...box.min, ...box.max],
      unit: "m",
      reason: `refinement level ${level} from the first corner to the second`,
      source: "measured with OpenFOAM v1912",
    });
  for (const { name, level, wheel } of parts) {
    rows.push({ key: `parts.${name}.level`, value: level, unit: "", reason: levelReason(level, plan), source: "common practice" });
    if (wheel)
      rows.push({
        key: `parts.${name}.omega`,
        value: wheel.omega,
        unit: "rad/s",
        reason: `turns about (${wheel.centre.map((x) => x.toFixed(3)).join(" ")}) m, axis to the right: its lowest point moves with the road`,
        source: "speed over the height of the fitted axle",
      });
  }
  return rows;
}

const levelReason = (level: number, { mesh }: CasePlan): string =>
  level > mesh.surfaceLevel.value ? "a small part: cells of half the size" : "the surface level of the study";

function isPlanned(node: object): node is Planned<number | string | number[] | boolean> {
  return "value" in node && "unit" in node && "reason" in node && "source" in node;
}
