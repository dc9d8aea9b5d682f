// The keys of "Turn round" and "Turn back": the button or link names them. While figures are being worked out it waits,
// so that what is turned round is what was typed last.
(() => {
  "use strict";
  const turn = () => document.querySelector("[data-turn]"); // the form it stands in may be replaced
  let isWanted = false;

  document.addEventListener("keydown", (event) => {
    if (!turn()?.dataset.turn.split(" ").includes(event.key)) return;
    if (event.ctrlKey || event.altKey || event.metaKey || event.shiftKey) return;
    event.preventDefault();
    if (!event.repeat) turn().click();
  });
  document.addEventListener("click", (event) => {
    if (!event.target.closest?.("[data-turn]") || !document.querySelector("#figures.htmx-request")) return;
    event.preventDefault();
    isWanted = true;
  });
  document.addEventListener("htmx:afterSettle", () => {
    if (!isWanted) return;
    isWanted = false;
    turn().click();
  });
  for (const name of ["htmx:sendError", "htmx:responseError", "htmx:timeout"]) {
    document.addEventListener(name, () => {
      isWanted = false;
    });
  }
})();
