// Fields of one number: the arrow and page keys step it, its value is told to readers of the screen while it is typed,
// and how the program read it stands beside it. The conventions of reading are those of advisor/counsel/written_power.py.
(() => {
  "use strict";
  if (!document.getElementById("visit-form")) return; // heard from the document: the form may be replaced
  const POWERS = ["sphere", "cylinder", "add"];
  const MINUS_SIGNS = /[\u2212\u2013\u2011]/g;
  const SPACES = /[\s\u001c-\u001f\u0085]+/g;

  // The number that a text is read as; null for nothing written or no cylinder, undefined where it is no number.
  const read = (text, kind) => {
    const plain = text.replace(MINUS_SIGNS, "-").replace(SPACES, "").toLowerCase();
    if (!plain) return null;
    if (kind === "sphere" && ["pl", "plano", "pla"].includes(plain)) return 0;
    if (kind === "cylinder" && ["ds", "sph", "-"].includes(plain)) return null;
    const turned = POWERS.includes(kind) ? plain.replace(/^([0-9.,]+)([+-])$/, "$2$1") : plain;
    if (turned.length > 40 || !/^[+-]?([0-9]+([.,][0-9]*)?|[.,][0-9]+)$/.test(turned)) return undefined;
    const number = Number(turned.replace(",", "."));
    if (kind === "axis" && number === 0) return 180;
    return POWERS.includes(kind) && /^[+-]?(0[0-9]+|[0-9]{3,})$/.test(turned) ? number / 100 : number;
  };

  const decimals = (field, number) => Math.max(Number(field.dataset.decimals), (String(number).split(".")[1] ?? "").length);

  const written = (field, number) => {
    const text = Math.abs(number).toFixed(decimals(field, number));
    return (number < 0 ? "-" : POWERS.includes(field.dataset.kind) ? "+" : "") + text;
  };

  const spoken = (field, number) => {
    const digits = Math.min(decimals(field, number), 4);
    const shown = { minimumFractionDigits: digits, maximumFractionDigits: digits };
    const size = new Intl.NumberFormat(document.documentElement.lang, shown).format(Math.abs(number));
    return (number < 0 ? "\u2212" : number > 0 && POWERS.includes(field.dataset.kind) ? "+" : "") + size;
  };

  const tell = (field) => {
    const number = read(field.value, field.dataset.kind);
    if (typeof number === "number") {
      field.setAttribute("aria-valuenow", String(number));
      field.setAttribute("aria-valuetext", spoken(field, number));
      return;
    }
    field.removeAttribute("aria-valuenow");
    if (field.value.trim()) field.setAttribute("aria-valuetext", field.value);
    else field.removeAttribute("aria-valuetext");
  };

  // The next number on the field's grid, so many steps on; from between two lines of the grid the first is a part step.
  const stepped = (field, number, steps) => {
    const step = Number(field.dataset.step);
    const line = number / step;
    const near = Math.abs(line - Math.round(line)) < 1e-6 ? Math.round(line) : steps > 0 ? Math.floor(line) : Math.ceil(line);
    const next = Number(((near + steps) * step).toFixed(4));
    if (field.dataset.kind === "axis") return ((((next - 1) % 180) + 180) % 180) + 1;
    const least = Number(field.getAttribute("aria-valuemin"));
    const most = Number(field.getAttribute("aria-valuemax"));
    return Math.min(Math.max(next, least), most);
  };

  const steps = (field, key) => {
    const page = Math.round(Number(field.dataset.page) / Number(field.dataset.step));
    return { ArrowUp: 1, ArrowDown: -1, PageUp: page, PageDown: -page }[key];
  };

  document.addEventListener("keydown", (event) => {
    const field = event.target;
    if (!field.matches('input[role="spinbutton"]') || event.ctrlKey || event.altKey || event.metaKey || event.shiftKey) return;
    const count = steps(field, event.key);
    if (count === undefined) return;
    event.preventDefault();
    const number = read(field.value, field.dataset.kind);
    if (number === undefined) return; // what cannot be read stays as it was typed
    const next = stepped(field, number ?? Number(field.dataset.start), count);
    if (number !== null && (next - number) * count <= 0 && field.dataset.kind !== "axis") return; // at the end of its scale
    field.value = written(field, next);
    field.dispatchEvent(new Event("input", { bubbles: true }));
  });

  const place = (name) => document.getElementById("read-" + name);

  document.addEventListener("input", (event) => {
    if (!event.target.matches('input[role="spinbutton"]')) return;
    tell(event.target);
    place(event.target.name).textContent = ""; // until the program says how it reads what stands there now
  });

  document.addEventListener("htmx:afterSettle", () => {
    const said = new Map();
    for (const item of document.querySelectorAll("#readings [data-field]")) said.set(item.dataset.field, item.textContent);
    for (const beside of document.querySelectorAll(".read")) {
      const words = said.get(beside.id.slice("read-".length)) ?? "";
      if (beside.textContent !== words) beside.textContent = words;
    }
  });
})();
