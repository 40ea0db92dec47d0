// A field to search in for one of many values: type a part of its name, choose with the
// arrow keys or the pointer.

import { el, fill, uid } from "../base/dom.js";

/** @typedef {{path: string, label: string, where: string}} Choice */

const MOST = 60; // rows shown at a time

/**
 * @param {string} label
 * @param {() => Choice[]} choices asked each time it opens
 * @param {(path: string) => void} choose
 */
export function fieldPick(label, choices, choose) {
  const id = uid("pick");
  let chosen = "";
  let at = -1;
  /** @type {Choice[]} */
  let shown = [];
  const list = el("ul", { class: "pick-list", id: `${id}-list`, role: "listbox", "aria-label": label, hidden: true });
  const input = el("input", {
    type: "text", id, role: "combobox", autocomplete: "off", spellcheck: false, placeholder: "Search: rate, PVARP, ERP …",
    "aria-label": label, "aria-expanded": "false", "aria-controls": `${id}-list`, "aria-autocomplete": "list",
    onfocus: () => input.select(),
    onclick: () => open(),
    oninput: () => open(input.value),
    onkeydown: keys,
    onblur: () => {
      close();
      input.value = chosen;
    },
  });
  const node = el("div", { class: "pick" }, input, list);

  /** @param {string} [text] */
  function open(text = "") {
    const wanted = text.toLowerCase().split(/[\s,]+/).filter((w) => w !== "");
    shown = choices().filter((c) => wanted.every((w) => `${c.label} ${c.where} ${c.path}`.toLowerCase().includes(w))).slice(0, MOST);
    at = shown.length > 0 && text !== "" ? 0 : -1;
    fill(list, shown.length === 0 ? el("li", { class: "pick-none", role: "option", "aria-disabled": "true", "aria-selected": "false" }, "No value is called that.") : shown.map((c, i) => el("li", {
      role: "option", id: `${id}-${i}`, "aria-selected": "false", "data-path": c.path,
      onpointerdown: (/** @type {Event} */ e) => {
        e.preventDefault(); // the field keeps the focus
        take(c);
      },
    }, c.label, el("small", null, c.where))));
    list.hidden = false;
    input.setAttribute("aria-expanded", "true");
    mark();
  }

  function close() {
    list.hidden = true;
    input.setAttribute("aria-expanded", "false");
    input.removeAttribute("aria-activedescendant");
  }

  function mark() {
    [...list.children].forEach((li, i) => li.setAttribute("aria-selected", String(i === at)));
    if (at < 0) return input.removeAttribute("aria-activedescendant");
    input.setAttribute("aria-activedescendant", `${id}-${at}`);
    list.children[at].scrollIntoView({ block: "nearest" });
  }

  /** @param {Choice} c */
  function take(c) {
    close();
    choose(c.path);
  }

  /** @param {KeyboardEvent} e */
  function keys(e) {
    if (e.key === "ArrowDown" || e.key === "ArrowUp") {
      e.preventDefault();
      if (list.hidden) return open();
      at = Math.max(0, Math.min(shown.length - 1, at + (e.key === "ArrowDown" ? 1 : -1)));
      mark();
    } else if (e.key === "Enter" && !list.hidden && shown[at]) {
      e.preventDefault();
      take(shown[at]);
    } else if (e.key === "Escape" && !list.hidden) {
      e.stopPropagation();
      close();
      input.value = chosen;
    }
  }

  return {
    node,
    /** @param {string} text name of what is chosen, "" for none */
    show(text) {
      chosen = text;
      if (document.activeElement !== input || list.hidden) input.value = text;
    },
  };
}
