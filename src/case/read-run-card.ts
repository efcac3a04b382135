import { readFile } from "node:fs/promises";
import { join } from "node:path";
import { z } from "zod";
import { inputProblem } from "../errors.js";
import { type RunCard, runCardName } from "./run-card.js";

const number = z.number();
const vector = z.tuple([number, number, number]);
const box = z.object({ min: vector, max: vector });
const placement = z.object({
  orientation: z.object({ unit: z.enum(["m", "mm", "cm", "in", "ft"]), travel: axis(), up: axis() }),
  scale: number,
  rotation: z.tuple([vector, vector, vector]),
  shift: vector,
});

function axis() {
  return z.enum(["+x", "-x", "+y", "-y", "+z", "-z"]);
}

const mesh = z.object({
  domain: box,
  baseCell: number,
  divisions: vector,
  surfaceLevel: number,
  boxes: z.array(z.object({ name: z.string(), box, level: number })),
  predictedCells: number,
});

const runCard = z.object({
  schema: z.literal("dragledger/run-card/1"),
  tool: z.object({ name: z.literal("dragledger"), version: z.string() }),
  study: z.object({ name: z.string(), question: z.string().nullable(), baseline: z.string() }),
  variant: z.string(),
  condition: z.object({ name: z.string(), speed: number, yaw: number, ground: z.enum(["moving", "fixed"]) }),
  reference: z.object({
    area: number,
    length: number,
    centre: vector,
    speed: number,
    density: number,
    symmetryFactor: z.union([z.literal(1), z.literal(2)]),
  }),
  wheelbase: number.nullable(),
  parts: z.array(z.object({ name: z.string(), patch: z.string() })),
  leftOut: z.array(z.string()).optional(),
  placement,
  body: z.object({ bounds: box, frontalArea: number }),
  mesh,
  // A run works in these folders: none but our own names.
  ladder: z.array(z.object({ folder: z.string().regex(/^ladder\/[1-9]$/), mesh, mostIterations: number })).optional(),
  stop: z.object({ drag: number, lift: number, confidence: number }),
  mostIterations: number,
  plan: z.array(
    z.object({
      key: z.string(),
      value: z.union([number, z.string(), z.array(number)]),
      unit: z.string(),
      reason: z.string(),
      source: z.string(),
    }),
  ),
  hashes: z.object({
    inputs: z.array(z.object({ path: z.string(), sha256: z.string() })),
    templates: z.string(),
    files: z.record(z.string(), z.string()),
  }),
  recorded: z.string().optional(),
});

/** The run card of a case folder; null for a folder without one. Throws an input problem for a card that is damaged or of a later kind. */
export async function readRunCard(folder: string): Promise<RunCard | null> {
  const path = join(folder, runCardName);
  let text: string;
  try {
    text = await readFile(path, "utf8");
  } catch (error) {
    const { code } = error as NodeJS.ErrnoException;
    if (code === "ENOENT" || code === "ENOTDIR") return null;
    throw inputProblem({
      code: "unreadable-run-card",
      message: `The run card cannot be read (${code}).`,
      where: path,
      remedy: "Check the permissions of the case folder.",
      cause: error,
    });
  }
  let content: unknown;
  try {
    content = JSON.parse(text);
  } catch (error) {
    throw inputProblem({
      code: "damaged-run-card",
      message: `The run card is no JSON: ${(error as Error).message}.`,
      where: path,
      remedy: "Prepare the study again, or remove the file to read the case as one made elsewhere.",
      cause: error,
    });
  }
  const checked = runCard.safeParse(content);
  if (!checked.success) {
    const [issue] = checked.error.issues;
    throw inputProblem({
      code: "damaged-run-card",
      message: `The run card is not as this version writes it: ${issue!.path.join(".") || "document"}: ${issue!.message}.`,
      where: path,
      remedy: "Prepare the study again with this version, or remove the file to read the case as one made elsewhere.",
    });
  }
  return checked.data as RunCard;
}
