import type { BodyScene } from "./scene.js";

/** Directions from the body to the eye, case axes (x rearward, y right, z up), and the key that takes them. */
export const views: { name: string; key: string; from: [number, number, number] }[] = [
  { name: "front", key: "1", from: [-1, 0, 0.001] },
  { name: "side", key: "2", from: [0, -1, 0.001] },
  { name: "top", key: "3", from: [0, -0.0005, 1] },
  { name: "rear", key: "4", from: [1, 0, 0.001] },
  { name: "three-quarter", key: "0", from: [-0.72, -0.62, 0.36] },
];

const step = 0.12;

/** Keys and clicks of the picture: turning, moving, views; `clicked` where the body was clicked and not dragged. */
export function listen(canvas: HTMLCanvasElement, scene: BodyScene, clicked: (event: PointerEvent) => void): void {
  canvas.addEventListener("keydown", (event) => {
    const view = views.find(({ key }) => key === event.key);
    const arrow = { ArrowLeft: [-1, 0], ArrowRight: [1, 0], ArrowUp: [0, 1], ArrowDown: [0, -1] }[event.key];
    if (event.ctrlKey || event.metaKey || event.altKey) return;
    if (view) scene.look(view.from);
    else if (arrow && event.shiftKey) scene.shift(-0.04 * arrow[0]!, -0.04 * arrow[1]!);
    else if (arrow) scene.turn(step * arrow[0]!, step * arrow[1]!);
    else if (event.key === "+" || event.key === "=") scene.nearer(0.9);
    else if (event.key === "-") scene.nearer(1 / 0.9);
    else if (event.key === "Escape") canvas.blur();
    else return;
    event.preventDefault();
  });
  let down: PointerEvent | null = null;
  canvas.addEventListener("pointerdown", (event) => {
    down = event.isPrimary && event.button === 0 ? event : null;
  });
  canvas.addEventListener("pointerup", (event) => {
    // A drag turns the body; only a click picks.
    if (down && Math.hypot(event.clientX - down.clientX, event.clientY - down.clientY) < 5) clicked(event);
    down = null;
  });
}
