// The form that was typed so far is kept under an address of its own; changing the language goes back there.
(() => {
  "use strict";
  const form = document.getElementById("screen-language");
  form?.addEventListener("submit", () => {
    const draft = document.querySelector("#draft-marks [name='draft']")?.value;
    if (draft) form.elements.back.value = "/counter/" + encodeURIComponent(draft);
  });
})();
