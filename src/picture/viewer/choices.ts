/** A row of buttons of which the pressed one is marked. */
export class Choices {
  private readonly buttons = new Map<string, HTMLButtonElement>();

  /** @param keeps the pressed button stays marked; without it the buttons only do something */
  constructor(
    place: HTMLElement,
    names: string[],
    private readonly choose: (name: string) => void,
    private readonly keeps = true,
  ) {
    for (const name of names) {
      const button = document.createElement("button");
      button.type = "button";
      button.textContent = name;
      button.addEventListener("click", () => this.press(name));
      this.buttons.set(name, button);
      place.append(button);
    }
  }

  press(name: string): void {
    if (this.keeps) for (const [other, button] of this.buttons) button.setAttribute("aria-pressed", String(other === name));
    this.choose(name);
  }
}
