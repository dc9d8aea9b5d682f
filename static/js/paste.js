// A written prescription pasted anywhere on the Counter, but for its notes, fills the form. Whether it looks like one is
// decided here at once; whether it is one, the program says, and what is none is put where it would have gone.
(() => {
  "use strict";
  const form = () => document.getElementById("visit-form"); // it may be replaced, with all that is in it
  if (!form()) return;
  const LONGEST = 2000;
  // An eye mark, then, before anything but a few letters of its own, a number with a sign or a decimal mark, or plano.
  const LOOKS =
    /(^|[^\p{L}])(r|re|rt|od|right|l|le|lt|os|og|oi|left|ou|both|r\.e\.|l\.e\.|o\.[dsu]\.)[^\p{L}\d]{0,8}(eye\W{0,3})?(s|sph|sphere)?[^\p{L}\d]{0,6}([+\-\u2212\u2013\u2011]\s*[\d.,]|\d*[.,]\d|\d+[.,]?\d*[+\-\u2212\u2013\u2011]|pl)/iu;

  const ask = async (text) => {
    const body = new URLSearchParams({ line: text });
    const answer = await fetch("/counter/line", { method: "POST", body });
    if (!answer.ok) throw new Error("no answer");
    return answer.json();
  };

  const changed = (field) => field.dispatchEvent(new Event("input", { bubbles: true }));

  // Every field is filled before the first of them says so: the whole line is one change.
  const fill = (answer) => {
    const filled = [];
    for (const [name, text] of Object.entries(answer.fields)) {
      const field = form().elements.namedItem(name);
      if (!field || field.value === text) continue;
      field.value = text;
      if (text) field.closest("details:not([open])")?.setAttribute("open", "");
      filled.push(field);
    }
    filled.forEach(changed);
    document.getElementById("line-said").textContent = answer.said;
  };

  const insert = (field, text) => {
    if (!field.matches("input") || field.selectionStart === null) return;
    const flat = text.replace(/[\r\n]+/g, " ");
    const left = field.value.length - (field.selectionEnd - field.selectionStart);
    const room = field.maxLength < 0 ? flat.length : Math.max(field.maxLength - left, 0);
    field.setRangeText(flat.slice(0, room), field.selectionStart, field.selectionEnd, "end");
    changed(field);
  };

  // True where the form was filled.
  const filledFrom = async (text) => {
    try {
      const answer = await ask(text);
      if (Object.keys(answer.fields).length === 0) return false;
      fill(answer);
      return true;
    } catch {
      return false; // the figures say that the program does not answer, as soon as anything changes
    }
  };

  document.addEventListener("paste", async (event) => {
    const field = event.target;
    const text = event.clipboardData?.getData("text/plain") ?? "";
    if (!field.matches || text.length > LONGEST || field.closest("textarea") || !LOOKS.test(text)) return;
    event.preventDefault();
    if (!(await filledFrom(text))) insert(field, text);
    else if (field.id === "line") {
      field.value = text.replace(/[\r\n]+/g, "; ");
      changed(field);
    }
  });

  document.addEventListener("keydown", (event) => {
    if (event.key !== "Enter" || event.target.id !== "line") return;
    event.preventDefault();
    form().querySelector('button[value="line"]').click();
  });
})();
