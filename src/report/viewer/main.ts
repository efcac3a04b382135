import { differenceTone, pickedTone, toneOf } from "../../picture/tones.js";
import { Choices } from "../../picture/viewer/choices.js";
import { listen, views } from "../../picture/viewer/eye.js";
import { BodyScene } from "../../picture/viewer/scene.js";
import { unpackMesh } from "../../picture/viewer/unpack.js";
import type { PackedPart, PackedScene } from "../packed.js";
import { Marks } from "./marks.js";
import { preparePage } from "./page.js";

// Runs in the reader's browser, inside the page. Everything it needs is in the page; without WebGL the still pictures stay.

const paints = { parts: "parts", difference: "drag difference" };

preparePage();
const data = document.getElementById("bodies");
const viewer = document.getElementById("viewer");
if (data && viewer) void start(viewer, JSON.parse(data.textContent ?? "") as PackedScene);

async function start(viewer: HTMLElement, packed: PackedScene): Promise<void> {
  const canvas = viewer.querySelector<HTMLCanvasElement>("canvas")!;
  let scene: BodyScene;
  try {
    const meshes = await Promise.all(packed.meshes.map(unpackMesh));
    // The canvas gets its size from the page, so it must be there before the scene looks at it.
    viewer.classList.add("live");
    scene = new BodyScene(canvas);
    scene.load(meshes, packed.variants);
  } catch {
    viewer.classList.remove("live");
    viewer.dataset.drawn = "still";
    return;
  }
  control(viewer, canvas, scene, packed);
  viewer.dataset.drawn = "scene";
}

function control(viewer: HTMLElement, canvas: HTMLCanvasElement, scene: BodyScene, { variants, largest }: PackedScene): void {
  const status = viewer.querySelector<HTMLElement>("[role=status]")!;
  let variant = variants[0]!;
  let paint = paints.parts;
  let picked: string | null = null;

  const rowOf = (part: PackedPart): string => part.row ?? part.name;
  const repaint = (): void => {
    const parts = new Map(variant.parts.map((part) => [part.name, part]));
    scene.paint(variant.name, (name) => {
      const part = parts.get(name)!;
      if (picked !== null && rowOf(part) === picked) return pickedTone;
      return paint === paints.parts ? toneOf(part.tone) : differenceTone(part.delta, largest);
    });
    viewer.classList.toggle("by-difference", paint === paints.difference);
    status.textContent = said(variant, picked);
  };
  const pick = (part: string | null): void => {
    picked = part === picked ? null : part;
    marks.mark(picked);
    repaint();
  };
  const marks = new Marks("#body", pick);
  const place = (name: string): HTMLElement => viewer.querySelector<HTMLElement>(`[data-choices="${name}"]`)!;

  const chooseVariant = new Choices(
    place("variant"),
    variants.map(({ name }) => name),
    (name) => {
      variant = variants.find((each) => each.name === name)!;
      scene.show(name);
      repaint();
    },
  );
  new Choices(
    place("view"),
    views.map(({ name }) => name),
    (name) => scene.look(views.find((view) => view.name === name)!.from),
    false,
  );
  const paintPlace = place("paint");
  if (largest > 0) {
    new Choices(paintPlace, Object.values(paints), (name) => {
      paint = name;
      repaint();
    }).press(paint);
  } else paintPlace.closest("fieldset")?.remove();
  listen(canvas, scene, (event) => {
    const name = scene.partAt(variant.name, event.clientX, event.clientY);
    const part = variant.parts.find((each) => each.name === name);
    pick(part ? rowOf(part) : null);
  });
  chooseVariant.press(variant.name);
  scene.look(views.at(-1)!.from);
}

/** What the line below the picture says. */
function said(variant: PackedScene["variants"][number], picked: string | null): string {
  if (picked === null) return variant.name;
  const own = variant.parts.filter((part) => (part.row ?? part.name) === picked);
  if (own.length === 0) return `${variant.name} has no part ${picked}`;
  const [{ delta }] = own as [PackedPart];
  const others = own.map(({ name }) => name).filter((name) => name !== picked);
  const also = others.length > 0 ? ` with ${others.join(", ")}` : "";
  const change = delta === null ? "" : `: ${delta > 0 ? "+" : delta < 0 ? "−" : ""}${Math.abs(delta).toFixed(1)} counts of drag`;
  return `${variant.name}, ${picked}${also}${change}`;
}
