// Before and after: keeps a plan to compare with, and shows in what the two differ.

import { el, say } from "../base/dom.js";
import { count } from "../base/format.js";

/**
 * @typedef {import("../model/store.js").Store} Store
 * @typedef {import("../model/store.js").State} State
 * @typedef {import("../engine/wire.js").Contrast} Contrast
 * @typedef {import("../engine/wire.js").ContrastRow} Row
 */

/** @typedef {ReturnType<typeof beforeView>} BeforeView */

/** What stands before a difference, so that colour is not the only cue. */
const SIGN = { same: "", gone: "−", new: "+", earlier: "↓", later: "↑", altered: "≠" };

/**
 * @param {Store} store
 */
export function beforeView(store) {
  const tool = el("button", { type: "button", id: "keep-before", onclick: toggle }, "Keep as before");

  function toggle() {
    const { before, plan, preset, answer, diagnoses, selected } = store.get();
    if (before) {
      store.change({ before: null, selected: Math.max(0, selected) }, "");
      return;
    }
    if (!answer || diagnoses.length > 0) return;
    store.change({ before: { plan, preset, title: String(plan.title || answer.title || "") }, panel: "contrast" }, "");
  }

  function swap() {
    const { before, plan, preset, answer } = store.get();
    if (!before || !answer) return;
    store.change({ plan: before.plan, preset: before.preset, before: { plan, preset, title: String(plan.title || answer.title || "") }, selected: 0, lit: [] }, "");
  }

  /** Two buttons that choose what the Account holds. @param {State} state */
  function tabs(state) {
    if (!state.before) return null;
    return el("div", { class: "panels", role: "group", "aria-label": "Differences or measured" },
      /** @type {const} */ ([["contrast", "Differences"], ["measured", "Measured"]]).map(([panel, name]) => el("button", {
        type: "button", "aria-pressed": String(state.panel === panel), "data-panel": panel,
        onclick: () => {
          store.set({ panel });
          requestAnimationFrame(() => /** @type {HTMLElement | null} */ (document.querySelector(`[data-panel="${panel}"]`))?.focus());
        },
      }, name)));
  }

  /** @param {State} state @param {import("./meaning.js").Meanings} means */
  function panel(state, means) {
    const c = state.contrast;
    return [
      tabs(state),
      !c && el("p", { class: "aside" }, state.diagnoses.length > 0 ? "The plan as it stands cannot be computed; there is nothing to compare." : "Comparing."),
      c && sums(c),
      c && means.list(table(c, means)),
      c && el("p", { class: "panels-foot" },
        el("button", { type: "button", onclick: swap }, "Swap before and after"),
        el("button", { type: "button", onclick: toggle }, "Let go of before")),
    ];
  }

  /** @param {Contrast} c */
  function sums(c) {
    const { gone, new: fresh, moved, altered } = c.events;
    const differ = gone + fresh + moved + altered;
    return el("div", { class: "contrast-sums" },
      el("p", null, el("strong", null, "Before "), c.title || "the plan without a title"),
      el("p", null, el("strong", null, "After "), c.after || "the plan without a title"),
      el("p", null, differ === 0 ? "No event differs." : `Of the events ${[gone && `${gone} are gone (−)`, fresh && `${fresh} are new (+)`, moved && `${moved} moved`, altered && count(altered, "is another", "are others")].filter(Boolean).join(", ")}.`,
        c.first !== 0 && " ",
        c.first !== 0 && el("button", { type: "button", class: "link", id: "first-difference", onclick: () => store.set({ selected: c.first }) }, "Go to the first")));
  }

  /** @param {Contrast} c @param {import("./meaning.js").Meanings} means */
  function table(c, means) {
    const parts = [...new Set(c.rows.map((r) => r.part))];
    return el("table", { class: "contrast" },
      el("caption", { class: "unseen" }, "Numbers before and after, and what differs"),
      el("thead", null, el("tr", null, head("what"), head("before"), head("after"), head("change"))),
      parts.map((part) => el("tbody", null,
        el("tr", null, el("th", { scope: "rowgroup", colSpan: 4 }, part)),
        c.rows.filter((r) => r.part === part).map((r) => row(r, c, means)))));
  }

  /** @param {string} name */
  function head(name) {
    return el("th", { scope: "col" }, name);
  }

  /** @param {Row} r @param {Contrast} c @param {import("./meaning.js").Meanings} means */
  function row(r, c, means) {
    const name = means.name(r.name, meaningOf(r, means));
    const change = el("td", { class: r.by.length > 9 ? "by long" : "by" }, `${SIGN[r.sign]} ${r.by.replace(/^[+−]/, "")}`.trim());
    if (r.sign === "altered" && r.by === "changed") change.replaceChildren(el("span", { "aria-hidden": "true" }, SIGN.altered), el("span", { class: "unseen" }, r.by));
    if (["Findings", "Warnings"].includes(r.part) && (r.before === "yes" || r.after === "yes")) {
      return el("tr", { "data-sign": r.sign }, el("th", { scope: "row", colSpan: 3 }, r.name), change);
    }
    if (r.part === "Beats") {
      return el("tr", { "data-sign": r.sign }, el("th", { scope: "row", colSpan: 4 }, `${SIGN[r.sign]} `.trimStart(), name, `: ${r.before === "" ? `${r.after}, ${r.by}` : r.by}`));
    }
    if (r.part === "Settings" || r.part === "Findings") { // their values are too long for columns
      return el("tr", { "data-sign": r.sign }, el("th", { scope: "row", colSpan: 3 }, el("span", { title: r.place }, r.name),
        el("span", { class: "change" }, `${r.before || "nothing"} → ${r.after || "nothing"}`)), change);
    }
    return el("tr", { "data-sign": r.sign }, el("th", { scope: "row" }, name), value(r.before), value(r.after), change);
  }

  /** A row is a number of its own, an interval of the device, or a number that is measured. @param {Row} r @param {import("./meaning.js").Meanings} means */
  function meaningOf(r, means) {
    const own = means.of(`row:${r.name}`, `interval:${r.name}`);
    const { answer } = store.get();
    const n = own ? null : [...(answer?.measured ?? []), ...(answer?.device?.counted ?? [])].find((m) => m.label === r.name);
    return own ?? (n ? { text: n.help, normal: n.normal ? `${n.normal[0]}–${n.normal[1]} ${n.unit}` : "", source: n.source } : null);
  }

  /** @param {string} text */
  function value(text) {
    return el("td", { class: text.length > 9 ? "long" : null }, text);
  }

  return {
    tool, toggle, tabs, panel,
    /** Whether the differences stand in the Account's place. @param {State} state */
    shown: (state) => state.before !== null && state.panel === "contrast",
    /** @param {State} state @param {Set<string>} changed */
    update(state, changed) {
      if (!["before", "diagnoses", "answer"].some((k) => changed.has(k))) return;
      say(tool, state.before ? "Let go of before" : "Keep as before");
      const wrong = !state.before && (state.diagnoses.length > 0 || !state.answer);
      tool.disabled = wrong;
      tool.title = wrong ? "Mend the wrong values first" : state.before ? "K: only the present strip" : "K: this strip stays above, to be compared with what you change or open next";
    },
    destroy() {
      tool.remove();
    },
  };
}
