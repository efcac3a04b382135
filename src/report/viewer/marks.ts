/** Marks a ledger part wherever the page names it: rows of tables and the buttons in them. */
export class Marks {
  private readonly rows = [...document.querySelectorAll<HTMLElement>("tr[data-part]")];
  private readonly buttons = new Map<string, HTMLButtonElement>();

  /** Rows pick their part when clicked; in the table beside the body a button does it for the keyboard. */
  constructor(beside: string, pick: (part: string) => void) {
    for (const row of this.rows) {
      const part = row.dataset.part!;
      if (row.closest(beside)) this.buttons.set(part, button(row, part));
      row.addEventListener("click", () => pick(part));
    }
  }

  mark(part: string | null): void {
    for (const row of this.rows) row.classList.toggle("picked", row.dataset.part === part);
    for (const [name, button] of this.buttons) button.setAttribute("aria-pressed", String(name === part));
  }
}

/** The name in the row's head becomes a button that says whether it is pressed. */
function button(row: HTMLElement, part: string): HTMLButtonElement {
  const head = row.querySelector("th")!;
  const name = head.querySelector<HTMLElement>(".name")!;
  const made = document.createElement("button");
  made.type = "button";
  made.className = "name";
  made.textContent = part;
  made.setAttribute("aria-pressed", "false");
  name.replaceWith(made);
  return made;
}
