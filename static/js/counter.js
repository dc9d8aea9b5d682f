// What the Counter needs beyond htmx: figures that are behind the form look so, faults stand beside their fields,
// what was opened stays open when the figures are replaced, questions open by what was answered, and a link to a field
// opens what the field is folded into.
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

  const next = document.getElementById("asked-next");
  const more = document.getElementById("asked-more");
  const questions = [...next.children, ...more.children];

  const openQuestions = () => {
    const marked = document.getElementById("opened");
    if (!marked) return;
    const keys = marked.dataset.keys.split(" ");
    const order = marked.dataset.order.split(" ");
    questions.sort((one, other) => order.indexOf(one.dataset.question) - order.indexOf(other.dataset.question));
    for (const question of questions) {
      const shown = keys.includes(question.dataset.question);
      if (question.matches("p")) question.hidden = !shown;
      const place = shown || question.matches("p") ? next : more;
      if (question.parentElement === place || question.contains(document.activeElement)) continue;
      const after = questions.slice(questions.indexOf(question) + 1).find((one) => one.parentElement === place);
      place.insertBefore(question, after ?? null);
    }
    more.parentElement.hidden = more.childElementCount === 0;
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
    openQuestions();
  });
  document.addEventListener("click", (event) => {
    const link = event.target.closest?.('a[href^="#"]');
    const field = link && document.getElementById(decodeURIComponent(link.hash.slice(1)));
    if (!field) return;
    for (let fold = field.closest("details"); fold; fold = fold.parentElement.closest("details")) fold.open = true;
    if (!field.matches("input, select, textarea")) return;
    event.preventDefault();
    field.focus();
  });
  for (const name of ["htmx:sendError", "htmx:responseError", "htmx:timeout"]) {
    document.addEventListener(name, () => figures().classList.add("failed"));
  }
})();
