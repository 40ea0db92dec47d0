// What is told when the engine fails, or does not come at all.

import { append, el, fill } from "../base/dom.js";

/** @typedef {import("../model/store.js").Store} Store */

/**
 * @param {HTMLElement} root
 * @param {Store} store
 * @param {() => void} again
 */
export function faultView(root, store, again) {
  return {
    /** @param {import("../model/store.js").State} state @param {Set<string>} changed */
    update({ fault }, changed) {
      if (!changed.has("fault")) return;
      root.hidden = fault === "";
      if (fault === "") return;
      fill(root, el("strong", null, "The engine failed. "), store.get().answer ? "Your values are kept; the sheet shows the last that could be computed. Change a value or " : "Change a value or ",
        el("button", { type: "button", class: "link", onclick: again }, "try again"), ".", el("pre", null, fault));
    },
    destroy() {
      fill(root);
    },
  };
}

/**
 * The engine could not be loaded: nothing can be shown yet, and it may come at the next try.
 * @param {HTMLElement} root
 * @param {unknown} err
 * @param {() => void} again
 */
export function tellAbsent(root, err, again) {
  root.hidden = false;
  fill(root, el("strong", null, navigator.onLine ? "The engine could not be loaded. " : "This browser is offline and has not loaded the engine before. "),
    "What was kept here is safe. ", el("button", { type: "button", id: "load-again", onclick: again }, "Try again"));
  append(root, [el("pre", null, String(err instanceof Error ? err.message : err))]);
}
