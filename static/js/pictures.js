// A picture that changes while its button is held. Without scripting the two stills stand side by side.
"use strict";
for (const button of document.querySelectorAll("button[data-hold]")) {
  const first = document.getElementById(button.dataset.hold + "-1");
  const second = document.getElementById(button.dataset.hold + "-2");
  if (!first || !second) continue;
  const parts = [];
  for (const kind of ["img", "figcaption"]) {
    const own = first.querySelector(kind);
    const other = second.querySelector(kind).cloneNode(true);
    other.hidden = true;
    own.after(other);
    parts.push([own, other]);
  }
  const hold = (held) => {
    button.setAttribute("aria-pressed", String(held));
    for (const [own, other] of parts) {
      own.hidden = held;
      other.hidden = !held;
    }
  };
  const key = (event) => event.key === " " || event.key === "Enter";
  button.addEventListener("pointerdown", (event) => {
    if (event.button === 0) hold(true);
  });
  for (const name of ["pointerup", "pointercancel", "pointerleave", "blur"]) button.addEventListener(name, () => hold(false));
  button.addEventListener("keydown", (event) => {
    if (key(event)) {
      event.preventDefault();
      hold(true);
    }
  });
  button.addEventListener("keyup", (event) => {
    if (key(event)) hold(false);
  });
  button.addEventListener("contextmenu", (event) => event.preventDefault());
  first.setAttribute("aria-live", "polite");
  button.setAttribute("aria-pressed", "false");
  button.hidden = false;
}
