// The head line: what plan this is, and the rhythm in one sentence whose clauses
// point at their evidence.

import { el, fill, say } from "../base/dom.js";
import { count } from "../base/format.js";
import { titleOf } from "../model/document.js";
import { reveal } from "../model/view.js";

/**
 * @typedef {import("../model/store.js").Store} Store
 * @typedef {import("../model/store.js").State} State
 * @typedef {import("../engine/wire.js").Clause} Clause
 */

/**
 * @param {HTMLElement} root
 * @param {Store} store
 * @param {import("../engine/wire.js").Preset[]} presets
 * @param {{presets: () => void, keys: () => void, wrong: () => void}} open
 * @param {Node[]} menus what stands before Undo
 */
export function headView(root, store, presets, open, menus) {
  const title = el("span", { class: "title" }, "Opening");
  const pick = el("span", { class: "pick" });
  const says = el("p", { class: "says", id: "statement" });
  const warnings = el("ul", { class: "warnings", "aria-label": "Warnings" });
  const undo = el("button", { type: "button", onclick: () => store.undo(), title: "Ctrl Z" }, "Undo");
  const redo = el("button", { type: "button", onclick: () => store.redo(), title: "Ctrl Shift Z" }, "Redo");
  const sheet = el("button", { type: "button", onclick: () => store.set({ dark: !store.get().dark }) }, "Dark");
  root.append(
    el("h1", null,
      el("button", { type: "button", id: "presets", onclick: open.presets, title: "P", "aria-haspopup": "dialog" },
        title, pick)),
    says,
    el("div", { class: "tools" },
      el("span", { class: "busy", "aria-hidden": "true" }, "computing"),
      el("span", { class: "name" }, "escapement"),
      menus, undo, redo, sheet,
      el("button", { type: "button", id: "keys", onclick: open.keys, title: "?", "aria-haspopup": "dialog" }, "Keys")),
    warnings,
  );

  /** @param {number[]} lit */
  const light = (lit) => store.set({ lit });

  /** @param {Clause} c */
  function follow(c) {
    const { answer, view, scene } = store.get();
    if (!answer || c.events.length === 0) return;
    store.set({ selected: c.events[0], lit: [] });
    const at = scene?.times.find((s) => s[0] === c.events[0]);
    if (at) store.set({ view: reveal(view, at[1], answer.span_ms) });
  }

  /** @param {Clause} c */
  function clause(c) {
    if (c.events.length === 0) return el("span", { class: "clause" }, c.text);
    return el("span", {
      class: "clause", tabIndex: 0, role: "button", title: "Shows the events this rests on",
      onpointerenter: () => light(c.events), onpointerleave: () => light([]),
      onfocus: () => light(c.events), onblur: () => light([]),
      onclick: () => follow(c),
      onkeydown: (/** @type {KeyboardEvent} */ e) => {
        if (e.key !== "Enter" && e.key !== " ") return;
        e.preventDefault();
        follow(c);
      },
    }, c.text);
  }

  return {
    /** @param {State} state @param {Set<string>} changed */
    update(state, changed) {
      undo.disabled = !store.canUndo();
      redo.disabled = !store.canRedo();
      if (changed.has("plan") || changed.has("answer") || changed.has("kept")) {
        say(title, titleOf(state.plan, state.answer));
        const preset = presets.find((p) => p.name === state.preset);
        say(pick, `${preset && preset.plan !== state.plan ? "changed; " : ""}${state.kept ? "kept; " : ""}choose a preset ▾`);
      }
      if (changed.has("selected")) warnings.classList.toggle("selected", state.selected !== 0);
      if (changed.has("dark")) say(sheet, state.dark ? "Light" : "Dark");
      if (changed.has("answer") && state.answer) {
        fill(says, state.answer.statement.map(clause));
      }
      if (changed.has("answer") || changed.has("diagnoses")) {
        const wrong = state.diagnoses.length;
        const doubts = state.answer?.device?.warnings.length ?? 0;
        fill(warnings,
          wrong > 0 && el("li", null,
            state.answer ? "The sheet shows the last values that could be computed: " : "Nothing can be computed: ",
            el("button", { type: "button", class: "link", id: "show-wrong", onclick: open.wrong }, `${count(wrong, "value")} ${wrong === 1 ? "is" : "are"} wrong`), "."),
          (state.answer?.warnings ?? []).map((w) => el("li", null, w)),
          doubts > 0 && el("li", { class: "doubts" },
            el("button", { type: "button", class: "link", id: "show-doubts", onclick: () => store.set({ selected: 0, drawer: "account" }) }, `${count(doubts, "warning")} about the device's settings`), "."));
      }
    },
    destroy() {
      fill(root);
    },
  };
}
