// What the Counter needs beyond htmx: figures that are behind the form look so, faults stand beside their fields,
// and what was opened stays open when the figures are replaced.
(() => {
  "use strict";
  const form = document.getElementById("visit-form");
  if (!form || !window.htmx) return;
  const figures = () => document.getElementById("figures");
  let opened = [];

  const behind = () => {
    figures().classList.add("behind");
    figures().setAttribute("aria-busy", "true");
    document.querySelector(".papers")?.classList.add("are-behind");
  };

  const placeFaults = () => {
    for (const place of form.querySelectorAll(".fault")) place.textContent = "";
    for (const field of form.querySelectorAll("[aria-invalid]")) field.removeAttribute("aria-invalid");
    for (const item of figures().querySelectorAll("#faults [data-field]")) {
      const name = item.dataset.field;
      const place = document.getElementById("fault-" + name);
      if (!name || !place) continue;
      place.textContent = item.querySelector(".sentence").textContent;
      document.getElementById(name)?.setAttribute("aria-invalid", "true");
      place.closest("details:not([open])")?.setAttribute("open", "");
    }
  };

  for (const place of form.querySelectorAll(".fault")) {
    if (place.textContent) place.closest("details:not([open])")?.setAttribute("open", "");
  }
  form.addEventListener("input", behind);
  form.addEventListener("submit", (event) => {
    if (event.submitter && event.submitter.id !== "work-out") return;
    event.preventDefault();
    behind();
    window.htmx.trigger(form, "input");
  });
  document.addEventListener("htmx:beforeSwap", (event) => {
    if (event.detail.target !== figures()) return;
    opened = [...figures().querySelectorAll("details[open]")].map((one) => one.id);
  });
  document.addEventListener("htmx:afterSettle", () => {
    for (const id of opened) document.getElementById(id)?.setAttribute("open", "");
    opened = [];
    placeFaults();
  });
  for (const name of ["htmx:sendError", "htmx:responseError", "htmx:timeout"]) {
    document.addEventListener(name, () => figures().classList.add("failed"));
  }
})();
