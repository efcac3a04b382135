/** What the page itself does: nothing is left out on paper, and only tables that scroll are stops of the keyboard. */
export function preparePage(): void {
  let opened: HTMLDetailsElement[] = [];
  addEventListener("beforeprint", () => {
    opened = [...document.querySelectorAll("details")].filter((each) => !each.open);
    for (const each of opened) each.open = true;
  });
  addEventListener("afterprint", () => {
    for (const each of opened) each.open = false;
    opened = [];
  });
  const tables = [...document.querySelectorAll<HTMLElement>(".wide")];
  const watch = new ResizeObserver(() => {
    for (const table of tables) {
      if (table.scrollWidth > table.clientWidth + 1) table.tabIndex = 0;
      else table.removeAttribute("tabindex");
    }
  });
  for (const table of tables) watch.observe(table);
}
