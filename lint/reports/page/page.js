"use strict";
/* Filter and sort the ledger, light up one element everywhere, open what a link leads to. The page reads without it. */
(() => {
  const all = (root, what) => Array.from(root.querySelectorAll(what));

  const ledger = (controls) => {
    const body = controls.parentElement;
    const table = body.querySelector("table.ledger");
    const rows = all(table, "tbody tr");
    const find = controls.querySelector(".find");
    const family = controls.querySelector(".family");
    const kind = controls.querySelector(".kinds");
    const shown = controls.querySelector(".shown");
    const filter = () => {
      const words = find.value.toLowerCase().split(/\s+/).filter(Boolean);
      let count = 0;
      for (const row of rows) {
        const text = row.textContent.toLowerCase();
        const fits = words.every((word) => text.includes(word))
          && (!family.value || row.dataset.family === family.value)
          && (!kind.value || row.dataset.kind === kind.value);
        row.hidden = !fits;
        count += fits ? 1 : 0;
      }
      shown.textContent = `${count} of ${rows.length} margins`;
    };
    for (const input of [find, family, kind]) input.addEventListener("input", filter);
    const value = (row, column) => (column >= 4 && column <= 5)
      ? Number(row.dataset.slack) : row.cells[column].textContent.trim().toLowerCase();
    const heads = all(table, "thead th");
    heads.forEach((head, column) => {
      if (head.classList.contains("nosort")) return;
      const button = document.createElement("button");
      button.type = "button";
      button.textContent = head.textContent;
      head.replaceChildren(button);
      button.addEventListener("click", () => {
        const down = head.getAttribute("aria-sort") === "ascending";
        for (const other of heads) other.removeAttribute("aria-sort");
        head.setAttribute("aria-sort", down ? "descending" : "ascending");
        const sign = down ? -1 : 1;
        const numeric = new Intl.Collator("en", { numeric: true });
        rows.sort((one, other) => {
          const a = value(one, column), b = value(other, column);
          return sign * (typeof a === "number" ? a - b : numeric.compare(a, b));
        });
        table.tBodies[0].append(...rows);
      });
    });
    controls.hidden = false;
    filter();
  };

  const light = (description) => {
    const groups = new Map();
    for (const node of all(description, "[data-element]")) {
      const name = node.dataset.element;
      if (!groups.has(name)) groups.set(name, []);
      groups.get(name).push(node);
    }
    let lit = [];
    const show = (event) => {
      const node = event.target instanceof Element ? event.target.closest("[data-element]") : null;
      const now = node && description.contains(node) ? groups.get(node.dataset.element) || [] : [];
      if (now === lit) return;
      for (const one of lit) one.classList.remove("picked");
      for (const one of now) one.classList.add("picked");
      lit = now;
    };
    description.addEventListener("pointerover", show);
    description.addEventListener("pointerleave", show);
    description.addEventListener("focusin", show);
  };

  const arrive = () => {
    let id = location.hash.slice(1);
    try { id = decodeURIComponent(id); } catch { return; }
    const goal = id && document.getElementById(id);
    if (!goal) return;
    for (let node = goal; node; node = node.parentElement) if (node.tagName === "DETAILS") node.open = true;
    goal.scrollIntoView();
  };

  all(document, ".controls").forEach(ledger);
  all(document, ".description").forEach(light);
  window.addEventListener("hashchange", arrive);
  arrive();
})();
