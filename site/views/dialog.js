// A sheet laid over the sheet: title, a way to close it, content.

import { el, uid } from "../base/dom.js";

/**
 * @param {string} title
 * @param {string} cls
 * @param {...any} children
 */
export function dialog(title, cls, ...children) {
  const id = uid("dialog");
  /** @type {HTMLDialogElement} */
  const node = el("dialog", {
    class: `over ${cls}`,
    "aria-labelledby": id,
    onclick: (/** @type {MouseEvent} */ e) => {
      if (e.target === node) node.close(); // a press beside it
    },
  },
  el("div", { class: "over-body" },
    el("div", { class: "part" },
      el("h2", { id }, title),
      el("button", { type: "button", onclick: () => node.close() }, "Close")),
    children));
  document.body.append(node);
  return node;
}
