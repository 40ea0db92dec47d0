// On a narrow screen Settings and Account lie over the sheet and come when called.

import { el } from "../base/dom.js";

/**
 * @typedef {import("../model/store.js").Store} Store
 * @typedef {import("../model/store.js").State} State
 */

/**
 * @param {HTMLElement} settings
 * @param {HTMLElement} account
 * @param {Store} store
 */
export function drawersView(settings, account, store) {
  const narrow = matchMedia("(max-width: 68.75em)");
  const shade = el("div", { class: "drawer-shade", hidden: true, onclick: shut });
  document.body.append(shade);
  /** @type {Element | null} */
  let opener = null;

  function shut() {
    store.set({ drawer: "" });
  }

  function fit() {
    for (const d of [settings, account]) d.classList.toggle("drawer", narrow.matches);
    if (!narrow.matches) shut();
    show(store.get().drawer);
  }

  /** @param {string} name */
  function show(name) {
    /** @type {[string, HTMLElement][]} */
    const both = [["settings", settings], ["account", account]];
    for (const [n, d] of both) {
      const open = narrow.matches && n === name;
      if (open) d.dataset.open = "";
      else delete d.dataset.open;
    }
    shade.hidden = !narrow.matches || name === "";
  }

  /** @param {KeyboardEvent} e */
  function escape(e) {
    if (e.key === "Escape" && store.get().drawer !== "") shut();
  }

  narrow.addEventListener("change", fit);
  document.addEventListener("keydown", escape);
  fit();
  return {
    /** @param {State} state @param {Set<string>} changed */
    update(state, changed) {
      if (!changed.has("drawer")) return;
      if (state.drawer !== "") opener = document.activeElement;
      show(state.drawer);
      if (!narrow.matches) return;
      if (state.drawer === "") /** @type {HTMLElement | null} */ (opener)?.focus?.({ preventScroll: true });
      else if (!document.activeElement?.closest(`#${state.drawer}`)) {
        /** @type {HTMLElement | null} */ (document.querySelector(`#${state.drawer} .drawer-close`))?.focus();
      }
    },
    destroy() {
      narrow.removeEventListener("change", fit);
      document.removeEventListener("keydown", escape);
      shade.remove();
    },
  };
}
