// The chooser of presets: each with its title and what to look for in it.

import { el, fill } from "../base/dom.js";
import { dialog } from "./dialog.js";

/**
 * @typedef {import("../model/store.js").Store} Store
 * @typedef {import("../engine/wire.js").Catalogue} Catalogue
 * @typedef {import("../engine/wire.js").Preset} Preset
 */

/**
 * @param {Store} store
 * @param {Catalogue} catalogue
 */
export function presetsDialog(store, catalogue) {
  const find = el("input", { type: "search", placeholder: "Search", "aria-label": "Search presets", oninput: show });
  const list = el("div", null);
  const box = dialog("Presets", "presets", find, list);
  box.addEventListener("close", () => {
    find.value = "";
  });

  function show() {
    const wanted = find.value.trim().toLowerCase();
    const current = store.get().preset;
    const hits = catalogue.presets.filter((p) => `${p.title} ${p.note} ${p.name}`.toLowerCase().includes(wanted));
    const parts = /** @type {[string, Preset[]][]} */ ([["Heart", hits.filter((p) => !p.plan.pacemaker)], ["Pacemaker", hits.filter((p) => p.plan.pacemaker)]]);
    fill(list, parts.filter(([, own]) => own.length > 0).map(([name, own]) => el("section", null,
      el("h3", null, name),
      el("ul", { class: "preset-list" }, own.map((p) => entry(p, p.name === current))))),
    hits.length === 0 && el("p", { class: "none" }, `No preset speaks of “${find.value.trim()}”.`));
  }

  /** @param {Preset} p @param {boolean} current */
  function entry(p, current) {
    return el("li", null, el("button", {
      type: "button", "data-preset": p.name, "aria-current": current ? "true" : null,
      onclick: () => {
        openPreset(store, p);
        box.close();
      },
    }, el("strong", null, p.title), p.note && el("span", null, p.note)));
  }

  return {
    open() {
      show();
      box.showModal();
      find.focus();
    },
  };
}

/**
 * @param {Store} store
 * @param {Preset} p
 */
export function openPreset(store, p) {
  store.edit(p.plan, "", { preset: p.name, kept: null, selected: 0, lit: [], view: { ...store.get().view, t0_ms: 0 } });
}
