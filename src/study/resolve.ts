import { dirname, resolve } from "node:path";
import type { Fault } from "./faults.js";
import { listed, shownValue } from "./message-text.js";
import { folderName, nameFault } from "./names.js";
import { nearest } from "./nearest.js";
import type { StudyDocument } from "./schema.js";
import type { PartRule, Study } from "./study.js";

/** Speeds closer than this, relative, are the same point of a sweep. */
const SAME_SPEED = 1e-6;
/** Radians: yaws that differ by less are one; a hundredth of a millionth of a degree. */
const SAME_YAW = 1e-10;

/**
 * A study from a document that fits the schema, and all that is wrong with it beyond the schema: names, baseline, axes, doubled
 * speeds and files. `path` is absolute. Touches no file.
 */
export function resolveStudy(document: StudyDocument, path: string): { study: Study; faults: Fault[] } {
  const folder = dirname(path);
  const variants = Object.entries(document.variants).map(([name, { files }]) => ({
    name,
    files: files.map((file) => resolve(folder, file)),
  }));
  const parts: PartRule[] = Object.entries(document.parts).flatMap(([name, { match, rotating }]) =>
    (Array.isArray(match) ? match : [match]).map((pattern) => ({ name, match: pattern, rotating })),
  );
  const { air, body, mesh, solver, stop } = document;
  const study: Study = {
    name: document.study,
    question: document.question?.trim() || null,
    path,
    folder,
    air,
    speeds: document.speed,
    yaws: document.yaw.map((yaw) => yaw + 0),
    ground: document.ground,
    baseline: document.baseline ?? variants[0]?.name ?? "",
    variants,
    body: {
      unit: body.unit,
      travel: body.travel,
      up: body.up,
      clearance: body.clearance,
      wheelbase: body.wheelbase,
      referenceArea: body["reference-area"],
    },
    parts,
    mesh: { cells: Math.round(mesh.cells), half: mesh.half, yPlus: mesh["y-plus"], layers: mesh.layers, shift: mesh.shift },
    solver: {
      turbulence: solver.turbulence,
      mode: solver.mode,
      start: solver.start,
      relaxation: solver.relaxation,
      mostIterations: solver["most-iterations"],
    },
    stop,
  };
  const faults = [
    ...variantFaults(study),
    ...ruleFaults(parts),
    ...speedFaults(study.speeds),
    ...yawFaults(study.yaws),
    ...fileFaults(document),
  ];
  if (body.travel[1] === body.up[1])
    faults.push({
      path: ["body", "up"],
      at: "value",
      code: "study-axes",
      message: `Keys 'body.travel' (${body.travel}) and 'body.up' (${body.up}) lie on one axis; expected two different axes.`,
      remedy: "Give the direction of travel and up along different axes, such as travel: -x and up: +z.",
    });
  return { study, faults };
}

function variantFaults({ variants, baseline }: Study): Fault[] {
  if (variants.length === 0)
    return [
      {
        path: ["variants"],
        at: "key",
        code: "study-no-variants",
        message: "Key 'variants' is empty; expected variants by name, each with its files.",
        remedy: "Add at least one, such as open-bed: { files: [body.stl] }.",
      },
    ];
  const faults: Fault[] = [];
  const folders = new Map<string, string>();
  for (const { name } of variants) {
    const wrong = nameFault(name);
    if (wrong !== null) {
      faults.push(badName("variants", name, wrong));
      continue;
    }
    const folder = folderName(name);
    const other = folders.get(folder);
    if (other !== undefined)
      faults.push({
        path: ["variants", name],
        at: "key",
        code: "study-same-folder",
        message: `Variants '${other}' and '${name}' would share the case folder '${folder}'.`,
        remedy: "Rename one of them; accents, case and blanks do not tell folders apart.",
      });
    folders.set(folder, name);
  }
  if (!variants.some(({ name }) => name === baseline)) {
    const names = variants.map(({ name }) => name);
    const meant = nearest(baseline, names);
    faults.push({
      path: ["baseline"],
      at: "value",
      code: "study-baseline",
      message: `Key 'baseline' is ${shownValue(baseline)}, which is not among the variants${meant === null ? "" : ` (did you mean '${meant}'?)`}; expected one of: ${listed(names)}.`,
      remedy: "Name one of the variants, or remove the key to take the first.",
    });
  }
  return faults;
}

function ruleFaults(parts: PartRule[]): Fault[] {
  return [...new Set(parts.map(({ name }) => name))].flatMap((name) => {
    const wrong = nameFault(name);
    return wrong === null ? [] : [badName("parts", name, wrong)];
  });
}

const badName = (block: string, name: string, wrong: string): Fault => ({
  path: [block, name],
  at: "key",
  code: "study-name",
  message: `The name ${shownValue(name)} under '${block}' ${wrong}.`,
  remedy: "Names become folders and labels: use letters, digits, blanks and - _ . + and begin with a letter or digit.",
});

function speedFaults(speeds: number[]): Fault[] {
  return speeds.flatMap((speed, k) => {
    const twin = speeds.findIndex((other) => Math.abs(other - speed) <= SAME_SPEED * speed);
    if (twin >= k) return [];
    return [
      {
        path: ["speed", k],
        at: "value" as const,
        code: "study-same-speed",
        message: `Keys 'speed[${twin}]' and 'speed[${k}]' are the same speed, ${Number(speed.toPrecision(6))} m/s.`,
        remedy: "Remove one of the two.",
      },
    ];
  });
}

function yawFaults(yaws: number[]): Fault[] {
  return yaws.flatMap((yaw, k) => {
    const twin = yaws.findIndex((other) => Math.abs(other - yaw) <= SAME_YAW);
    if (twin >= k) return [];
    return [
      {
        path: ["yaw", k],
        at: "value" as const,
        code: "study-same-yaw",
        message: `Keys 'yaw[${twin}]' and 'yaw[${k}]' are the same angle, ${Number(((180 / Math.PI) * yaw).toPrecision(6))} deg.`,
        remedy: "Remove one of the two.",
      },
    ];
  });
}

function fileFaults(document: StudyDocument): Fault[] {
  return Object.entries(document.variants).flatMap(([name, { files }]) =>
    files.flatMap((file, k): Fault[] => {
      const place = { path: ["variants", name, "files", k], at: "value" as const };
      if (file.includes("\0"))
        return [
          {
            ...place,
            code: "study-file-name",
            message: `Variant '${name}' names a file with a zero character in its name.`,
            remedy: "Correct the path.",
          },
        ];
      if (files.findIndex((other) => resolve("/", other) === resolve("/", file)) < k)
        return [
          {
            ...place,
            code: "study-same-file",
            message: `Variant '${name}' names the file ${file} twice.`,
            remedy: "Keep it once; its parts would be counted twice.",
          },
        ];
      return [];
    }),
  );
}
