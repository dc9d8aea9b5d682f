// What the Counter needs beyond htmx. While somebody types, the figures alone are fetched; a button that changes the form
// fetches the form, and nothing else of the page moves: scroll, focus and what was opened stay. Figures that are behind
// the form look so, faults stand beside their fields, questions open by what was answered, and nothing typed is lost.
(() => {
  "use strict";
  if (!window.htmx || !document.getElementById("visit-form")) return;
  const form = () => document.getElementById("visit-form");
  const figures = () => document.getElementById("figures");
  const SAVES = ["save", "new"];
  const TURNS = ["undo", "redo"];

  // Fields by name, those of one name told apart by their value; what htmx and the server look after is left out.
  const isTicked = (field) => field.type === "checkbox" || field.type === "radio";
  const keyOf = (field) => (isTicked(field) ? field.name + "=" + field.value : field.name);
  const stateOf = (field) => (isTicked(field) ? field.checked : field.value);
  const fields = () => [...form().elements].filter((one) => one.name && !["hidden", "submit", "fieldset"].includes(one.type));
  const typed = () => new Map(fields().map((field) => [keyOf(field), stateOf(field)]));
  const byKey = (key) => fields().find((field) => keyOf(field) === key);

  let sent = new Map(); // what the request under way was sent with
  let isSending = false;
  let pressed = ""; // the button whose answer is waited for
  let waiting = []; // buttons to press when the answer under way has come
  let isLeaving = false;
  let isUnanswered = false; // nothing came back last time, so what was typed since is kept nowhere else
  let kept = null; // of the part that is being replaced

  const behind = () => {
    figures().classList.add("behind");
    figures().setAttribute("aria-busy", "true");
    document.querySelector(".papers")?.classList.add("are-behind");
  };
  const isBehind = () => {
    const now = typed();
    return [...now].some(([key, state]) => sent.get(key) !== state);
  };

  // A number of which only the sign stands yet is waited for while the focus is in it.
  const isBegun = (field) => field.matches?.("input") && /^[-+\u2212]$/.test(field.value.trim());

  const placeFaults = () => {
    for (const place of form().querySelectorAll(".fault")) place.textContent = "";
    for (const field of form().querySelectorAll("[aria-invalid]")) field.removeAttribute("aria-invalid");
    for (const item of figures().querySelectorAll("#faults [data-field]")) {
      const name = item.dataset.field;
      const place = document.getElementById("fault-" + name);
      if (!name || !place) continue;
      place.textContent = item.querySelector(".sentence").textContent;
      document.getElementById(name)?.setAttribute("aria-invalid", "true");
      place.closest("details:not([open])")?.setAttribute("open", "");
    }
  };
  const openFaults = () => {
    for (const place of form().querySelectorAll(".fault")) {
      if (place.textContent) place.closest("details:not([open])")?.setAttribute("open", "");
    }
  };

  const openQuestions = () => {
    const marked = document.getElementById("opened");
    if (!marked) return;
    const [next, more] = [document.getElementById("asked-next"), document.getElementById("asked-more")];
    const keys = marked.dataset.keys.split(" ");
    const order = marked.dataset.order.split(" ");
    const questions = [...next.children, ...more.children];
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

  // Where an option stands after a button, counted from 0; -1 where it is gone.
  const placeAfter = (place, wish) => {
    const [kind, text] = wish.split("-");
    const at = Number(text);
    if (kind === "copy") return place > at ? place + 1 : place;
    if (kind === "remove") return place === at ? -1 : place > at ? place - 1 : place;
    const by = { left: -1, right: 1 }[kind];
    if (!by) return place;
    return place === at ? at + by : place === at + by ? at : place;
  };
  const movedName = (name, wish) =>
    name.replace(/^(options\.|fold-form-)(\d+)/, (_all, start, place) => start + placeAfter(Number(place), wish));
  const movedKey = (key, wish) =>
    /^(baseline|ordered)=/.test(key)
      ? key.replace(/\d+$/, (place) => placeAfter(Number(place), wish))
      : movedName(key, wish);

  // The first of these that is there and can be used is where the work goes on after a button.
  const nextFocus = (wish) => {
    const [kind, text] = wish.split("-");
    const at = Number(text);
    const last = form().querySelectorAll(".option").length - 1;
    return {
      add: [`options.${last}.material`],
      copy: [`options.${at + 1}.material`],
      left: [`do-left-${at - 1}`, `do-right-${at - 1}`],
      right: [`do-right-${at + 1}`, `do-left-${at + 1}`],
      remove: [`do-remove-${Math.min(at, last)}`, "do-copy-0"],
      undo: ["do-undo", "do-redo"],
      redo: ["do-redo", "do-undo"],
      apart: ["h-options"],
    }[kind] ?? (wish.startsWith("lay:") ? ["h-advice"] : []);
  };

  const keep = (target, wish) => {
    const active = form().contains(document.activeElement) ? document.activeElement : null;
    const onButton = !active || (active.name === "do" && active.value === wish);
    return {
      wish,
      isForm: target === form(),
      onButton,
      key: active?.name ? movedKey(keyOf(active), wish) : "",
      opened: new Map([...target.querySelectorAll("details[id]")].map((one) => [movedName(one.id, wish), one.open])),
      changed: [...typed()].filter(([key, state]) => sent.get(key) !== state),
      scroll: [window.scrollX, window.scrollY, document.getElementById("options").scrollTop],
    };
  };

  const restore = () => {
    const { wish, isForm, onButton, key, opened, changed, scroll } = kept;
    kept = null;
    for (const [id, open] of opened) {
      const fold = document.getElementById(id);
      if (fold && (open || !fold.querySelector(".fault:not(:empty)"))) fold.open = open;
    }
    if (isForm) {
      openFaults();
      openQuestions();
      sent = typed(); // the figures are of the form as it was answered
      for (const [name, state] of changed) {
        const field = byKey(movedKey(name, wish));
        if (field) field[isTicked(field) ? "checked" : "value"] = state;
      }
      const places = onButton ? nextFocus(wish).map((id) => document.getElementById(id)) : [];
      const isLost = document.activeElement === document.body;
      const place = places.find((one) => one && !one.disabled) ?? (isLost && key ? byKey(key) : null);
      place?.focus({ preventScroll: true });
    }
    window.scrollTo(scroll[0], scroll[1]);
    document.getElementById("options").scrollTop = scroll[2];
  };

  // What htmx promises here is broken where nothing comes back; the events below say so on the page.
  const ask = (wish, swap) =>
    window.htmx.ajax("POST", "/counter", { source: form(), values: { do: wish }, ...swap }).catch(() => undefined);

  // Buttons: one request at a time, since each answer carries the edit that the next one must name.
  const go = () => {
    const wish = waiting.shift();
    if (wish === undefined) return;
    const button = [...form().elements].find((one) => one.name === "do" && one.value === wish);
    if (SAVES.includes(wish) && isUnanswered) {
      waiting.unshift(wish); // to save leaves the page, and nothing may answer there: the form is kept first
      ask("", { target: figures(), swap: "outerHTML" });
      return;
    }
    if (SAVES.includes(wish)) {
      form().requestSubmit(button);
      return;
    }
    if (TURNS.includes(wish) && button?.disabled) {
      go();
      return;
    }
    pressed = wish;
    behind();
    ask(wish, { target: form(), select: "#visit-form", swap: "outerHTML" });
  };
  const press = (wish) => {
    const isBusy = pressed || waiting.length;
    if (isBusy && !TURNS.includes(wish)) return; // a second click on the way
    waiting.push(wish);
    if (!isSending && !pressed) go();
  };

  document.addEventListener("input", (event) => {
    if (event.target.form === form()) behind();
  });
  document.addEventListener("focusout", (event) => {
    if (event.target.form === form() && isBegun(event.target)) window.htmx.trigger(form(), "input");
  });
  document.addEventListener(
    "submit",
    (event) => {
      const wish = event.submitter?.value ?? "";
      if (event.target !== form() || (event.submitter?.hasAttribute("formaction") && !SAVES.includes(wish))) return;
      if (!isLeaving && !isSending && !pressed && !isUnanswered && SAVES.includes(wish)) {
        isLeaving = true;
        return;
      }
      event.preventDefault();
      if (isLeaving) return; // a second click on the way
      behind();
      if (wish) press(wish);
      else window.htmx.trigger(form(), "input");
    },
    true, // before whoever else would take it for a page that is left
  );
  document.addEventListener("htmx:confirm", (event) => {
    // what is typed goes with the button that waits; and nothing more is sent of a form that is being saved
    const isTyping = event.detail.elt === form() && event.detail.triggeringEvent;
    if (isTyping && (pressed || waiting.length || isLeaving || isBegun(isTyping.target))) event.preventDefault();
  });
  document.addEventListener("htmx:configRequest", (event) => {
    if (event.detail.elt !== form()) return;
    event.detail.path = "/counter"; // htmx takes the address and the wish of the button that has the focus
    if (event.detail.triggeringEvent) event.detail.formData.delete("do"); // while somebody types, nobody presses it
  });
  document.addEventListener("htmx:beforeRequest", (event) => {
    if (event.detail.requestConfig.path !== "/counter") return;
    isSending = true;
    sent = typed();
  });
  document.addEventListener("htmx:beforeSwap", (event) => {
    if (![form(), figures()].includes(event.detail.target)) return;
    kept = keep(event.detail.target, event.detail.target === form() ? pressed : "");
  });
  document.addEventListener("htmx:afterSwap", () => {
    if (kept) restore();
  });
  document.addEventListener("htmx:afterSettle", (event) => {
    if (event.detail.requestConfig?.path !== "/counter") return;
    placeFaults();
    openQuestions();
    // Only now: until here htmx holds the classes of before and does not listen to the new form.
    if (isSending || isBehind()) behind();
    if (!isSending && isBehind() && !isBegun(document.activeElement)) window.htmx.trigger(form(), "input");
  });
  document.addEventListener("htmx:afterRequest", (event) => {
    if (event.detail.requestConfig.path !== "/counter") return;
    isSending = false;
    pressed = "";
    isUnanswered = event.detail.xhr.status === 0;
    if (!event.detail.successful) waiting = isUnanswered ? [] : waiting.filter((wish) => SAVES.includes(wish));
    go();
  });
  for (const name of ["htmx:sendError", "htmx:responseError", "htmx:timeout"]) {
    document.addEventListener(name, () => figures().classList.add("failed"));
  }

  // Undo by keys: a text field has its own, so there it takes the Alt key as well.
  const isWritten = (one) => one.matches?.("textarea, input:not([type=checkbox], [type=radio], [type=file])");
  document.addEventListener("keydown", (event) => {
    const key = event.key.toLowerCase();
    if (!(event.ctrlKey || event.metaKey) || event.getModifierState("AltGraph") || !["z", "y"].includes(key)) return;
    if (key === "y" && (event.shiftKey || event.altKey)) return;
    if (isWritten(event.target) && !event.altKey) return;
    event.preventDefault();
    press(key === "y" || event.shiftKey ? "redo" : "undo");
  });

  // Coming back: a page out of the browser's memory is fetched again, and another window may have changed the draft.
  window.addEventListener("pageshow", (event) => {
    isLeaving = false;
    if (!event.persisted) return;
    behind();
    location.reload();
  });
  document.addEventListener("visibilitychange", () => {
    const draft = form().elements.namedItem("draft")?.value;
    if (document.visibilityState === "visible" && draft && !isLeaving) window.htmx.trigger(form(), "input");
  });
  // Left now, what was typed would be lost: the browser asks first.
  window.addEventListener("beforeunload", (event) => {
    if (isUnanswered && figures().classList.contains("behind")) event.preventDefault();
  });
  // What was typed last goes out though the page is left before its time.
  window.addEventListener("pagehide", () => {
    const draft = form().elements.namedItem("draft")?.value;
    if (!draft || isLeaving || isSending || !figures().classList.contains("behind")) return;
    navigator.sendBeacon("/counter", new URLSearchParams(new FormData(form())));
  });

  // Changed before this script was there to see it: the figures still stand for what the page came with.
  const isAsItCame = (field) => {
    if (isTicked(field)) return field.checked === field.defaultChecked;
    if (!field.matches("select")) return field.value === field.defaultValue;
    const came = [...field.options].find((one) => one.defaultSelected) ?? field.options[0];
    return field.selectedIndex === (came?.index ?? -1);
  };
  document.addEventListener("DOMContentLoaded", () => {
    if (!fields().every(isAsItCame)) window.htmx.trigger(form(), "input");
  });

  openFaults();
  // A form shown again after it could not be saved stands at the address of its draft: back and reload find it there.
  const draft = form().elements.namedItem("draft")?.value;
  if (draft && location.pathname === "/visits") history.replaceState(history.state, "", "/counter/" + draft);
})();
