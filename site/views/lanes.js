// The choice of lanes: which are shown, in which order.

import { el, fill, say } from "../base/dom.js";
import { arrange, FIXED, hide, kindOf, LANE_SETS, laneName, shift, show } from "../model/lanes.js";

/**
 * @typedef {import("../model/store.js").Store} Store
 * @typedef {import("../model/store.js").State} State
 * @typedef {import("../engine/wire.js").Catalogue} Catalogue
 */

const EGM_GAINS = [2.5, 5, 10, 20];

/**
 * @param {Store} store
 * @param {Catalogue} catalogue
 */
export function lanesPop(store, catalogue) {
  const lanes = () => store.get().view.lanes;
  /** @param {string[]} next @param {string} [name] */
  const put = (next, name = "") => store.change({ view: arrange(store.get().view, next) }, name);

  const order = el("ol", { class: "lane-order", "aria-label": "Lanes shown, from top to bottom" });
  const told = el("p", { class: "unseen", role: "status" });
  const boxes = [...FIXED.map((name) => ({ name, label: laneName(name, []) })), ...catalogue.lanes].map((lane) => el("input", {
    type: "checkbox", value: lane.name, title: lane.label,
    onchange: (/** @type {Event} */ e) => {
      const on = /** @type {HTMLInputElement} */ (e.target).checked;
      put(on ? show(lanes(), lane.name) : hide(lanes(), lane.name));
    },
  }));
  /** @param {string} kind @param {string} title @param {string} note */
  const part = (kind, title, note) => el("fieldset", { class: `lane-part lane-${kind}` }, el("legend", null, title), note ? el("p", null, note) : null,
    el("div", { class: "boxes" }, boxes.filter((b) => (FIXED.includes(b.value) ? "fixed" : kindOf(b.value)) === kind)
      .map((b) => el("label", { title: b.title }, b, laneName(b.value, catalogue.lanes).replace(/^AP /, "")))));
  const gains = EGM_GAINS.map((gain) => el("button", {
    type: "button", "aria-pressed": "false", title: `Electrograms at ${gain} millimetres a millivolt`,
    onclick: () => store.change({ view: { ...store.get().view, egm_gain: gain } }, ""),
  }, String(gain)));

  const count = el("span", { class: "chosen" });
  const pop = el("details", { class: "pop", id: "lanes" },
    el("summary", null, "Lanes ", count),
    el("div", { class: "pop-body lanes-body" },
      el("div", { class: "choices" }, LANE_SETS.map(([name, list]) => el("button", { type: "button", onclick: () => put(list) }, name))),
      el("div", { class: "lane-columns" },
        el("div", null, el("h3", null, "Shown, top to bottom"), order, told),
        el("div", null,
          part("fixed", "Besides the leads", ""),
          part("egm", "Electrograms", "Between two electrodes within the heart, through a recorder's 30 Hz high pass, cut off at 9 mm. HIS at twice the gain."),
          el("div", { class: "group", role: "group", "aria-label": "Gain of electrograms, mm a millivolt" }, el("span", { class: "label" }, "mm/mV"), gains),
          part("membrane", "Action potentials", "Of a site: phases 0 to 4 at its own times. A barred line is an impulse that came too early; the AV node stays refractory beyond its action potential. Dashed: 0 mV and a focus's threshold.")))));

  /** @param {string} lane @param {number} by */
  function move(lane, by) {
    const next = shift(lanes(), lane, by);
    if (next === lanes()) return;
    put(next, `move ${lane}`);
    say(told, `${laneName(lane, catalogue.lanes)} is now number ${next.indexOf(lane) + 1} of ${next.length}`);
  }

  /** @param {string[]} list */
  function paint(list) {
    const focus = document.activeElement instanceof HTMLElement && order.contains(document.activeElement) ? { lane: document.activeElement.dataset.lane, by: document.activeElement.dataset.by } : null;
    fill(order, list.map((lane, i) => {
      const name = laneName(lane, catalogue.lanes);
      /** @param {number} by @param {string} sign @param {string} word @param {boolean} end */
      const button = (by, sign, word, end) => el("button", {
        type: "button", "data-lane": lane, "data-by": String(by), "aria-label": `${name}: ${word}`, title: word, "aria-disabled": String(end), onclick: () => move(lane, by),
      }, sign);
      return el("li", null, el("span", null, name), button(-1, "↑", "up", i === 0), button(1, "↓", "down", i === list.length - 1),
        el("button", { type: "button", "aria-label": `${name}: hide`, title: "hide", onclick: () => put(hide(lanes(), lane)) }, "×"));
    }));
    if (focus) [...order.querySelectorAll("button")].find((b) => b.dataset.lane === focus.lane && b.dataset.by === focus.by)?.focus();
  }

  let shown = "";
  return {
    root: pop,
    /** @param {State} state */
    update(state) {
      const v = state.view;
      const key = v.lanes.join(" ");
      if (key !== shown) {
        shown = key;
        paint(v.lanes);
        for (const b of boxes) b.checked = v.lanes.includes(b.value);
        say(count, String(v.lanes.length));
      }
      gains.forEach((b, i) => b.setAttribute("aria-pressed", String(v.egm_gain === EGM_GAINS[i])));
      const device = state.answer?.device !== null;
      for (const b of boxes) {
        if (["device", "egm:A", "egm:V"].includes(b.value)) b.disabled = state.answer !== null && !device;
      }
    },
  };
}
