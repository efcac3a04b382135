import type { StudyKey } from "../../src/study/keys.js";

/** The study keys as the Markdown table of the README. */
export function keyTable(keys: readonly StudyKey[]): string {
  const rows = keys.map(({ key, default: preset, description }) => `| \`${key}\` | ${preset ?? ""} | ${description} |`);
  return ["| key | default | meaning |", "|---|---|---|", ...rows].join("\n");
}
