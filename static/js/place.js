// The form that was typed so far is kept under an address of its own; a switch in the head goes back there.
(() => {
  "use strict";
  for (const form of document.querySelectorAll("#screen-language, #names-switch")) {
    form.addEventListener("submit", () => {
      const draft = document.querySelector("#draft-marks [name='draft']")?.value;
      if (draft) form.elements.back.value = "/counter/" + encodeURIComponent(draft);
    });
  }
})();
