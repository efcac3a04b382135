import { readdirSync, readFileSync } from "node:fs";
import { join } from "node:path";
import ejs from "ejs";
import { packageFile } from "../package-files.js";
import { type CaseKind, caseView } from "./case-view.js";
import { sha256 } from "./hash.js";
import { firstOrderFolder, rungPlan } from "./ladder.js";
import type { CasePlan } from "./plan.js";
import { header, templateText } from "./template-text.js";

/** One file of a case before it is written. */
export interface CaseFile {
  /** relative to the case folder, with / */
  path: string;
  content: string | Uint8Array;
  executable: boolean;
}

interface Template {
  path: string;
  render: (data: object) => string;
}

interface Templates {
  templates: Template[];
  hash: string;
}

let loaded: Templates | null = null;

/** The templates of the package, compiled once, and one hash over all of them. */
function caseTemplates(): Templates {
  loaded ??= readTemplates(packageFile("templates", "case"));
  return loaded;
}

function readTemplates(root: string): Templates {
  const files = readdirSync(root, { recursive: true, encoding: "utf8" })
    .map((path) => path.replaceAll("\\", "/"))
    .filter((path) => path.endsWith(".ejs"))
    .sort()
    .map((path) => ({ path: path.slice(0, -".ejs".length), text: readFileSync(join(root, path), "utf8") }));
  const templates = files.map(({ path, text }) => ({
    path,
    render: ejs.compile(text, { strict: true, localsName: "data", destructuredLocals: ["it", "header"], escape: templateText }),
  }));
  return { templates, hash: sha256(files.map(({ path, text }) => `${path}\0${text}\0`).join("")) };
}

/** sha256 over the paths and texts of all case templates. */
export const templatesHash = (): string => caseTemplates().hash;

/**
 * All text files of a case, those of its ladder in folders of their own. The grid that starts from uniform flow, the coarsest, has
 * a folder for its first iterations. Pure but for reading the package's own templates the first time.
 */
export function renderCase(plan: CasePlan): CaseFile[] {
  const rungs = plan.ladder.flatMap((rung, k) => {
    const own = rungPlan(plan, rung);
    const tree = rendered(own, "rung").filter(({ path }) => path.includes("/"));
    return below(rung.folder, k === 0 ? [...tree, ...firstOrder(own)] : tree);
  });
  return [...rendered(plan, "case"), ...rungs, ...(plan.ladder.length === 0 ? firstOrder(plan) : [])];
}

const below = (folder: string, files: CaseFile[]): CaseFile[] => files.map((file) => ({ ...file, path: `${folder}/${file.path}` }));

const ofSolver = ["system/controlDict", "system/fvSchemes", "system/fvSolution"];

const firstOrder = (plan: CasePlan): CaseFile[] =>
  below(
    firstOrderFolder,
    rendered(plan, "first-order").filter(({ path }) => ofSolver.includes(path)),
  );

function rendered(plan: CasePlan, kind: CaseKind): CaseFile[] {
  const it = caseView(plan, kind);
  return caseTemplates().templates.flatMap(({ path, render }) => {
    const content = render({ it, header });
    // A template that says nothing is of another set-up: the case has no such file.
    return content.trim() === "" ? [] : [{ path, content, executable: path === "Allrun" || path === "Allclean" }];
  });
}
