import { readdirSync, readFileSync } from "node:fs";
import { dirname, join, relative, resolve } from "node:path";
import { describe, expect, test } from "vitest";

const root = resolve(import.meta.dirname, "..");

/** Which rooms each room may import; the table of DEVELOPERS.md. */
const arrows: Record<string, string[]> = {
  geometry: [],
  flow: ["geometry"],
  study: ["geometry", "flow"],
  openfoam: ["geometry"],
  case: ["geometry", "flow", "study", "openfoam"],
  history: ["openfoam", "geometry"],
  run: ["case", "study", "openfoam", "history"],
  ledger: ["case", "study", "openfoam", "history", "geometry"],
  compare: ["ledger", "case", "history"],
  picture: ["geometry"],
  report: ["geometry", "picture", "study", "case", "openfoam", "history", "ledger", "compare"],
};

function sources(folder: string): string[] {
  return readdirSync(folder, { withFileTypes: true }).flatMap((entry) => {
    const path = join(folder, entry.name);
    if (entry.isDirectory()) return sources(path);
    return entry.name.endsWith(".ts") ? [path] : [];
  });
}

function imports(path: string): string[] {
  const text = readFileSync(path, "utf8");
  return [...text.matchAll(/(?:from|import)\s*\(?\s*"(\.[^"]+)"/g)].map(([, target]) =>
    relative(root, resolve(dirname(path), target)),
  );
}

describe("imports point up the flow", () => {
  for (const [room, allowed] of Object.entries(arrows))
    test(`src/${room} imports only ${["its own files", ...allowed].join(", ")}`, () => {
      const wrong = sources(join(root, "src", room)).flatMap((path) =>
        imports(path)
          .filter((target) => {
            const [top, other, ...rest] = target.split("/");
            if (top !== "src") return true;
            return rest.length > 0 && other !== room && !allowed.includes(other);
          })
          .map((target) => `${relative(root, path)} -> ${target}`),
      );
      expect(wrong).toEqual([]);
    });

  test("every room of src is in the table", () => {
    const rooms = readdirSync(join(root, "src"), { withFileTypes: true })
      .filter((entry) => entry.isDirectory())
      .map((entry) => entry.name);
    expect(rooms.sort()).toEqual(Object.keys(arrows).sort());
  });

  test("nothing in src prints, exits or reads arguments", () => {
    const wrong = sources(join(root, "src"))
      .filter((path) => !path.includes("/viewer/"))
      .filter((path) => /\bconsole\.|process\.(exit|argv|stdout|stderr)/.test(readFileSync(path, "utf8")))
      .map((path) => relative(root, path));
    expect(wrong).toEqual([]);
  });
});
