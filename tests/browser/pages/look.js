// What is wrong with the page as it is laid out now: one line each. Read into the page by test_every_page.py.
() => {
  const trouble = [];
  const root = document.documentElement;
  const named = (element) => {
    const name = element.id || element.getAttribute("name") || element.className.baseVal || element.className || "";
    return `${element.localName} ${name} "${(element.value || element.textContent || "").trim().replace(/\s+/g, " ").slice(0, 40)}"`;
  };
  const isSpokenOnly = (element) => getComputedStyle(element).clipPath !== "none";
  const isSeen = (element) => {
    if (!element.checkVisibility({ visibilityProperty: true })) return false;
    for (let box = element; box; box = box.parentElement) if (isSpokenOnly(box)) return false;
    return true;
  };
  const scrolls = (element) => ["auto", "scroll"].includes(getComputedStyle(element).overflowX);
  const inScroller = (element) => {
    for (let box = element; box && box !== document.body; box = box.parentElement) if (scrolls(box)) return true;
    return false;
  };
  const elements = [...document.body.querySelectorAll("*")].filter((one) => !(one instanceof SVGElement) && isSeen(one));

  if (root.scrollWidth > root.clientWidth) {
    trouble.push(`the page is ${root.scrollWidth - root.clientWidth} px too wide`);
    for (const one of elements) {
      if (one.getBoundingClientRect().right > root.clientWidth + 1 && !inScroller(one)) trouble.push(`too wide: ${named(one)}`);
    }
  }

  const pen = document.createElement("canvas").getContext("2d");
  const width = (text, style) => {
    pen.font = `${style.fontStyle} ${style.fontWeight} ${style.fontSize} ${style.fontFamily}`;
    return pen.measureText(text).width;
  };
  const shown = (field) => field.localName === "select" ? field.selectedOptions[0]?.text ?? "" : field.value || field.placeholder || "";
  for (const one of elements) {
    const style = getComputedStyle(one);
    // a long name typed may run on within its field
    const isField = one.matches("select, input:not([type='checkbox'], [type='radio'], [type='file'])") && (one.localName === "select" || one.value.length < 20);
    // beside three others a column has room for twenty letters; the list that opens shows the rest of a longer name
    if (isField && one.closest(".choices") && shown(one).length > 20) continue;
    if (isField) {
      const arrow = one.localName === "select" ? 20 : 0;
      const room = one.clientWidth - parseFloat(style.paddingLeft) - parseFloat(style.paddingRight) - arrow;
      const wanted = width(shown(one), one.value || !one.placeholder ? style : getComputedStyle(one, "::placeholder"));
      if (wanted > room + 1) trouble.push(`cut by ${Math.ceil(wanted - room)} px: ${named(one)} ${shown(one)}`);
    } else if (["hidden", "clip"].includes(style.overflowX) && !one.matches("input, select") && one.scrollWidth > one.clientWidth + 1) {
      trouble.push(`cut: ${named(one)}`);
    } else if (scrolls(one) && one.scrollWidth > one.clientWidth + 1 && one.tabIndex < 0 && !one.querySelector("a, button, input, select")) {
      trouble.push(`scrolls but takes no focus: ${named(one)}`);
    }
  }

  // a target is what may be clicked: of a tick, its label too; a link within a sentence is as high as its line
  for (const one of document.querySelectorAll("button, select, textarea, summary, input:not([type='hidden']), a, [tabindex='0']")) {
    if (!isSeen(one) || (one.localName === "a" && getComputedStyle(one).display === "inline")) continue;
    const box = (one.matches("[type='checkbox'], [type='radio']") && one.closest("label") || one).getBoundingClientRect();
    if (box.width < 23.9 || box.height < 23.9) trouble.push(`small target ${box.width.toFixed(0)}x${box.height.toFixed(1)}: ${named(one)}`);
  }
  return trouble;
}
