import { pickedTone } from "../tones.js";
import type { ViewData } from "../view-data.js";
import { Choices } from "./choices.js";
import { listen, views } from "./eye.js";
import { BodyScene } from "./scene.js";
import { unpackMesh } from "./unpack.js";

// Runs in the reader's browser, inside the page of one body. Everything it needs is in the page; without WebGL the still pictures stay.

const whole = "body";
const view = document.getElementById("view")!;
void start(JSON.parse(document.getElementById("body")!.textContent ?? "") as ViewData);

async function start(data: ViewData): Promise<void> {
  const canvas = view.querySelector<HTMLCanvasElement>("canvas")!;
  let scene: BodyScene;
  try {
    const meshes = await Promise.all(data.meshes.map(unpackMesh));
    // The canvas gets its size from the page, so it must be there before the scene looks at it.
    view.classList.add("live");
    scene = new BodyScene(canvas);
    scene.load(meshes, [{ name: whole, parts: data.parts }]);
  } catch {
    view.classList.remove("live");
    view.dataset.drawn = "still";
    return;
  }
  scene.show(whole);
  if (data.axles.length > 0) scene.line(data.axles, pickedTone);
  const status = view.querySelector<HTMLElement>("[role=status]")!;
  const pick = partsList(scene, data, status);
  findingsList(scene, data, status);
  new Choices(
    view.querySelector<HTMLElement>("[data-choices=view]")!,
    views.map(({ name }) => name),
    (name) => scene.look(views.find((each) => each.name === name)!.from),
    false,
  );
  listen(canvas, scene, (event) => pick(scene.partAt(whole, event.clientX, event.clientY)));
  scene.look(views.at(-1)!.from);
  view.dataset.drawn = "scene";
}

function button(text: string, pressed: boolean, click: (button: HTMLButtonElement) => void): HTMLButtonElement {
  const made = document.createElement("button");
  made.type = "button";
  made.textContent = text;
  made.setAttribute("aria-pressed", String(pressed));
  made.addEventListener("click", () => click(made));
  return made;
}

/** Two buttons beside each part: pick it, show or hide it. Returns what picks a part by name. */
function partsList(scene: BodyScene, { parts }: ViewData, status: HTMLElement): (name: string | null) => void {
  let picked: string | null = null;
  const buttons = new Map<string, HTMLButtonElement>();
  const paint = (): void => {
    const tones = new Map(parts.map(({ name, tone }) => [name, tone]));
    scene.paint(whole, (name) => (name === picked ? pickedTone : tones.get(name)!));
    for (const [name, each] of buttons) each.setAttribute("aria-pressed", String(name === picked));
    status.textContent = picked ?? "";
  };
  const pick = (name: string | null): void => {
    picked = name === picked ? null : name;
    paint();
  };
  const drawn = new Set(parts.map(({ name }) => name));
  for (const row of view.querySelectorAll<HTMLElement>("[data-part]")) {
    const name = row.dataset.part!;
    if (!drawn.has(name)) continue;
    const pickButton = button("pick", false, () => pick(name));
    pickButton.setAttribute("aria-label", `pick ${name}`);
    const showButton = button("shown", true, (own) => {
      const shown = own.getAttribute("aria-pressed") !== "true";
      own.setAttribute("aria-pressed", String(shown));
      scene.hide(whole, name, !shown);
    });
    showButton.setAttribute("aria-label", `${name} shown`);
    buttons.set(name, pickButton);
    row.append(" ", pickButton, showButton);
  }
  paint();
  return pick;
}

/** A button for each place of a finding: all its places are ringed, and the eye flies to the one. */
function findingsList(scene: BodyScene, { findings }: ViewData, status: HTMLElement): void {
  let chosen: HTMLButtonElement | null = null;
  for (const list of view.querySelectorAll<HTMLElement>("[data-finding]")) {
    const { places, tone } = findings[Number(list.dataset.finding)]!;
    const title = list.parentElement!.querySelector("h3")!.textContent!.trim();
    places.forEach((place, index) => {
      const made = button(`place ${index + 1}`, false, (own) => {
        chosen?.setAttribute("aria-pressed", "false");
        chosen = own;
        own.setAttribute("aria-pressed", "true");
        scene.mark(places, tone);
        scene.fly(place);
        status.textContent = `${title}, place ${index + 1} of ${places.length}`;
        view.dataset.eye = scene.eye.map((value) => value.toFixed(3)).join(" ");
      });
      made.setAttribute("aria-label", `${title}, place ${index + 1}`);
      list.append(made);
    });
  }
}
