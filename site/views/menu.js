// A button that unfolds a list of things to do, with the key of each beside it.

import { el } from "../base/dom.js";

/** @typedef {{id: string, label: string, key?: string, act: () => void}} Entry */

/**
 * @param {string} name
 * @param {Entry[]} entries
 */
export function menu(name, entries) {
  const buttons = entries.map((e) => el("button", {
    type: "button", id: e.id, onclick: () => {
      shut(true);
      e.act();
    },
  }, el("span", null, e.label), e.key && el("kbd", null, e.key)));
  const head = el("summary", null, name);
  const node = el("details", { class: "pop menu", onkeydown: keys }, head, el("div", { class: "pop-body" }, buttons));

  /** @param {boolean} back the focus goes back to the head */
  function shut(back) {
    if (!node.open) return;
    node.open = false;
    if (back) head.focus();
  }

  /** @param {KeyboardEvent} e */
  function keys(e) {
    const at = buttons.indexOf(/** @type {HTMLButtonElement} */ (document.activeElement));
    if (e.key === "Escape") shut(true);
    else if (e.key === "ArrowDown" || e.key === "ArrowUp") {
      node.open = true;
      const next = e.key === "ArrowDown" ? at + 1 : at < 0 ? buttons.length - 1 : at - 1 + buttons.length;
      buttons[next % buttons.length].focus();
    } else return;
    e.preventDefault();
    e.stopPropagation();
  }

  /** @param {Event} e */
  function outside(e) {
    if (!node.contains(/** @type {Node} */ (e.target))) shut(false);
  }
  document.addEventListener("pointerdown", outside);
  document.addEventListener("focusin", outside);
  return {
    node,
    destroy() {
      document.removeEventListener("pointerdown", outside);
      document.removeEventListener("focusin", outside);
      node.remove();
    },
  };
}
