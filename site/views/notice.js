// What the page has to tell about keeping, opening and copying: one line under the
// head, with what can be done about it. A newer one of the same name takes its place.

import { append, el, fill } from "../base/dom.js";

/** @typedef {{label: string, act: () => void}} Act */
/** @typedef {ReturnType<typeof noticeView>} Notices */

/** @param {HTMLElement} root */
export function noticeView(root) {
  /** @type {Map<string, HTMLElement>} */
  const shown = new Map();

  /** @param {string} name */
  function clear(name) {
    shown.get(name)?.remove();
    shown.delete(name);
    root.hidden = shown.size === 0;
  }

  return {
    /**
     * @param {string} name
     * @param {string} text
     * @param {{wrong?: boolean, acts?: Act[], more?: (Node | string)[]}} [about]
     */
    tell(name, text, { wrong = false, acts = [], more = [] } = {}) {
      clear(name);
      const node = el("div", { class: `notice${wrong ? " wrong" : ""}`, "data-notice": name, role: wrong ? "alert" : "status" },
        el("p", null, text, more),
        acts.map((a) => el("button", { type: "button", onclick: () => { clear(name); a.act(); } }, a.label)),
        el("button", { type: "button", class: "close", "aria-label": "Close this message", onclick: () => clear(name) }, "Close"));
      shown.set(name, node);
      root.hidden = false;
      append(root, [node]);
    },
    clear,
    destroy() {
      shown.clear();
      fill(root);
    },
  };
}
