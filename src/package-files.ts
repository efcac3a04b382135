import { existsSync, readFileSync } from "node:fs";
import { dirname, join } from "node:path";
import { fileURLToPath } from "node:url";

/** Folder of the installed package: the nearest one above this module that holds templates/ and package.json. */
function findRoot(): string {
  let folder = dirname(fileURLToPath(import.meta.url));
  while (!(existsSync(join(folder, "package.json")) && existsSync(join(folder, "templates")))) {
    const parent = dirname(folder);
    if (parent === folder) throw new Error("the package's own files (templates/) are missing: install it again");
    folder = parent;
  }
  return folder;
}

export const packageRoot: string = findRoot();

/** Path of a file that ships with the package, such as `packageFile("templates", "case")`. */
export const packageFile = (...parts: string[]): string => join(packageRoot, ...parts);

export const packageVersion: string = (JSON.parse(readFileSync(join(packageRoot, "package.json"), "utf8")) as { version: string })
  .version;
