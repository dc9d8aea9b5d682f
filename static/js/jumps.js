// Links to a place on the same page: a field gets the focus, in whatever fold it stands; any other place is gone to.
// None of them is a page of its own to go back to: the address stays that of the form, as the program keeps it.
(() => {
  "use strict";
  document.addEventListener("click", (event) => {
    const link = event.target.closest?.('a[href^="#"]');
    const place = link && document.getElementById(decodeURIComponent(link.hash.slice(1)));
    if (!place || event.button !== 0 || event.ctrlKey || event.metaKey || event.shiftKey || event.altKey) return;
    event.preventDefault();
    for (let fold = place.closest("details"); fold; fold = fold.parentElement.closest("details")) fold.open = true;
    const isField = place.matches("input, select, textarea");
    if (!isField && !place.hasAttribute("tabindex")) place.tabIndex = -1;
    place.focus({ preventScroll: !isField });
    if (!isField) place.scrollIntoView();
  });
})();
