"use strict";
(() => {
  const say = (message) => { document.getElementById("said").textContent = message; };

  /* A label beside the run that the pointer or the keyboard is on. */
  const label = document.createElement("div");
  label.id = "label";
  label.hidden = true;
  label.setAttribute("aria-hidden", "true");
  document.body.append(label);
  const hide = () => { label.hidden = true; };
  const show = (point) => {
    label.textContent = point.getAttribute("aria-label");
    label.hidden = false;
    const at = point.getBoundingClientRect();
    const wide = document.documentElement.clientWidth;
    const size = label.getBoundingClientRect();
    const left = Math.min(Math.max(4, at.left + at.width / 2 - size.width / 2), wide - size.width - 4);
    const above = at.top - size.height - 6;
    label.style.left = `${left + window.scrollX}px`;
    label.style.top = `${(above > 0 ? above : at.bottom + 6) + window.scrollY}px`;
  };

  for (const drawing of document.querySelectorAll("svg")) {
    const points = [...drawing.querySelectorAll("g.point")];
    if (!points.length) continue;
    const place = (point, name) => Number(point.querySelector(".reach").getAttribute(name));
    const order = [...points].sort((a, b) => place(a, "cx") - place(b, "cx") || place(a, "cy") - place(b, "cy"));
    points.forEach((point, i) => {
      point.setAttribute("tabindex", i ? "-1" : "0");
      point.querySelector("title")?.remove();  /* the label takes its place */
      point.addEventListener("pointerenter", () => show(point));
      point.addEventListener("pointerleave", hide);
      point.addEventListener("focus", () => show(point));
      point.addEventListener("blur", hide);
    });
    /* One stop of the tab key for each figure; arrow keys go from run to run, left to right. */
    drawing.addEventListener("keydown", (event) => {
      if (event.key === "Escape") return hide();
      const step = { ArrowRight: 1, ArrowDown: 1, ArrowLeft: -1, ArrowUp: -1 }[event.key];
      const jump = { Home: 0, End: points.length - 1 }[event.key];
      if (step === undefined && jump === undefined) return;
      event.preventDefault();
      const here = order.indexOf(document.activeElement);
      const next = order[jump ?? Math.min(Math.max(here + step, 0), order.length - 1)];
      for (const point of points) point.setAttribute("tabindex", point === next ? "0" : "-1");
      next.focus({ preventScroll: false });
    });
  }

  /* Tables as tab-separated text with full numbers, as spreadsheets take them. */
  const plain = (cell) => (cell.dataset.value ?? cell.textContent).trim().replace(/\s+/g, " ").replaceAll("−", "-");
  const guarded = (text) => (/^[=@+]|^-(?![\d.])/.test(text) ? `'${text}` : text);
  const copied = async (text) => {
    try {
      await navigator.clipboard.writeText(text);
    } catch {
      const area = document.createElement("textarea");
      area.value = text;
      document.body.append(area);
      area.select();
      document.execCommand("copy");
      area.remove();
    }
  };
  for (const figure of document.querySelectorAll("figure.table")) {
    const button = document.createElement("button");
    button.type = "button";
    button.className = "copy";
    button.textContent = "Copy";
    const title = figure.querySelector("figcaption").textContent.trim();
    button.setAttribute("aria-label", `Copy for a spreadsheet: ${title}`);
    button.addEventListener("click", async () => {
      const lines = [...figure.querySelectorAll("tr")].map((row) => [...row.cells]);
      /* Where cells show value ± u, u has a column of its own. */
      const paired = lines[0].map((_, j) => lines.some((cells) => cells[j]?.dataset.u !== undefined));
      const rows = lines.map((cells, i) => cells.flatMap((cell, j) => {
        const text = guarded(plain(cell));
        return paired[j] ? [text, i ? (cell.dataset.u ?? "") : `u(${text})`] : [text];
      }).join("\t"));
      await copied(`${rows.join("\n")}\n`);
      button.textContent = "Copied";
      say(`Copied: ${title}`);
      setTimeout(() => { button.textContent = "Copy"; }, 1500);
    });
    figure.querySelector("figcaption").append(button);
  }
})();
