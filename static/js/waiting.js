// Whatever takes longer than 300 ms says so: a bar at the foot of the page, which leaves nothing covered.
// A link or form that leads to another page needs no end of it, as the page goes. A file (a PDF, a download) leaves the
// page standing: its link carries a mark, the answer gives the mark back as a cookie, and the cookie is waited for.
(() => {
  "use strict";
  const AFTER_MS = 300;
  const LOOK_MS = 100;
  const LONG_MS = 20000;
  const bar = document.getElementById("waiting");
  if (!bar) return;
  let soon = 0;
  let late = 0;
  let look = 0;

  const show = (text, failed = false) => {
    bar.textContent = text;
    bar.classList.toggle("is-failed", failed);
  };
  const begin = () => {
    clearTimeout(soon);
    clearTimeout(late);
    soon = setTimeout(() => show(bar.dataset.working), AFTER_MS);
    late = setTimeout(() => show(bar.dataset.long), LONG_MS);
  };
  const end = () => {
    clearTimeout(soon);
    clearTimeout(late);
    clearInterval(look);
    show("");
  };
  const fail = () => {
    end();
    show(bar.dataset.failed, true);
  };

  const cookie = (mark) => document.cookie.split("; ").includes("ready=" + mark);
  const waitForFile = (link) => {
    const mark = crypto.getRandomValues(new Uint32Array(3)).reduce((text, part) => text + part.toString(36), "ready");
    const plain = link.getAttribute("href");
    const address = new URL(link.href);
    address.searchParams.set("ready", mark);
    link.href = address.pathname + address.search + address.hash;
    setTimeout(() => link.setAttribute("href", plain));
    clearInterval(look);
    begin();
    look = setInterval(() => {
      if (!cookie(mark)) return;
      document.cookie = "ready=; Max-Age=0; Path=/; SameSite=Strict";
      end();
    }, LOOK_MS);
  };

  document.addEventListener("click", (event) => {
    const link = event.target.closest?.("a[href]");
    if (!link || event.defaultPrevented || event.button !== 0) return;
    if (event.ctrlKey || event.metaKey || event.shiftKey || event.altKey) return;
    if (link.origin !== location.origin || (link.target && link.target !== "_self")) return;
    if (link.hasAttribute("download") || link.pathname.endsWith(".pdf")) {
      waitForFile(link);
      return;
    }
    if (link.pathname === location.pathname && link.search === location.search && link.hash) return;
    begin();
  });
  document.addEventListener("submit", (event) => {
    // a button that asks for a file leaves the page standing, and has no mark that could come back
    if (!event.defaultPrevented && !event.submitter?.hasAttribute("data-file")) begin();
  });
  // Back again: the page may come from memory just as it was left.
  window.addEventListener("pageshow", (event) => {
    if (event.persisted) end();
  });
  document.addEventListener("keydown", (event) => {
    if (event.key === "Escape" && bar.textContent) end();
  });

  // Parts of a page. The Counter's figures say it where they stand.
  const isFigures = (event) => ["figures", "visit-form"].includes(event.detail.target?.id);
  document.addEventListener("htmx:beforeRequest", (event) => {
    if (!isFigures(event)) begin();
  });
  document.addEventListener("htmx:afterRequest", (event) => {
    if (event.detail.successful) end(); // what a button asked for may be answered with figures
  });
  for (const name of ["htmx:sendError", "htmx:responseError", "htmx:timeout"]) {
    document.addEventListener(name, (event) => {
      if (!isFigures(event)) fail();
    });
  }

  // Pictures that are still being drawn.
  const drawn = new Set([...document.images].filter((image) => !image.complete));
  const broken = [...document.images].some((image) => image.complete && image.currentSrc && !image.naturalWidth);
  if (broken) fail();
  else if (drawn.size) begin();
  for (const image of drawn) {
    image.addEventListener("load", () => {
      drawn.delete(image);
      if (!drawn.size && !bar.classList.contains("is-failed")) end();
    });
    image.addEventListener("error", () => {
      drawn.delete(image);
      fail();
    });
  }
})();
