// For a room: what comes next is covered, on the sheet and wherever else it would be
// told. The room predicts, and the beats are revealed one by one.

import { el, say } from "../base/dom.js";
import { seconds } from "../base/format.js";
import { magnify } from "../base/scale.js";
import { stopFrom, stops } from "../model/cover.js";
import { onStrip, shown } from "../model/view.js";

/**
 * @typedef {import("../model/store.js").Store} Store
 * @typedef {import("../model/store.js").State} State
 */

const LARGER = 1.35;

/**
 * @param {HTMLElement} root
 * @param {Store} store
 * @param {() => void} fullScreen
 */
export function presentView(root, store, fullScreen) {
  const ask = el("p", { class: "ask", role: "status" });
  const back = el("button", { type: "button", id: "present-back", title: "←", onclick: () => step(-1, true) }, "Back");
  const next = el("button", { type: "button", id: "present-next", title: "Space or →", onclick: () => step(1, true) }, "Reveal the next beat");
  const wave = el("button", { type: "button", id: "present-wave", title: "Shift →", onclick: () => step(1, false) }, "one wave");
  const all = el("button", { type: "button", id: "present-all", title: "End", onclick: () => to(Infinity) }, "Reveal all");
  const bar = el("div", { class: "present", role: "group", "aria-label": "Presentation" }, ask,
    el("div", { class: "present-tools" }, back, next, wave, all,
      el("button", { type: "button", title: "Z", onclick: fullScreen }, "Full screen"),
      el("button", { type: "button", id: "present-leave", title: "Esc", onclick: leave }, "Leave")));
  root.append(bar);
  root.hidden = true;
  let opener = /** @type {Element | null} */ (null);

  const span = () => store.get().answer?.span_ms ?? 0;
  const places = () => {
    const { answer } = store.get();
    return answer ? stops(answer.overview, answer.span_ms) : [];
  };

  /** Covers what comes after an instant, and keeps the edge well on the sheet. @param {number} t */
  function to(t) {
    const { view } = store.get();
    const until_ms = Math.min(t, span());
    const width = shown(view);
    const at = (until_ms - view.t0_ms) / width;
    const t0_ms = at > 0.8 || at < 0.1 ? until_ms - 0.5 * width : view.t0_ms;
    store.set({ present: { until_ms }, view: onStrip({ ...view, t0_ms }, span()) });
  }

  /** @param {1 | -1} way @param {boolean} beats */
  function step(way, beats) {
    const { present } = store.get();
    if (present) to(stopFrom(places(), present.until_ms, way, beats, span()));
  }

  /** Begins with what stands before the selected event, or with the left third of what is shown. */
  function enter() {
    const { answer, view, selected, scene } = store.get();
    if (!answer) return;
    opener = document.activeElement;
    const chosen = scene?.times.find(([id]) => id === selected)?.[1];
    const t = chosen ?? view.t0_ms + shown(view) / 3;
    magnify(LARGER);
    store.set({ selected: 0, lit: [], tab: "timeline", drawer: "" });
    to(stopFrom(places(), t + 1, -1, true, span()));
  }

  function leave() {
    magnify(1);
    store.set({ present: null, view: { ...store.get().view } });
    if (document.fullscreenElement) document.exitFullscreen();
    /** @type {HTMLElement | null} */ (opener)?.focus?.();
  }

  /** Its keys go before all others: nothing else may select, search or undo meanwhile. @param {KeyboardEvent} e */
  function keys(e) {
    if (!store.get().present || e.ctrlKey || e.metaKey || e.altKey || e.key === "Tab" || document.querySelector("dialog[open]")) return;
    const pressed = document.activeElement instanceof HTMLButtonElement && bar.contains(document.activeElement) && document.activeElement !== next;
    if (e.key === "Enter" || (e.key === " " && pressed)) return; // the button's own
    /** @type {Record<string, () => void>} */
    const acts = {
      " ": () => step(1, true),
      ArrowRight: () => step(1, !e.shiftKey),
      PageDown: () => step(1, true), // as small remote controls send it
      ArrowLeft: () => step(-1, !e.shiftKey),
      PageUp: () => step(-1, true),
      Home: () => to(stopFrom(places(), -1, 1, true, span())),
      End: () => to(Infinity),
      Escape: leave,
      t: leave,
      z: fullScreen,
    };
    e.stopPropagation();
    const act = acts[e.key.length === 1 ? e.key.toLowerCase() : e.key];
    if (!act) return;
    e.preventDefault();
    act();
  }
  document.addEventListener("keydown", keys, true);

  return {
    /** Begins the presentation, or ends it. */
    toggle: () => (store.get().present ? leave() : enter()),

    /** @param {State} state @param {Set<string>} changed */
    update(state, changed) {
      if (!changed.has("present") && !changed.has("answer")) return;
      const { present, answer } = state;
      const was = !root.hidden;
      root.hidden = present === null;
      document.body.classList.toggle("presenting", present !== null);
      document.body.classList.toggle("covered", present !== null && present.until_ms < (answer?.span_ms ?? 0));
      if (!present || !answer) return;
      const whole = present.until_ms >= answer.span_ms;
      say(ask, whole ? answer.statement.map((c) => c.text).join("") : `What comes after ${seconds(present.until_ms).replace(/\d s$/, " s")}?`);
      next.disabled = wave.disabled = all.disabled = whole;
      if (!was) next.focus();
    },
    destroy() {
      document.removeEventListener("keydown", keys, true);
      bar.remove();
    },
  };
}
