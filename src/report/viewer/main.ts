import type { NamedBody } from "../page-model.js";
import { partColours } from "./colours.js";
import { BodyScene, views } from "./scene.js";
import { drawStill } from "./still.js";
import { unpackPart } from "./unpack.js";

// Runs in the reader's browser, inside the page. Everything it needs is in the page.

const data = document.getElementById("bodies");
if (data) show(JSON.parse(data.textContent ?? "[]") as NamedBody[]);

function show(bodies: NamedBody[]): void {
  const canvas = document.getElementById("scene") as HTMLCanvasElement;
  const unpacked = bodies.map(({ variant, body }) => ({ variant, parts: body.parts.map(unpackPart) }));
  const colours = partColours(unpacked.flatMap(({ parts }) => parts.map(({ name }) => name)));
  const rows = [...document.querySelectorAll<HTMLElement>("tr[data-part]")].filter((row) => row.dataset.part !== "whole");
  let scene: BodyScene | null = null;
  let picked: string | null = null;

  const pick = (part: string | null): void => {
    picked = part === picked ? null : part;
    scene?.mark(picked);
    for (const row of rows) row.classList.toggle("picked", row.dataset.part === picked);
    for (const button of document.querySelectorAll<HTMLButtonElement>("#parts button"))
      button.setAttribute("aria-pressed", String(button.textContent === picked));
    const status = document.getElementById("picked");
    if (status) status.textContent = picked === null ? "" : `part: ${picked}`;
  };

  try {
    scene = new BodyScene(canvas, colours, pick);
  } catch {
    drawStill(canvas, unpacked[0]?.parts ?? [], colours);
    canvas.dataset.drawn = "still";
  }
  if (scene) {
    for (const { variant, parts } of unpacked) scene.add(variant, parts);
    canvas.dataset.drawn = "scene";
    choices(
      "views",
      views.map(({ name }) => name),
      (name) => scene.look(views.find((view) => view.name === name)!.from),
      false,
    );
  }
  choices(
    "variants",
    unpacked.map(({ variant }) => variant),
    (variant) => {
      if (scene) scene.show(variant);
      else drawStill(canvas, unpacked.find((each) => each.variant === variant)!.parts, colours);
      listParts(
        unpacked.find((each) => each.variant === variant)!.parts.map(({ name }) => name),
        colours,
        pick,
      );
    },
    true,
  );
  for (const row of rows) row.addEventListener("click", () => pick(row.dataset.part ?? null));
}

/** Buttons of which the last pressed one is marked; with `first`, the first is pressed at once. */
function choices(id: string, names: string[], choose: (name: string) => void, first: boolean): void {
  const place = document.getElementById(id)!;
  const buttons = names.map((name) => {
    const button = document.createElement("button");
    button.type = "button";
    button.textContent = name;
    button.addEventListener("click", () => {
      for (const other of buttons) other.setAttribute("aria-pressed", String(other === button));
      choose(name);
    });
    place.append(button);
    return button;
  });
  if (first) buttons[0]?.click();
}

function listParts(names: string[], colours: Map<string, string>, pick: (part: string) => void): void {
  const list = document.getElementById("parts")!;
  list.replaceChildren(
    ...names.map((name) => {
      const item = document.createElement("li");
      const button = document.createElement("button");
      button.type = "button";
      button.append(patch(colours.get(name)!), document.createTextNode(name));
      button.addEventListener("click", () => pick(name));
      item.append(button);
      return item;
    }),
  );
}

/** A square of the part's colour; drawn, because the page's policy allows no style attributes. */
function patch(colour: string): SVGElement {
  const drawing = document.createElementNS("http://www.w3.org/2000/svg", "svg");
  drawing.setAttribute("viewBox", "0 0 10 10");
  drawing.setAttribute("aria-hidden", "true");
  const square = document.createElementNS("http://www.w3.org/2000/svg", "rect");
  square.setAttribute("width", "10");
  square.setAttribute("height", "10");
  square.setAttribute("fill", colour);
  drawing.append(square);
  return drawing;
}
