// What the timeline shows and how large: leads, speed, gain, ladder.

import { el, fill, say } from "../base/dom.js";
import { num } from "../base/format.js";
import { arrange, withLeads } from "../model/lanes.js";
import { fitSpeed, GAINS, LEADS, PAPERS, shown, SPEEDS, zoomTo } from "../model/view.js";
import { lanesPop } from "./lanes.js";

/**
 * @typedef {import("../model/store.js").Store} Store
 * @typedef {import("../model/store.js").State} State
 */

/** @type {[string, string[]][]} */
const SETS = [
  ["usual", ["I", "II", "V1", "V6"]],
  ["II", ["II"]],
  ["limb", LEADS.slice(0, 6)],
  ["chest", LEADS.slice(6)],
  ["all twelve", LEADS],
];

/**
 * @param {HTMLElement} root
 * @param {Store} store
 * @param {import("../engine/wire.js").Catalogue} catalogue
 * @param {HTMLElement[]} tools of other views
 */
export function toolbarView(root, store, catalogue, tools) {
  const view = () => store.get().view;
  /** @param {Partial<import("../model/view.js").View>} patch */
  const set = (patch) => store.change({ view: { ...view(), ...patch } }, "");

  /** @param {number} mm_per_s */
  function speed(mm_per_s) {
    const { answer } = store.get();
    if (!answer) return;
    const v = view();
    store.set({ view: zoomTo(v, mm_per_s, v.t0_ms + shown(v) / 2, answer.span_ms) });
  }

  /** Shows exactly these leads, as strips. @param {string[]} leads */
  const pick = (leads) => store.change({ view: { ...arrange(view(), withLeads(view().lanes, leads)), paper: "" } }, "");

  const boxes = LEADS.map((lead) => el("input", {
    type: "checkbox", value: lead,
    onchange: () => {
      pick(LEADS.filter((l, i) => boxes[i].checked));
    },
  }));
  const papers = PAPERS.map((p) => press(p, () => set({ paper: view().paper === p ? "" : p }), `Rows by columns that follow one another in time: ${p}`));
  const leadsName = el("span", { class: "chosen" });
  const leads = el("details", { class: "pop" },
    el("summary", null, "Leads ", leadsName),
    el("div", { class: "pop-body" },
      el("div", { class: "choices" }, SETS.map(([name, list]) => el("button", { type: "button", onclick: () => pick(list) }, name))),
      el("div", { class: "boxes" }, boxes.map((b) => el("label", null, b, b.value))),
      el("h3", null, "All twelve as on paper"),
      el("div", { class: "choices", id: "papers" }, papers)));
  const lanes = lanesPop(store, catalogue);
  const pops = [leads, lanes.root];
  const closePops = (/** @type {Event} */ e) => {
    for (const p of pops) {
      if (e instanceof KeyboardEvent ? e.key === "Escape" && p.contains(/** @type {Node} */ (e.target)) : !p.contains(/** @type {Node} */ (e.target))) p.open = false;
    }
  };
  document.addEventListener("pointerdown", closePops);
  for (const p of pops) p.addEventListener("keydown", closePops);

  const speeds = SPEEDS.map((s) => press(String(s), () => speed(s), `${s} millimetres a second`));
  const fit = press("whole", () => {
    const { answer } = store.get();
    if (answer) speed(fitSpeed(view(), answer.span_ms));
  }, "The whole strip");
  const current = el("span", { class: "reading" });
  const gains = GAINS.map((gain) => press(String(gain), () => set({ mm_per_mv: gain }), `${gain} millimetres a millivolt`));
  const ladders = /** @type {const} */ (["plain", "full"]).map((l) => press(l, () => set({ ladder: l, ladder_chosen: true }), l === "plain" ? "Atria, node, ventricles" : "Every level of the conduction system"));
  const tabs = /** @type {const} */ (["timeline", "listing", "map"]).map((t) => el("button", {
    type: "button", role: "tab", id: `tab-${t}`, "aria-controls": t, onclick: () => store.set({ tab: t }), onkeydown: turn,
  }, `${t[0].toUpperCase()}${t.slice(1)}`));

  /** Arrows go from tab to tab, as in any list of tabs. @param {KeyboardEvent} e */
  function turn(e) {
    const by = e.key === "ArrowRight" ? 1 : e.key === "ArrowLeft" ? -1 : 0;
    const to = tabs[(tabs.indexOf(/** @type {any} */ (e.target)) + by + tabs.length) % tabs.length];
    if (by === 0) return;
    e.preventDefault();
    to.click();
    to.focus();
  }

  const bar = el("div", { class: "toolbar" },
    el("button", { type: "button", class: "drawer-open", id: "open-settings", onclick: () => store.set({ drawer: "settings" }) }, "Settings"),
    el("div", { class: "tabs", role: "tablist", "aria-label": "Timeline, listing or map" }, tabs),
    leads,
    lanes.root,
    group("Speed", speeds, fit, el("button", { type: "button", onclick: () => speed(view().mm_per_s / 1.25), "aria-label": "Squeeze time" }, "−"),
      el("button", { type: "button", onclick: () => speed(view().mm_per_s * 1.25), "aria-label": "Stretch time" }, "+"), current),
    group("Gain", gains),
    group("Ladder", ladders),
    el("div", { class: "group" }, tools),
    el("button", { type: "button", class: "drawer-open last", id: "open-account", onclick: () => store.set({ drawer: "account" }) }, "Account"));
  root.append(bar);
  const drawing = [leads, lanes.root, ...bar.querySelectorAll(".group")]; // of no use to the listing

  return {
    /** @param {State} state @param {Set<string>} changed */
    update(state, changed) {
      if (changed.has("tab")) {
        for (const b of tabs) {
          b.setAttribute("aria-selected", String(b.id === `tab-${state.tab}`));
          b.tabIndex = b.id === `tab-${state.tab}` ? 0 : -1;
        }
        for (const d of drawing) d.toggleAttribute("hidden", state.tab !== "timeline");
      }
      if (!changed.has("view") && !changed.has("answer")) return;
      const v = state.view;
      boxes.forEach((b) => {
        b.checked = v.leads.includes(b.value);
      });
      lanes.update(state);
      papers.forEach((b) => mark(b, b.textContent === v.paper));
      say(leadsName, v.paper !== "" ? v.paper : v.leads.length === 12 ? "all" : v.leads.length === 0 ? "none" : v.leads.length > 4 ? `${v.leads.length} of 12` : v.leads.join(", "));
      speeds.forEach((b, i) => mark(b, Math.abs(v.mm_per_s - SPEEDS[i]) < 0.01));
      mark(fit, state.answer !== null && Math.abs(v.mm_per_s - fitSpeed(v, state.answer.span_ms)) < 0.01);
      const named = [...speeds, fit].some((b) => b.getAttribute("aria-pressed") === "true");
      say(current, named ? "" : num(v.mm_per_s, v.mm_per_s < 10 ? 1 : 0));
      gains.forEach((b, i) => mark(b, v.mm_per_mv === GAINS[i]));
      ladders.forEach((b) => mark(b, b.textContent === v.ladder));
    },
    destroy() {
      document.removeEventListener("pointerdown", closePops);
      fill(bar);
      bar.remove();
    },
  };
}

/**
 * @param {string} text
 * @param {() => void} act
 * @param {string} title
 */
function press(text, act, title) {
  return el("button", { type: "button", onclick: act, title, "aria-pressed": "false" }, text);
}

/**
 * @param {HTMLButtonElement} b
 * @param {boolean} on
 */
function mark(b, on) {
  b.setAttribute("aria-pressed", String(on));
}

/**
 * @param {string} name
 * @param {...any} children
 */
function group(name, ...children) {
  return el("div", { class: "group", role: "group", "aria-label": name }, el("span", { class: "label" }, name), ...children.flat());
}
